#ifndef PHRASEWELD_TESTS_REFERENCE_AUDIT_H_
#define PHRASEWELD_TESTS_REFERENCE_AUDIT_H_

#include <string>

#include "reference/passes.h"

namespace phraseweld::reference {

// Section 8: the bytes of audit/pass-NN.jsonl, and its path in the run folder.
std::string AuditOfPass(const PassRecord& record);
std::string AuditOfRulings(const RulingsRecord& record);
std::string AuditPath(int pass);

// The scores that the pass prints of each slot type, as a JSON object.
std::string ScoresOf(const Candidate& candidate, const PassOptions& options);

}  // namespace phraseweld::reference

#endif  // PHRASEWELD_TESTS_REFERENCE_AUDIT_H_
