#ifndef PHRASEWELD_TESTS_REFERENCE_SLOTS_H_
#define PHRASEWELD_TESTS_REFERENCE_SLOTS_H_

#include <compare>
#include <cstddef>
#include <vector>

#include "base/job.h"
#include "reference/corpus.h"
#include "reference/lists.h"

namespace phraseweld::reference {

// x β y. β is empty where x and y are adjacent.
struct SlotType {
  Forms left;
  Forms bridge;
  Forms right;

  auto operator<=>(const SlotType&) const = default;
};

// All the forms of the phrase that a merge of such a slot makes.
Forms PhraseOf(const SlotType& type);

struct Slot {
  SlotType type;
  std::vector<size_t> tokens;  // places in Passage::tokens: x, the bridge, y
};

// The runs of a passage, each as the places of its tokens.
std::vector<std::vector<size_t>> FindRuns(const Passage& passage, const Lists& lists,
                                          Numbers numbers);

// The slots of a run, from left to right.
std::vector<Slot> FindSlots(const Passage& passage, const std::vector<size_t>& run,
                            const Lists& lists, int bridge);

}  // namespace phraseweld::reference

#endif  // PHRASEWELD_TESTS_REFERENCE_SLOTS_H_
