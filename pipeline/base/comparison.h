#ifndef PHRASEWELD_BASE_COMPARISON_H_
#define PHRASEWELD_BASE_COMPARISON_H_

#include <cstdint>
#include <optional>
#include <string>
#include <utility>
#include <vector>

#include "base/quantity.h"

namespace phraseweld {

// What two runs have in common and where they differ. "Left" and "right" are the runs in the order
// in which they were named; a phrase of the right run alone is gained, one of the left run alone
// is lost.

struct ComparedRun {
  std::string folder;
  std::string job;
  std::string version;
  uint64_t documents = 0;
  uint64_t words = 0;
  uint64_t passes = 0;
  uint64_t phrases = 0;
  uint64_t words_in_phrases = 0;
};

// A phrase in one of the runs.
struct ComparedPhrase {
  std::string phrase;
  int words = 0;
  int pass = 0;       // where it was first made
  uint64_t rank = 0;  // place in the inventory, from 1
  uint64_t occurrences = 0;
  uint64_t inside_longer = 0;
  uint64_t documents = 0;
  std::vector<std::pair<Quantity, double>> scores;

  uint64_t made() const { return occurrences + inside_longer; }
  std::optional<double> Score(Quantity quantity) const {
    for (const auto& [of, value] : scores) {
      if (of == quantity) return value;
    }
    return std::nullopt;
  }
};

// What kept a phrase out of one of the runs.
enum class Absence {
  kGate,         // it was a near miss there
  kYielded,      // accepted there, but all its slots yielded
  kNever,        // ruled never
  kNoRuling,     // the other run made it by an always-ruling alone
  kLongest,      // longer than phrases.longest
  kPartMissing,  // none of the slots that made it can be there: a side was not made
  kGates,        // on the other run's counts a gate there turns it away
  kTake,         // a pass there took but its best
  kCorpus,       // the inputs differ
  kKeys,         // keys that shape phrases differ
  kBoth,         // inputs and keys differ
  kUnexplained,  // neither does
};

inline constexpr const char* kAbsenceNames[] = {"gate",    "yielded",      "never", "no_ruling",
                                                "longest", "part_missing", "gates", "take",
                                                "corpus",  "keys",         "both",  "unexplained"};

struct OneSidedPhrase {
  ComparedPhrase phrase;
  Absence absence = Absence::kUnexplained;
  std::string why;  // a sentence without a full stop
};

struct KeptPhrase {
  ComparedPhrase left;
  ComparedPhrase right;
  bool changed = false;  // pass, counts, a score or the rank
};

// How far the runs agree on the order of the phrases that both have.
struct OrderAgreement {
  std::string by;        // "occurrences" (those inside longer phrases as well), or a measure
  uint64_t phrases = 0;  // that have a value in both runs
  std::optional<double> spearman;
  std::optional<double> kendall;  // tau-b
};

// A key of the job; a value is absent where a run lacks the pass or gate.
struct KeyDifference {
  std::string key;
  std::optional<std::string> left;
  std::optional<std::string> right;
  bool shapes_phrases = true;  // false: changes where results go and how fast, not which they are
};

enum class InputChange { kAdded, kRemoved, kChanged };

inline constexpr const char* kInputChangeNames[] = {"added", "removed", "changed"};

struct InputDifference {
  std::string name;
  InputChange change = InputChange::kChanged;
  uint64_t left_bytes = 0;
  uint64_t right_bytes = 0;
};

struct RunComparison {
  ComparedRun left;
  ComparedRun right;
  std::vector<KeyDifference> keys;      // in the order of a job file
  std::vector<InputDifference> inputs;  // removed and changed in the left run's order, then added
  bool input_order_differs = false;     // the same inputs in another order
  std::vector<OneSidedPhrase> gained;   // in the order of the inventory
  std::vector<OneSidedPhrase> lost;
  std::vector<KeptPhrase> kept;  // by how much occurrences and then ranks changed, then text
  uint64_t kept_changed = 0;
  std::vector<OrderAgreement> agreements;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_BASE_COMPARISON_H_
