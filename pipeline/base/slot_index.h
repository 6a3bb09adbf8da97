#ifndef PHRASEWELD_BASE_SLOT_INDEX_H_
#define PHRASEWELD_BASE_SLOT_INDEX_H_

#include <algorithm>
#include <array>
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
    roles_.resize((uint64_t{type_limit} + 1 + 15) / 16);
    SetRole(inside_, kBehind);
    filter_.resize(std::bit_ceil(std::max<size_t>(size * kFilterBits / 64, 16)));
    filter_mask_ = filter_.size() * 64 - 1;
    cells_.resize(std::bit_ceil(std::max<size_t>(size * 2, 16)));
    mask_ = cells_.size() - 1;
    constexpr size_t kAhead = 16;
    for (size_t i = 0; i < size; ++i) {
      if (i + kAhead < size) {
        const uint64_t ahead = Hash(slot_of(i + kAhead));
        PrefetchFilter(ahead);
        PrefetchCell(ahead);
      }
      const Slot& slot = slot_of(i);
      SetRole(slot.left, kLeft);
      SetRole(slot.bridge == 0 ? slot.right : codes.First(slot.bridge), kBehind);
      const uint64_t hash = Hash(slot);
      const uint64_t bit = FilterBit(hash);
      filter_[bit >> 6] |= uint64_t{1} << (bit & 63);
      size_t cell = hash & mask_;
      while (cells_[cell].place != kAbsent) cell = (cell + 1) & mask_;
      cells_[cell] = {slot, static_cast<uint32_t>(i)};
    }
  }

  // Bit 0: kLeft, bit 1: kBehind; what is above them means nothing. For a mark as for an entry
  // inside a token.
  uint32_t Roles(Entry entry) const {
    const uint32_t type = std::min(entry, inside_);
    return roles_[type >> 4] >> ((2 * type) & 31);
  }

  uint32_t Find(const Slot& slot) const {
    const uint64_t hash = Hash(slot);
    return MayHave(hash) ? FindCell(slot, hash) : kAbsent;
  }

  // Find() in three steps, each of which waits for memory unless it was asked for ahead.
  static uint64_t Hash(const Slot& slot) {
    return Mix64(((uint64_t{slot.left} << 32) | slot.right) + slot.bridge * 0x9E3779B97F4A7C15u);
  }
  void PrefetchFilter(uint64_t hash) const { __builtin_prefetch(&filter_[FilterBit(hash) >> 6]); }
  bool MayHave(uint64_t hash) const {
    const uint64_t bit = FilterBit(hash);
    return ((filter_[bit >> 6] >> (bit & 63)) & 1) != 0;
  }
  void PrefetchCell(uint64_t hash) const { __builtin_prefetch(&cells_[hash & mask_]); }
  uint32_t FindCell(const Slot& slot, uint64_t hash) const {
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
  uint64_t FilterBit(uint64_t hash) const { return (hash >> 32) & filter_mask_; }
  void SetRole(uint32_t type, uint32_t role) { roles_[type >> 4] |= role << (2 * (type & 15)); }

  HugeVector<uint32_t> roles_;  // two bits a type
  const uint32_t inside_;       // stands for entries inside tokens
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

// Looks slots up in an index, a group at a time: what a step reads is asked for a whole group
// ahead, since the tables of an index of many slots lie in no cache.
class SlotLookup {
 public:
  static constexpr size_t kGroup = 64;

  SlotLookup(const Entry* stream, uint64_t end, const SlotRules& rules, const SlotIndex& index)
      : stream_(stream), end_(end), rules_(rules), index_(index) {}

  // Calls on_slot(place, slot, left_at, right_at) for those of the entries at `places` (at most
  // kGroup, ascending) that are left tokens of listed slots, and on_document_end(at) for ends of
  // documents, in order. Before on_slot for any slot of the group, expect(place) for each of them.
  template <typename OnSlot, typename OnDocumentEnd, typename Expect>
  void Group(const uint64_t* places, size_t size, OnSlot&& on_slot, OnDocumentEnd&& on_document_end,
             const Expect& expect) {
    size_t slots = 0, ends = 0;
    for (size_t i = 0; i < size; ++i) {
      const uint64_t at = places[i];
      const Entry left = stream_[at];
      if (left == kDocumentEnd) {
        ends_[ends++] = at;
        continue;
      }
      const NextContent next = FindRight(stream_, at, end_, rules_);
      if (!next.has_slot) continue;
      Found& found = found_[slots++];
      found.slot = {left, stream_[next.at], next.bridge};
      found.left_at = at;
      found.right_at = next.at;
      found.hash = SlotIndex::Hash(found.slot);
      index_.PrefetchFilter(found.hash);
    }
    size_t kept = 0;
    for (size_t i = 0; i < slots; ++i) {
      if (!index_.MayHave(found_[i].hash)) continue;
      index_.PrefetchCell(found_[i].hash);
      kept_[kept++] = &found_[i];
    }
    for (size_t i = 0; i < kept; ++i) {
      kept_[i]->place = index_.FindCell(kept_[i]->slot, kept_[i]->hash);
      if (kept_[i]->place != SlotIndex::kAbsent) expect(kept_[i]->place);
    }
    size_t ended = 0;
    for (size_t i = 0; i < kept; ++i) {
      const Found& found = *kept_[i];
      if (found.place == SlotIndex::kAbsent) continue;
      while (ended < ends && ends_[ended] < found.left_at) on_document_end(ends_[ended++]);
      on_slot(found.place, found.slot, found.left_at, found.right_at);
    }
    while (ended < ends) on_document_end(ends_[ended++]);
  }

 private:
  struct Found {
    Slot slot;
    uint64_t left_at = 0, right_at = 0, hash = 0;
    uint32_t place = 0;
  };
  const Entry* stream_;
  const uint64_t end_;
  const SlotRules& rules_;
  const SlotIndex& index_;
  std::array<Found, kGroup> found_;
  std::array<Found*, kGroup> kept_;
  std::array<uint64_t, kGroup> ends_;
};

struct ExpectNothing {
  void operator()(uint32_t) const {}
};

// Calls on_slot(place in the index, slot, left_at, right_at) for every slot of stream[begin, end)
// that is in `index`, in order, and on_document_end(at) for every end of a document. The same slots
// as ScanSlots() finds, for a fraction of the time where the index is short: entries are first
// sifted by two bits a type, without a branch that the processor would have to guess. Calls
// expect(place) some time before on_slot, which may ask for what on_slot is going to read. Of
// the stream on_slot may change what stands up to its slot's left token: the rest is yet to be
// read.
template <typename OnSlot, typename OnDocumentEnd, typename Expect = ExpectNothing>
void ScanListedSlots(const Entry* stream, uint64_t begin, uint64_t end, const SlotRules& rules,
                     const SlotIndex& index, OnSlot&& on_slot, OnDocumentEnd&& on_document_end,
                     const Expect& expect = Expect()) {
  constexpr uint64_t kSift = 1024;
  uint64_t sifted[kSift + 1];
  SlotLookup lookup(stream, end, rules, index);
  uint32_t before_is_left = 0;  // whether the entry before may be the left token of a listed slot
  for (uint64_t base = begin; base < end; base += kSift) {
    const uint64_t sift_end = std::min(base + kSift, end);
    size_t found = 0;
    for (uint64_t at = base; at < sift_end; ++at) {
      const Entry entry = stream[at];
      const uint32_t roles = index.Roles(entry);
      const uint32_t document_end = entry == kDocumentEnd;
      // What stands before a document's end is no left token, for nothing follows it.
      sifted[found] = at - 1 + document_end;
      const uint32_t is_behind = (roles / SlotIndex::kBehind) & (entry < kFirstMark);
      found += (before_is_left & is_behind) | document_end;
      before_is_left = roles & SlotIndex::kLeft;
    }
    for (size_t i = 0; i < found; i += SlotLookup::kGroup) {
      lookup.Group(&sifted[i], std::min(found - i, SlotLookup::kGroup), on_slot, on_document_end,
                   expect);
    }
  }
}

}  // namespace phraseweld

#endif  // PHRASEWELD_BASE_SLOT_INDEX_H_
