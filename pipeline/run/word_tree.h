#ifndef PHRASEWELD_RUN_WORD_TREE_H_
#define PHRASEWELD_RUN_WORD_TREE_H_

#include <cstdint>
#include <vector>

#include "absl/container/flat_hash_map.h"
#include "absl/types/span.h"
#include "base/entry.h"
#include "base/slots.h"

namespace phraseweld {

// Sequences of words as a tree, one word a branch, to find all of them in one scan.
class WordTree {
 public:
  // `words` must not be empty. A sequence that is already there keeps its first number.
  void Add(absl::Span<const uint32_t> words, uint32_t sequence) {
    if (words[0] >= limit_) first_.Resize(limit_ = words[0] + 1);
    first_.Set(words[0]);
    uint32_t node = 0;
    for (const uint32_t word : words) {
      const auto next = static_cast<uint32_t>(ends_.size());
      const auto [branch, is_new] = branches_.try_emplace(Key(node, word), next);
      if (is_new) ends_.push_back(kNone);
      node = branch->second;
    }
    if (ends_[node] == kNone) ends_[node] = sequence;
  }

  // Calls on_found(sequence, at, token, break_after) for every place of `entries`, a passage or a
  // piece of one, where the words of a sequence follow each other with nothing but breaks between
  // them: `at` is the entry of the first word, `token` its number among the words of `entries`, and
  // `break_after` the number of the word before the first break, kNone where there is no break.
  // Places may overlap; they come by `at`.
  template <typename OnFound>
  void Find(absl::Span<const Entry> entries, OnFound&& on_found) const {
    uint32_t token = 0;
    for (size_t at = 0; at < entries.size(); ++at) {
      const Entry entry = entries[at];
      if (IsMark(entry)) continue;
      ++token;
      if (!first_.HasChecked(entry)) continue;
      uint32_t last = token - 1, break_after = kNone;
      uint32_t node = Next(0, entry);
      for (size_t next = at + 1; node != 0; ++next) {
        if (ends_[node] != kNone) on_found(ends_[node], at, token - 1, break_after);
        for (; next < entries.size() && entries[next] == kBreak; ++next) {
          if (break_after == kNone) break_after = last;
        }
        if (next == entries.size() || IsMark(entries[next])) break;
        node = Next(node, entries[next]);
        ++last;
      }
    }
  }

  static constexpr uint32_t kNone = 0xFFFFFFFFu;

 private:
  static uint64_t Key(uint32_t node, uint32_t word) { return (uint64_t{node} << 32) | word; }
  // The node behind `word`, 0 where there is none.
  uint32_t Next(uint32_t node, uint32_t word) const {
    const auto branch = branches_.find(Key(node, word));
    return branch == branches_.end() ? 0 : branch->second;
  }

  TypeBits first_;
  uint32_t limit_ = 0;
  absl::flat_hash_map<uint64_t, uint32_t> branches_;
  std::vector<uint32_t> ends_ = {kNone};  // the sequence that ends at a node
};

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_WORD_TREE_H_
