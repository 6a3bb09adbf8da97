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

  bool HasLeft(uint32_t type) const { return lefts_.Has(type); }

  uint32_t Find(const Slot& slot) const {
    if (!lefts_.Has(slot.left)) return kAbsent;
    const uint64_t hash = Hash(slot);
    const uint64_t bit = (hash >> 32) & filter_mask_;
    if (((filter_[bit >> 6] >> (bit & 63)) & 1) == 0) return kAbsent;
    for (size_t cell = hash & mask_; cells_[cell].place != kAbsent; cell = (cell + 1) & mask_) {
      if (cells_[cell].slot == slot) return cells_[cell].place;
    }
    return kAbsent;
  }

 private:
  // Bits of the filter a slot: at 16 about one slot in twenty gets through by chance, and the
  // filter of 100,000 slots fits the second-level cache.
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

// Where the content token after a content token stands, in old stream terms.
struct NextContent {
  uint64_t at = 0;      // of the token; meaningless where has_slot is false
  uint64_t bridge = 0;  // code of the function words between
  bool has_slot = false;
};

// Looks from the content token at `at` (its first entry) for the right side of its slot.
inline NextContent FindRight(const Entry* stream, uint64_t at, uint64_t end,
                             const SlotRules& rules) {
  const uint32_t function_types = rules.codes.function_types();
  uint64_t digits = 0;
  int between = 0;
  for (++at; at < end; ++at) {
    const Entry entry = stream[at];
    if (!IsToken(entry)) {
      if (IsMark(entry)) break;
      continue;
    }
    if (rules.barriers != nullptr && rules.barriers->HasChecked(entry)) break;
    if (entry >= function_types) return {at, rules.codes.Code(between, digits), true};
    if (++between > rules.codes.bridge()) break;
    digits = digits * function_types + entry;
  }
  return {};
}

// Calls on_slot(place in the index, slot, left_at, right_at) for every slot of stream[begin, end)
// that is in `index`, in order, and on_document_end(at) for every end of a document. The same slots
// as ScanSlots() finds, for about a third of the time where the index is short: entries are first
// sifted by a bit a type, without a branch that the processor would have to guess.
template <typename OnSlot, typename OnDocumentEnd>
void ScanListedSlots(const Entry* stream, uint64_t begin, uint64_t end, const SlotRules& rules,
                     const SlotIndex& index, OnSlot&& on_slot, OnDocumentEnd&& on_document_end) {
  constexpr uint64_t kSift = 1024;
  uint32_t sifted[kSift];
  for (uint64_t base = begin; base < end; base += kSift) {
    const auto size = static_cast<uint32_t>(std::min(kSift, end - base));
    uint32_t found = 0;
    for (uint32_t i = 0; i < size; ++i) {
      const Entry entry = stream[base + i];
      const bool token = IsToken(entry);
      const bool left = token & index.HasLeft(token ? entry : 0);
      sifted[found] = i;
      found += static_cast<uint32_t>(left | (entry == kDocumentEnd));
    }
    for (uint32_t i = 0; i < found; ++i) {
      const uint64_t at = base + sifted[i];
      const Entry left = stream[at];
      if (left == kDocumentEnd) {
        on_document_end(at);
        continue;
      }
      const NextContent next = FindRight(stream, at, end, rules);
      if (!next.has_slot) continue;
      const Slot slot{left, stream[next.at], next.bridge};
      const uint32_t place = index.Find(slot);
      if (place != SlotIndex::kAbsent) on_slot(place, slot, at, next.at);
    }
  }
}

}  // namespace phraseweld

#endif  // PHRASEWELD_BASE_SLOT_INDEX_H_
