#ifndef PHRASEWELD_BASE_STREAM_H_
#define PHRASEWELD_BASE_STREAM_H_

#include <algorithm>
#include <cstdint>
#include <functional>
#include <vector>

#include "base/entry.h"

namespace phraseweld {

// The token stream and how it is cut for work side by side.
struct StreamView {
  Entry* entries = nullptr;
  uint64_t size = 0;
  // Ascending, from 0 to size; at each (but the last) a run begins: the entry before it is a mark.
  std::vector<uint64_t> cuts = {0};
  // Gives back the resident pages of a range that a scan is done with; may do nothing.
  std::function<void(uint64_t begin, uint64_t end)> release = [](uint64_t, uint64_t) {};

  size_t chunks() const { return cuts.size() - 1; }

  // Cuts the stream about every `aim` entries.
  void Cut(uint64_t aim) {
    cuts = {0};
    while (cuts.back() < size) {
      uint64_t at = std::min(size, cuts.back() + std::max<uint64_t>(aim, 1));
      while (at < size && !IsMark(entries[at - 1])) ++at;
      release(cuts.back(), at);
      cuts.push_back(at);
    }
  }

  // `parts` ranges of consecutive chunks, about equal in size: [first, second) as entries.
  std::vector<std::pair<uint64_t, uint64_t>> Parts(size_t parts) const {
    std::vector<std::pair<uint64_t, uint64_t>> ranges;
    for (size_t i = 0; i < parts; ++i) {
      ranges.emplace_back(cuts[chunks() * i / parts], cuts[chunks() * (i + 1) / parts]);
    }
    return ranges;
  }
};

}  // namespace phraseweld

#endif  // PHRASEWELD_BASE_STREAM_H_
