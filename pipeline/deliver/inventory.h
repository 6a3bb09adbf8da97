#ifndef PHRASEWELD_DELIVER_INVENTORY_H_
#define PHRASEWELD_DELIVER_INVENTORY_H_

#include <functional>
#include <string_view>
#include <vector>

#include "absl/status/status.h"
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

using AppendBytes = std::function<absl::Status(std::string_view)>;

// Sorts into the inventory's order: occurrences + inside_longer, largest first, then the text in
// byte order, then the forms of its words one by one.
void SortInventory(const TypeTable& types, std::vector<PhraseRecord>* phrases);

// inventory.jsonl: one object a line. inventory.tsv: the same for a spreadsheet, with a header.
absl::Status WriteInventoryJson(const std::vector<PhraseRecord>& phrases,
                                const InventoryContext& context, const AppendBytes& append);
absl::Status WriteInventoryTable(const std::vector<PhraseRecord>& phrases,
                                 const InventoryContext& context, const AppendBytes& append);

}  // namespace phraseweld

#endif  // PHRASEWELD_DELIVER_INVENTORY_H_
