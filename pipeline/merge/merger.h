#ifndef PHRASEWELD_MERGE_MERGER_H_
#define PHRASEWELD_MERGE_MERGER_H_

#include <cstdint>
#include <functional>
#include <vector>

#include "base/entry.h"
#include "base/slot_index.h"
#include "base/slots.h"

namespace phraseweld {

// One accepted slot type of a pass; its rank is its place in the list.
struct AcceptedSlot {
  Slot slot;
  uint32_t phrase = 0;  // the type of the merged token
};

// What a merge did to the slots beside it: one slot of type `before` became one of type `after`.
using OnSlotChange = std::function<void(const Slot& before, const Slot& after)>;

// Carries out a pass's merges on stretches of the stream. Step code: one call works on one stretch,
// calls on different stretches may overlap in time. A merge is decided on the stream as it stood at
// the start of the pass, and carried out when nothing to its left can be undecided any more.
//
// In each run the contract says: take the best-ranked accepted slot, leftmost first, merge it, drop
// those that share a token with it, and go on. Slots that share tokens follow each other, so a run
// falls into chains, and within a chain no sorting is needed: while ranks get better from left to
// right nothing can be decided; where the next slot is no better, the last one beats both its
// neighbours and is taken, and with it every second one back to where the descent began. What waits
// is never longer than the number of different ranks.
class Merger {
 public:
  // `accepted`: in rank order. `word_types`: as TypeTable's.
  Merger(const SlotRules& rules, const std::vector<AcceptedSlot>& accepted, uint32_t word_types)
      : rules_(rules), accepted_(accepted), word_types_(word_types) {}

  // Merges in stream[begin, end), which begins and ends with a run. `index`: the accepted slots by
  // their ranks. Adds to (*joined)[rank]. Calls on_change, where given, for every slot beside a
  // merge; the merged ones are not reported.
  void Merge(const SlotIndex& index, Entry* stream, uint64_t begin, uint64_t end,
             std::vector<uint64_t>* joined, const OnSlotChange& on_change) const;

  // The same without a scan: `found` holds, in order, every slot of the stretch that was accepted,
  // and may hold others. `ranks` gives the rank of a place; SlotIndex::kAbsent is an other.
  void MergeFound(Entry* stream, uint64_t begin, uint64_t end, const std::vector<FoundSlot>& found,
                  const std::vector<uint32_t>& ranks, std::vector<uint64_t>* joined,
                  const OnSlotChange& on_change) const;

 private:
  const SlotRules& rules_;
  const std::vector<AcceptedSlot>& accepted_;
  uint32_t word_types_;
};

// Makes the token at left_at, whose words reach to right_at's token inclusive, one token of type
// `phrase`. The types of phrases that it takes in stay readable: that of the right token at its
// place, that of the left one at a place inside it that held a word.
void JoinToken(Entry* stream, uint64_t left_at, uint64_t right_at, uint32_t phrase,
               uint32_t word_types);

}  // namespace phraseweld

#endif  // PHRASEWELD_MERGE_MERGER_H_
