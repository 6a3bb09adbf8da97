#ifndef PHRASEWELD_BASE_SLOT_INDEX_H_
#define PHRASEWELD_BASE_SLOT_INDEX_H_

#include <algorithm>
#include <bit>
#include <cstdint>
#include <vector>

#include "absl/types/span.h"
#include "base/hash.h"
#include "base/slots.h"

namespace phraseweld {

// Slot type -> its place in a list, for a list that is small beside the stream. Nearly all slots of
// a stream are not in the list: two bits, one for the left type and one for the right, turn most of
// them away before anything is hashed.
class SlotIndex {
 public:
  static constexpr uint32_t kAbsent = 0xFFFFFFFFu;

  // `type_limit`: ids of the stream are below it. `slot_of(i)` gives the i-th of `size` distinct
  // slots; size < kAbsent.
  template <typename SlotOf>
  SlotIndex(size_t size, uint32_t type_limit, SlotOf&& slot_of) {
    lefts_.Resize(type_limit);
    rights_.Resize(type_limit);
    cells_.resize(std::bit_ceil(std::max<size_t>(size * 2, 16)));
    mask_ = cells_.size() - 1;
    for (size_t i = 0; i < size; ++i) {
      const Slot& slot = slot_of(i);
      lefts_.Set(slot.left);
      rights_.Set(slot.right);
      size_t cell = Hash(slot) & mask_;
      while (cells_[cell].place != kAbsent) cell = (cell + 1) & mask_;
      cells_[cell] = {slot, static_cast<uint32_t>(i)};
    }
  }

  uint32_t Find(const Slot& slot) const {
    if (!lefts_.Has(slot.left) || !rights_.Has(slot.right)) return kAbsent;
    for (size_t cell = Hash(slot) & mask_; cells_[cell].place != kAbsent;
         cell = (cell + 1) & mask_) {
      if (cells_[cell].slot == slot) return cells_[cell].place;
    }
    return kAbsent;
  }

  uint64_t memory() const { return cells_.size() * sizeof(Cell); }

 private:
  struct Cell {
    Slot slot;
    uint32_t place = kAbsent;
  };
  static uint64_t Hash(const Slot& slot) {
    return Mix64(((uint64_t{slot.left} << 32) | slot.right) + slot.bridge * 0x9E3779B97F4A7C15u);
  }
  TypeBits lefts_, rights_;
  std::vector<Cell> cells_;
  size_t mask_ = 0;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_BASE_SLOT_INDEX_H_
