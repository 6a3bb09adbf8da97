#ifndef PHRASEWELD_BASE_PARALLEL_SORT_H_
#define PHRASEWELD_BASE_PARALLEL_SORT_H_

#include <algorithm>
#include <cstddef>
#include <vector>

#include "absl/status/status.h"
#include "base/parallel.h"
#include "base/status.h"

namespace phraseweld {

// Sorts `items` on all lanes: slices side by side, then their halves together, pair by pair. `less`
// is a total order in which no two items are equal, so that the result does not depend on lanes; it
// is called from several threads at once.
template <typename Item, typename Less>
absl::Status SortInLanes(Lanes& lanes, std::vector<Item>* items, const Less& less) {
  constexpr size_t kLeastSlice = 2048;  // below, handing over costs more than sorting
  size_t slices = 1;
  while (slices < static_cast<size_t>(lanes.lanes()) * 4 &&
         items->size() / (slices * 2) >= kLeastSlice) {
    slices *= 2;
  }
  const auto at = [&](size_t slice) {
    return items->begin() + static_cast<ptrdiff_t>(items->size() * slice / slices);
  };
  PW_RETURN_IF_ERROR(lanes.ForEach(slices, [&](int, size_t slice) {
    std::sort(at(slice), at(slice + 1), less);
    return absl::OkStatus();
  }));
  for (size_t width = 1; width < slices; width *= 2) {
    PW_RETURN_IF_ERROR(lanes.ForEach(slices / (width * 2), [&](int, size_t pair) {
      const size_t first = pair * width * 2;
      std::inplace_merge(at(first), at(first + width), at(first + width * 2), less);
      return absl::OkStatus();
    }));
  }
  return absl::OkStatus();
}

}  // namespace phraseweld

#endif  // PHRASEWELD_BASE_PARALLEL_SORT_H_
