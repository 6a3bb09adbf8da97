#ifndef PHRASEWELD_RUN_VERIFY_RECORDS_H_
#define PHRASEWELD_RUN_VERIFY_RECORDS_H_

#include "absl/status/status.h"
#include "audit/recounter.h"
#include "run/verify_folder.h"
#include "run/verify_plan.h"

namespace phraseweld {

// Writes the lines that the audit logs should have, from a recount, and compares them with those
// that they have; then holds the recounted types to the gates, the rules and the order of their
// pass. Numbers of slot types are taken from the logs as they are. `rules`: what was recounted by.
absl::Status CheckAudit(const FolderCheck& check, const ClaimedRun& run, const RecountRules& rules,
                        const Recounter& recounter);

// The same for inventory.jsonl and inventory.tsv.
absl::Status CheckInventory(const FolderCheck& check, const ClaimedRun& run,
                            const RecountRules& rules, const Recounter& recounter);

// The manifest's totals, and the sums that must hold between them and the inventory.
void CheckTotals(const FolderCheck& check, const ClaimedRun& run, const Recounter& recounter,
                 uint64_t bad_lines);

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_VERIFY_RECORDS_H_
