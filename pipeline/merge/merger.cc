#include "merge/merger.h"

#include <algorithm>

namespace phraseweld {
namespace {

// A slot that was accepted.
struct Link {
  uint64_t left_at = 0, right_at = 0;
  uint32_t rank = 0;
};

// Carries out merges from left to right and reports the slots beside them. A slot between two
// merges changes on both sides and is reported once, so what is to the right of a merge waits until
// the next merge is known.
class Joiner {
 public:
  Joiner(Entry* stream, uint64_t begin, uint64_t end, const SlotRules& rules,
         const std::vector<AcceptedSlot>& accepted, uint32_t word_types,
         const OnSlotChange& on_change)
      : stream_(stream),
        begin_(begin),
        end_(end),
        rules_(rules),
        accepted_(accepted),
        word_types_(word_types),
        on_change_(on_change) {}

  void Join(const Link& link) {
    const uint32_t phrase = accepted_[link.rank].phrase;
    if (on_change_) {
      Slot before{0, accepted_[link.rank].slot.left, 0};
      uint64_t previous_at = 0;
      const bool has_left = FindLeft(link.left_at, &before, &previous_at);
      const bool beside_last = has_left && has_last_ && previous_at == last_.right_at;
      if (!beside_last) EndLast();
      if (has_left) {
        Slot after = before;
        if (beside_last) after.left = accepted_[last_.rank].phrase;
        after.right = phrase;
        on_change_(before, after);
      }
    }
    JoinToken(stream_, link.left_at, link.right_at, phrase, word_types_);
    last_ = link;
    has_last_ = true;
  }

  void EndLast() {
    if (!has_last_ || !on_change_) return;
    has_last_ = false;
    const NextContent next = FindRight(stream_, last_.right_at, end_, rules_);
    if (!next.has_slot) return;
    const Slot before{accepted_[last_.rank].slot.right, stream_[next.at], next.bridge};
    on_change_(before, {accepted_[last_.rank].phrase, before.right, before.bridge});
  }

 private:
  // The slot whose right side is the content token at `at`, as it stood at the start of the pass.
  // The stream before `at` shows the merges so far; of the last one the right side is still known.
  bool FindLeft(uint64_t at, Slot* slot, uint64_t* left_at) const {
    uint32_t bridge[kMostBridge];
    int between = 0;
    bool found = false;
    while (!found && at > begin_) {
      const Entry entry = stream_[--at];
      if (has_last_ && at == last_.right_at) {
        slot->left = accepted_[last_.rank].slot.right;
        found = true;
      } else if (IsMark(entry)) {
        return false;
      } else if (IsToken(entry)) {
        if (rules_.barriers != nullptr && rules_.barriers->HasChecked(entry)) return false;
        if (entry >= rules_.codes.function_types()) {
          slot->left = entry;
          found = true;
        } else {
          if (between == rules_.codes.bridge()) return false;
          bridge[between++] = entry;
        }
      }
    }
    if (!found) return false;
    uint64_t digits = 0;
    for (int i = between - 1; i >= 0; --i) {
      digits = digits * rules_.codes.function_types() + bridge[i];
    }
    slot->bridge = rules_.codes.Code(between, digits);
    *left_at = at;
    return true;
  }

  Entry* stream_;
  const uint64_t begin_, end_;
  const SlotRules& rules_;
  const std::vector<AcceptedSlot>& accepted_;
  const uint32_t word_types_;
  const OnSlotChange& on_change_;
  Link last_;
  bool has_last_ = false;
};

// Decides, slot by slot from left to right, which accepted slots of a stretch are merged.
class Chains {
 public:
  Chains(const Joiner& joiner, std::vector<uint64_t>* joined) : joiner_(joiner), joined_(*joined) {}

  void Add(const Link& link) {
    const bool chained = has_previous_ && previous_.right_at == link.left_at;
    if (!descent_.empty() && chained && link.rank < previous_.rank) {
      descent_.push_back(link);
    } else {
      // Of a descent that ends here the last link is taken, and a link that shares a token with it
      // is dropped.
      const bool beside_taken = chained && !descent_.empty();
      Decide();
      if (!beside_taken) descent_.push_back(link);
    }
    previous_ = link;
    has_previous_ = true;
  }

  void End() {
    Decide();
    joiner_.EndLast();
  }

 private:
  void Decide() {
    // The last of a descent is better than both its neighbours: it is taken, the one before it
    // drops out, the one before that is free again, and so on.
    taken_.clear();
    for (size_t i = descent_.size(); i > 0; i = i > 2 ? i - 2 : 0) {
      taken_.push_back(descent_[i - 1]);
    }
    for (size_t i = taken_.size(); i > 0; --i) {
      ++joined_[taken_[i - 1].rank];
      joiner_.Join(taken_[i - 1]);
    }
    descent_.clear();
  }

  Joiner joiner_;
  std::vector<uint64_t>& joined_;
  // A chain's links of which nothing is decided yet: a descent to ever better ranks.
  std::vector<Link> descent_;
  std::vector<Link> taken_;
  Link previous_;
  bool has_previous_ = false;
};

}  // namespace

void JoinToken(Entry* stream, uint64_t left_at, uint64_t right_at, uint32_t phrase,
               uint32_t word_types) {
  const Entry left = stream[left_at];
  if (left >= word_types) {
    // A phrase of k words holds the ids of at most k-1 phrases, so one of its places is free.
    uint64_t place = left_at + 1;
    while ((stream[place] & ~kInside) >= word_types) ++place;
    stream[place] = left | kInside;
  }
  for (uint64_t at = left_at + 1; at <= right_at; ++at) stream[at] |= kInside;
  stream[left_at] = phrase;
}

void Merger::Merge(const SlotIndex& index, Entry* stream, uint64_t begin, uint64_t end,
                   std::vector<uint64_t>* joined, const OnSlotChange& on_change) const {
  Chains chains(Joiner(stream, begin, end, rules_, accepted_, word_types_, on_change), joined);
  ScanListedSlots(
      stream, begin, end, rules_, index,
      [&](uint32_t rank, const Slot&, uint64_t left_at, uint64_t right_at) {
        chains.Add({left_at, right_at, rank});
      },
      [](uint64_t) {});
  chains.End();
}

void Merger::MergeFound(Entry* stream, uint64_t begin, uint64_t end,
                        const std::vector<FoundSlot>& found, const std::vector<uint32_t>& ranks,
                        std::vector<uint64_t>* joined, const OnSlotChange& on_change) const {
  Chains chains(Joiner(stream, begin, end, rules_, accepted_, word_types_, on_change), joined);
  // What a slot will want of tables that lie in no cache is asked for while others are joined.
  constexpr size_t kRankAhead = 32, kAcceptedAhead = 16;
  for (size_t i = 0; i < found.size(); ++i) {
    if (i + kRankAhead < found.size()) __builtin_prefetch(&ranks[found[i + kRankAhead].place]);
    if (i + kAcceptedAhead < found.size()) {
      const uint32_t next = ranks[found[i + kAcceptedAhead].place];
      if (next != SlotIndex::kAbsent) {
        __builtin_prefetch(&accepted_[next]);
        __builtin_prefetch(&(*joined)[next], 1);
      }
    }
    const FoundSlot& slot = found[i];
    const uint32_t rank = ranks[slot.place];
    if (rank == SlotIndex::kAbsent) continue;
    chains.Add({slot.left_at, slot.left_at + slot.reach, rank});
  }
  chains.End();
}

}  // namespace phraseweld
