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
// a stream are not in the list, and the table is larger than the near caches, so two smaller things
// stand before it: a bit a left type, and a bit table by hash (a filter that may let a wrong slot
// through, never turns a right one away).
class SlotIndex {
 public:
  static constexpr uint32_t kAbsent = 0xFFFFFFFFu;

  // `type_limit`: ids of the stream are below it. `slot_of(i)` gives the i-th of `size` distinct
  // slots; size < kAbsent.
  template <typename SlotOf>
  SlotIndex(size_t size, uint32_t type_limit, SlotOf&& slot_of) {
    lefts_.Resize(type_limit);
    filter_.resize(std::bit_ceil(std::max<size_t>(size * kFilterBits / 64, 16)));
    filter_mask_ = filter_.size() * 64 - 1;
    cells_.resize(std::bit_ceil(std::max<size_t>(size * 2, 16)));
    mask_ = cells_.size() - 1;
    for (size_t i = 0; i < size; ++i) {
      const Slot& slot = slot_of(i);
      lefts_.Set(slot.left);
      const uint64_t hash = Hash(slot);
      const uint64_t bit = (hash >> 32) & filter_mask_;
      filter_[bit >> 6] |= uint64_t{1} << (bit & 63);
      size_t cell = hash & mask_;
      while (cells_[cell].place != kAbsent) cell = (cell + 1) & mask_;
      cells_[cell] = {slot, static_cast<uint32_t>(i)};
    }
  }

  uint32_t Find(const Slot& slot) const {
    if (!lefts_.Has(slot.left)) return kAbsent;
    const uint64_t hash = Hash(slot);
    const uint64_t bit = (hash >> 32) & filter_mask_;
    if (((filter_[bit >> 6] >> (bit & 63)) & 1) == 0) return kAbsent;
    for (size_t cell = hash & mask_; cells_[cell].place != kAbsent;
         cell = (cell + 1) & mask_) {
      if (cells_[cell].slot == slot) return cells_[cell].place;
    }
    return kAbsent;
  }

 private:
  // Bits of the filter a slot: at 16 about one slot in twenty gets through by chance, and the filter
  // of 100,000 slots fits the second-level cache.
  static constexpr size_t kFilterBits = 16;
  struct Cell {
    Slot slot;
    uint32_t place = kAbsent;
  };
  static uint64_t Hash(const Slot& slot) {
    return Mix64(((uint64_t{slot.left} << 32) | slot.right) + slot.bridge * 0x9E3779B97F4A7C15u);
  }
  TypeBits lefts_;
  std::vector<uint64_t> filter_;
  uint64_t filter_mask_ = 0;
  std::vector<Cell> cells_;
  size_t mask_ = 0;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_BASE_SLOT_INDEX_H_
