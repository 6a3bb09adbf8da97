#ifndef PHRASEWELD_BASE_RECORDS_H_
#define PHRASEWELD_BASE_RECORDS_H_

#include <cstdint>
#include <functional>
#include <optional>
#include <string>
#include <vector>

#include "base/job.h"
#include "base/quantity.h"
#include "base/slots.h"
#include "base/table.h"

namespace phraseweld {

// A place in the corpus: `byte` is an offset in the passage's text.
struct Place {
  std::string document;
  std::string passage;
  uint64_t byte = 0;
};

// A slot type as a pass judged it.
struct SlotRecord {
  Slot slot;
  SlotTable table;
  uint64_t joined = 0;
  uint64_t first = 0;              // stream position of its first slot
  std::optional<Quantity> failed;  // a near miss: the gate
  uint32_t phrase = 0;             // accepted: the type it makes
};

// An always-ruling in pass 0.
struct RuledRecord {
  std::string text;  // the phrase; `phrase` is 0 where the corpus lacks a word of it
  uint32_t phrase = 0;
  uint64_t joined = 0;
  uint64_t documents = 0;
  std::string reason;
};

// What a pass did.
struct PassRecord {
  int number = 0;
  PassOptions options;
  uint64_t tokens_in = 0, types_in = 0, slots = 0, slot_types = 0;
  std::vector<SlotRecord> accepted;     // in rank order
  std::vector<SlotRecord> near_misses;  // in rank order
  std::vector<RuledRecord> ruled;       // pass 0 alone
  uint64_t joined = 0, words_absorbed = 0, tokens_out = 0;
};

// One way in which a phrase was made. Pass 0 has no slot.
struct Derivation {
  int pass = 0;
  std::optional<Slot> slot;
  uint64_t joined = 0;
};

// A row of the inventory.
struct PhraseRecord {
  uint32_t type = 0;
  std::string text;
  int words = 0;
  uint64_t occurrences = 0, inside_longer = 0, documents = 0;
  std::string surface;
  std::vector<Derivation> made_of;
  std::optional<SlotTable> scored;  // of the first derivation that has one
  int scored_pass = 0;
  std::string reason;
};

// How scores are made and printed; rooms that print scores get it from the run.
struct ScoreWriter {
  std::function<double(Quantity, const SlotTable&)> score;
  std::function<double(const SlotTable&)> expected;
  std::function<std::string(double)> format;
};

// The measures that a pass's lines show: pmi, npmi, g2, then those that its gates or rank_by name.
inline std::vector<Quantity> ShownMeasures(const PassOptions& pass) {
  std::vector<Quantity> shown = {Quantity::kPmi, Quantity::kNpmi, Quantity::kG2};
  for (int i = static_cast<int>(Quantity::kPmi); i < kQuantities; ++i) {
    const auto quantity = static_cast<Quantity>(i);
    if (quantity == Quantity::kPmi || quantity == Quantity::kNpmi || quantity == Quantity::kG2) {
      continue;
    }
    bool named = quantity == pass.rank_by;
    for (const Gate& gate : pass.accept) named = named || gate.quantity == quantity;
    if (named) shown.push_back(quantity);
  }
  return shown;
}

}  // namespace phraseweld

#endif  // PHRASEWELD_BASE_RECORDS_H_
