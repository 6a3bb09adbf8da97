#include "run/recount.h"

#include <algorithm>
#include <tuple>
#include <vector>

#include "absl/strings/str_cat.h"
#include "base/status.h"

namespace phraseweld {
namespace {

using Row = std::tuple<uint32_t, uint64_t, uint32_t, uint64_t, uint64_t, uint64_t, uint64_t>;

absl::StatusOr<std::vector<Row>> AllRows(Lanes& lanes, SlotCounter* counter) {
  std::vector<std::vector<Row>> parts(static_cast<size_t>(lanes.lanes()));
  PW_RETURN_IF_ERROR(
      counter->Visit(lanes, 1, [&](int lane, const Slot& slot, const SlotTable& table) {
        parts[static_cast<size_t>(lane)].emplace_back(slot.left, slot.bridge, slot.right, table.n,
                                                      table.left, table.right, table.total);
      }));
  std::vector<Row> rows;
  for (const auto& part : parts) rows.insert(rows.end(), part.begin(), part.end());
  std::sort(rows.begin(), rows.end());
  return rows;
}

}  // namespace

absl::Status CompareCounts(int pass, Lanes& lanes, SlotCounter* kept, SlotCounter* fresh) {
  PW_ASSIGN_OR_RETURN(std::vector<Row> of_kept, AllRows(lanes, kept));
  PW_ASSIGN_OR_RETURN(std::vector<Row> of_fresh, AllRows(lanes, fresh));
  if (kept->slots() != fresh->slots() || kept->slot_types() != fresh->slot_types() ||
      of_kept.size() != of_fresh.size()) {
    return absl::InternalError(absl::StrCat(
        "pass ", pass, ": ", kept->slots(), " slots of ", kept->slot_types(),
        " types by differences, ", fresh->slots(), " of ", fresh->slot_types(), " by recount"));
  }
  for (size_t i = 0; i < of_kept.size(); ++i) {
    if (of_kept[i] == of_fresh[i]) continue;
    return absl::InternalError(
        absl::StrCat("pass ", pass, ": counts of slot type (", std::get<0>(of_fresh[i]), ", ",
                     std::get<1>(of_fresh[i]), ", ", std::get<2>(of_fresh[i]),
                     ") differ between differences and recount"));
  }
  return absl::OkStatus();
}

}  // namespace phraseweld
