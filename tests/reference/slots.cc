#include "reference/slots.h"

#include <utility>

namespace phraseweld::reference {

Forms PhraseOf(const SlotType& type) {
  Forms phrase = type.left;
  phrase.insert(phrase.end(), type.bridge.begin(), type.bridge.end());
  phrase.insert(phrase.end(), type.right.begin(), type.right.end());
  return phrase;
}

// Section 3: "A run is a maximal sequence of tokens with no break." Section 2: "With numbers:
// nowhere a number ends the run before it and starts no new one".
std::vector<std::vector<size_t>> FindRuns(const Passage& passage, const Lists& lists,
                                          Numbers numbers) {
  std::vector<std::vector<size_t>> runs;
  std::vector<size_t> run;
  for (size_t i = 0; i < passage.tokens.size(); ++i) {
    const Token& token = passage.tokens[i];
    const bool stands_outside = numbers == Numbers::kNowhere && IsSingleNumber(token.forms, lists);
    if (token.break_before || stands_outside) {
      if (!run.empty()) runs.push_back(run);
      run.clear();
    }
    if (!stands_outside) run.push_back(i);
  }
  if (!run.empty()) runs.push_back(run);
  return runs;
}

// Section 4: "A slot is x β y: two content tokens x and y in one run, with only function words β
// between them, 0 to bridge of them."
std::vector<Slot> FindSlots(const Passage& passage, const std::vector<size_t>& run,
                            const Lists& lists, int bridge) {
  std::vector<Slot> slots;
  for (size_t i = 0; i < run.size(); ++i) {
    if (IsFunctionWord(passage.tokens[run[i]], lists)) continue;
    Slot slot;
    slot.type.left = passage.tokens[run[i]].forms;
    slot.tokens.push_back(run[i]);
    size_t j = i + 1;
    while (j < run.size() && IsFunctionWord(passage.tokens[run[j]], lists)) {
      slot.type.bridge.push_back(passage.tokens[run[j]].forms[0]);
      slot.tokens.push_back(run[j]);
      ++j;
    }
    if (j == run.size()) continue;
    if (slot.type.bridge.size() > static_cast<size_t>(bridge)) continue;
    slot.type.right = passage.tokens[run[j]].forms;
    slot.tokens.push_back(run[j]);
    slots.push_back(std::move(slot));
  }
  return slots;
}

}  // namespace phraseweld::reference
