#ifndef PHRASEWELD_DELIVER_INVENTORY_H_
#define PHRASEWELD_DELIVER_INVENTORY_H_

#include <functional>
#include <string>
#include <vector>

#include "base/parallel.h"
#include "base/records.h"
#include "base/types.h"

namespace phraseweld {

struct InventoryContext {
  const TypeTable* types = nullptr;
  const BridgeCodes* codes = nullptr;
  ScoreWriter scores;
  // The measures to show for phrases that were scored in a pass.
  std::function<std::vector<Quantity>(int pass)> shown;
};

// Sorts into the inventory's order: occurrences + inside_longer, largest first, then the text in
// byte order, then the forms of its words one by one.
absl::Status SortInventory(Lanes& lanes, const TypeTable& types,
                           std::vector<PhraseRecord>* phrases);

// Appends the phrase's line of inventory.jsonl and its row of inventory.tsv (which has a header),
// each with its line feed. Phrases do not depend on each other, so they may go side by side.
void AppendInventory(const PhraseRecord& phrase, const InventoryContext& context, std::string* line,
                     std::string* row);

inline constexpr char kInventoryHeader[] =
    "phrase\twords\tpass\toccurrences\tinside_longer\tdocuments\tsurface\tpmi\tnpmi\tg2\n";

}  // namespace phraseweld

#endif  // PHRASEWELD_DELIVER_INVENTORY_H_
