#ifndef PHRASEWELD_BASE_SLOTS_H_
#define PHRASEWELD_BASE_SLOTS_H_

#include <algorithm>
#include <array>
#include <cstdint>
#include <vector>

#include "base/entry.h"

namespace phraseweld {

// A slot type: two content types and the code of the function words between them.
struct Slot {
  uint32_t left = 0;
  uint32_t right = 0;
  uint64_t bridge = 0;
  friend bool operator==(const Slot&, const Slot&) = default;
};

inline constexpr int kMostBridge = 4;

// Function words have the ids below `function_types`, so a sequence of k of them is a number with k
// digits to that base. Its code is that number plus the count of all shorter sequences; 0 is the
// empty bridge. No dictionary of bridges is needed and codes do not depend on the corpus.
class BridgeCodes {
 public:
  BridgeCodes() = default;
  // function_types^bridge must stay below 2^62; Fits() tells.
  BridgeCodes(uint32_t function_types, int bridge)
      : function_types_(function_types), bridge_(function_types == 0 ? 0 : bridge) {
    uint64_t power = 1, offset = 0;
    for (int length = 0; length <= bridge_; ++length) {
      offset_[static_cast<size_t>(length)] = offset;
      offset += power;
      power *= function_types_;
    }
    codes_ = offset;
  }
  static bool Fits(uint32_t function_types, int bridge) {
    double codes = 0, power = 1;
    for (int length = 0; length <= bridge; ++length, power *= function_types) codes += power;
    return codes < 4.6e18;
  }
  uint32_t function_types() const { return function_types_; }
  int bridge() const { return bridge_; }
  uint64_t codes() const { return codes_; }
  uint64_t Code(int length, uint64_t digits) const {
    return offset_[static_cast<size_t>(length)] + digits;
  }
  int Length(uint64_t code) const {
    int length = bridge_;
    while (offset_[static_cast<size_t>(length)] > code) --length;
    return length;
  }
  // The first word of a bridge that is not empty.
  uint32_t First(uint64_t code) const {
    const int length = Length(code);
    uint64_t digits = code - offset_[static_cast<size_t>(length)];
    for (int i = 1; i < length; ++i) digits /= function_types_;
    return static_cast<uint32_t>(digits);
  }
  std::vector<uint32_t> Words(uint64_t code) const {
    int length = Length(code);
    uint64_t digits = code - offset_[static_cast<size_t>(length)];
    std::vector<uint32_t> words(static_cast<size_t>(length));
    for (int i = length - 1; i >= 0; --i, digits /= function_types_) {
      words[static_cast<size_t>(i)] = static_cast<uint32_t>(digits % function_types_);
    }
    return words;
  }

 private:
  uint32_t function_types_ = 0;
  int bridge_ = 0;
  uint64_t codes_ = 1;
  std::array<uint64_t, kMostBridge + 1> offset_{};
};

// One bit a type.
class TypeBits {
 public:
  void Resize(uint32_t types) { words_.resize((types + 63) / 64, 0); }
  void Clear() { std::fill(words_.begin(), words_.end(), 0); }
  void Set(uint32_t type) { words_[type >> 6] |= uint64_t{1} << (type & 63); }
  bool Has(uint32_t type) const { return (words_[type >> 6] >> (type & 63)) & 1; }
  bool HasChecked(uint32_t type) const { return (type >> 6) < words_.size() && Has(type); }

 private:
  std::vector<uint64_t> words_;
};

// What makes a slot. `barriers`, where given, are the single-word types that end a run (numbers
// that may stand nowhere).
struct SlotRules {
  BridgeCodes codes;
  const TypeBits* barriers = nullptr;
};

namespace slots_internal {

template <bool kBarriers, typename OnSlot, typename OnMark>
void Scan(const Entry* stream, uint64_t begin, uint64_t end, const SlotRules& rules,
          OnSlot&& on_slot, OnMark&& on_mark) {
  const uint32_t function_types = rules.codes.function_types();
  const int bridge = rules.codes.bridge();
  bool has_left = false;
  uint32_t left = 0;
  uint64_t left_at = 0, digits = 0;
  int between = 0;
  for (uint64_t at = begin; at < end; ++at) {
    const Entry entry = stream[at];
    if (IsToken(entry)) {
      if (kBarriers && rules.barriers->HasChecked(entry)) {
        if (has_left) on_mark(at, kBreak);
        has_left = false;
      } else if (entry < function_types) {
        digits = digits * function_types + entry;
        ++between;
      } else {
        if (has_left) {
          if (between <= bridge) {
            on_slot(Slot{left, entry, rules.codes.Code(between, digits)}, left_at, at);
          } else {
            on_mark(at, kBreak);
          }
        }
        has_left = true;
        left = entry;
        left_at = at;
        between = 0;
        digits = 0;
      }
    } else if (IsMark(entry)) {
      has_left = false;
      on_mark(at, entry);
    }
  }
}

}  // namespace slots_internal

// Calls on_slot(slot, left_at, right_at) for every slot of stream[begin, end) in order, and
// on_mark(at, mark) for every mark, and with kBreak also where two content tokens follow each other
// without a slot between them. A slot shares its left token with the slot before it unless on_mark
// was called in between. `begin` must be where a run begins, `end` where one ends.
template <typename OnSlot, typename OnMark>
void ScanSlots(const Entry* stream, uint64_t begin, uint64_t end, const SlotRules& rules,
               OnSlot&& on_slot, OnMark&& on_mark) {
  if (rules.barriers != nullptr) {
    slots_internal::Scan<true>(stream, begin, end, rules, on_slot, on_mark);
  } else {
    slots_internal::Scan<false>(stream, begin, end, rules, on_slot, on_mark);
  }
}

}  // namespace phraseweld

#endif  // PHRASEWELD_BASE_SLOTS_H_
