#ifndef PHRASEWELD_TESTS_REFERENCE_INVENTORY_H_
#define PHRASEWELD_TESTS_REFERENCE_INVENTORY_H_

#include <string>
#include <vector>

#include "reference/corpus.h"
#include "reference/lists.h"
#include "reference/passes.h"

namespace phraseweld::reference {

struct InventoryFiles {
  std::string jsonl;
  std::string tsv;
};

// Section 9, from the final streams: each token there still holds the tokens it was made of.
// Throws std::logic_error where the merges found in them are not those that the passes counted.
InventoryFiles MakeInventory(const std::vector<Document>& documents, const Lists& lists,
                             const std::vector<PassRecord>& passes);

}  // namespace phraseweld::reference

#endif  // PHRASEWELD_TESTS_REFERENCE_INVENTORY_H_
