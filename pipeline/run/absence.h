#ifndef PHRASEWELD_RUN_ABSENCE_H_
#define PHRASEWELD_RUN_ABSENCE_H_

#include <string>

#include "absl/container/flat_hash_set.h"
#include "base/comparison.h"
#include "run/finished_run.h"

namespace phraseweld {

// One of two runs, looked into for phrases that the other has and it lacks.
struct ComparedSide {
  ComparedSide(const FinishedRun& of, std::string called);
  const FinishedRun* run;
  std::string name;  // "left" or "right"
  PhraseTrails trails;
  absl::flat_hash_set<std::string> never;  // texts of the rulings
  absl::flat_hash_set<std::string> always;
};

// What tells two runs apart on the whole.
struct WholeDifferences {
  bool corpus = false;
  std::string keys;  // those that shape phrases, with commas
};

struct AbsenceReason {
  Absence absence = Absence::kUnexplained;
  std::string why;
};

// Why `lacks` is without a phrase that `has` made. What lacks' own audit says goes first; then what
// follows from rules and parts; then what its gates make of the other run's counts.
AbsenceReason ExplainAbsence(const RunPhrase& phrase, const ComparedSide& has,
                             const ComparedSide& lacks, const WholeDifferences& differences);

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_ABSENCE_H_
