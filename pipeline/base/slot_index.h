#ifndef PHRASEWELD_BASE_SLOT_INDEX_H_
#define PHRASEWELD_BASE_SLOT_INDEX_H_

#include <algorithm>
#include <bit>
#include <cstdint>
#include <vector>

#include "absl/types/span.h"
#include "base/hash.h"
#include "base/huge_pages.h"
#include "base/slots.h"

namespace phraseweld {

// Slot type -> its place in a list, for a list that is small beside the stream. Nearly all slots of
// a stream are not in the list, and the table is larger than the near caches, so two smaller things
// stand before it: two bits a type, and a bit table by hash (filters that may let a wrong slot
// through, never turn a right one away).
class SlotIndex {
 public:
  static constexpr uint32_t kAbsent = 0xFFFFFFFFu;
  // What an entry may be to a slot of the list.
  static constexpr uint32_t kLeft = 1;    // its left token
  static constexpr uint32_t kBehind = 2;  // what follows its left token's first entry

  // `type_limit`: ids of the stream are below it. `slot_of(i)` gives the i-th of `size` distinct
  // slots; size < kAbsent.
  template <typename SlotOf>
  SlotIndex(size_t size, uint32_t type_limit, const BridgeCodes& codes, SlotOf&& slot_of)
      : inside_(type_limit) {
    roles_.resize((uint64_t{type_limit} + 2 + 15) / 16);
    SetRole(inside_, kBehind);
    filter_.resize(std::bit_ceil(std::max<size_t>(size * kFilterBits / 64, 16)));
    filter_mask_ = filter_.size() * 64 - 1;
    cells_.resize(std::bit_ceil(std::max<size_t>(size * 2, 16)));
    mask_ = cells_.size() - 1;
    for (size_t i = 0; i < size; ++i) {
      const Slot& slot = slot_of(i);
      SetRole(slot.left, kLeft);
      SetRole(slot.bridge == 0 ? slot.right : codes.First(slot.bridge), kBehind);
      const uint64_t hash = Hash(slot);
      const uint64_t bit = (hash >> 32) & filter_mask_;
      filter_[bit >> 6] |= uint64_t{1} << (bit & 63);
      size_t cell = hash & mask_;
      while (cells_[cell].place != kAbsent) cell = (cell + 1) & mask_;
      cells_[cell] = {slot, static_cast<uint32_t>(i)};
    }
  }

  uint32_t Roles(Entry entry) const {
    // Masks, for a compiler makes branches of conditions here, and they cannot be foretold.
    const uint32_t no_token = -(entry >> 31);
    const uint32_t other = inside_ + IsMark(entry);
    const uint32_t type = (entry & ~no_token) | (other & no_token);
    return (roles_[type >> 4] >> (2 * (type & 15))) & 3;
  }

  uint32_t Find(const Slot& slot) const {
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
  void SetRole(uint32_t type, uint32_t role) { roles_[type >> 4] |= role << (2 * (type & 15)); }

  HugeVector<uint32_t> roles_;  // two bits a type
  const uint32_t inside_;       // stands for entries inside tokens; the next one for marks
  HugeVector<uint64_t> filter_;
  uint64_t filter_mask_ = 0;
  HugeVector<Cell> cells_;
  size_t mask_ = 0;
};

// Where a slot of an index stands.
struct FoundSlot {
  uint64_t left_at = 0;
  uint32_t reach = 0;  // right_at - left_at
  uint32_t place = 0;  // in the index
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
// as ScanSlots() finds, for a fraction of the time where the index is short: entries are first
// sifted by two bits a type, without a branch that the processor would have to guess.
template <typename OnSlot, typename OnDocumentEnd>
void ScanListedSlots(const Entry* stream, uint64_t begin, uint64_t end, const SlotRules& rules,
                     const SlotIndex& index, OnSlot&& on_slot, OnDocumentEnd&& on_document_end) {
  constexpr uint64_t kSift = 1024;
  uint32_t sifted[kSift];       // places from `base`, plus one
  uint32_t before_is_left = 0;  // whether the entry before may be the left token of a listed slot
  for (uint64_t base = begin; base < end; base += kSift) {
    const auto size = static_cast<uint32_t>(std::min(kSift, end - base));
    uint32_t found = 0;
    for (uint32_t i = 0; i < size; ++i) {
      const Entry entry = stream[base + i];
      const uint32_t roles = index.Roles(entry);
      const uint32_t document_end = entry == kDocumentEnd;
      sifted[found] = i + document_end;
      found += (before_is_left & (roles / SlotIndex::kBehind)) | document_end;
      before_is_left = roles & SlotIndex::kLeft;
    }
    for (uint32_t i = 0; i < found; ++i) {
      const uint64_t at = base + sifted[i] - 1;
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
