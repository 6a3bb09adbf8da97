#ifndef PHRASEWELD_TESTS_BENCHMARKS_MADE_STREAM_H_
#define PHRASEWELD_TESTS_BENCHMARKS_MADE_STREAM_H_

#include <algorithm>
#include <cmath>
#include <random>
#include <utility>
#include <vector>

#include "base/entry.h"
#include "base/slots.h"

namespace phraseweld {

// A stream as reading makes it: types by Zipf's law, of which the first are function words, a break
// about every tenth word and the end of a document about every hundredth.
struct MadeStream {
  static constexpr uint32_t kFunctionTypes = 100;
  static constexpr uint32_t kTypes = 300000;
  static constexpr size_t kEntries = size_t{4} << 20;

  MadeStream() {
    std::mt19937_64 random(1);
    entries.reserve(kEntries);
    while (entries.size() + 1 < kEntries) {
      const auto dice = random() % 1000;
      if (dice < 10 || dice > 909) {
        entries.push_back(dice < 10 ? kDocumentEnd : kBreak);
        continue;
      }
      const double uniform = static_cast<double>(random() % 1000003) / 1000003;
      entries.push_back(static_cast<Entry>(std::pow(double{kTypes}, uniform)) - 1);
    }
    entries.push_back(kDocumentEnd);
    rules.codes = BridgeCodes(kFunctionTypes, 2);
  }

  // The commonest slot types, at most `most`, commonest first.
  std::vector<Slot> CommonSlots(size_t most) const {
    std::vector<Slot> slots;
    ScanSlots(
        entries.data(), 0, entries.size(), rules,
        [&](const Slot& slot, uint64_t, uint64_t) { slots.push_back(slot); },
        [](uint64_t, Entry) {});
    const auto less = [](const Slot& a, const Slot& b) {
      if (a.left != b.left) return a.left < b.left;
      return a.bridge != b.bridge ? a.bridge < b.bridge : a.right < b.right;
    };
    std::sort(slots.begin(), slots.end(), less);
    std::vector<std::pair<size_t, Slot>> counted;
    for (const Slot& slot : slots) {
      if (counted.empty() || !(counted.back().second == slot)) counted.push_back({0, slot});
      ++counted.back().first;
    }
    std::stable_sort(counted.begin(), counted.end(),
                     [](const auto& a, const auto& b) { return a.first > b.first; });
    slots.clear();
    for (size_t i = 0; i < std::min(most, counted.size()); ++i) slots.push_back(counted[i].second);
    return slots;
  }

  std::vector<Entry> entries;
  SlotRules rules;
};

inline const MadeStream& Made() {
  static const MadeStream& made = *new MadeStream();
  return made;
}

}  // namespace phraseweld

#endif  // PHRASEWELD_TESTS_BENCHMARKS_MADE_STREAM_H_
