#ifndef PHRASEWELD_RUN_GRADE_H_
#define PHRASEWELD_RUN_GRADE_H_

#include <cstddef>
#include <cstdint>
#include <string>
#include <vector>

#include "absl/status/statusor.h"
#include "base/quantity.h"
#include "files/file_system.h"
#include "run/observer.h"

namespace phraseweld {

// An inventory held against a list of known phrases. A hit is a phrase that is on the list. An
// entry of the list is *in reach* when its words stand next to each other in the source at least as
// often as the lowest `occurrences` gate of the job's passes asks; recall and average precision
// are out of the entries in reach.

struct GradeCutoff {
  uint64_t best = 0;  // so many phrases of a ranking
  uint64_t hits = 0;  // among them
};

// A ranking of the inventory by one quantity, of the slot type that first made a phrase. Phrases
// that no slot type made (rulings) stand last.
struct GradeRanking {
  Quantity by = Quantity::kPmi;
  // Mean over the entries in reach of the precision at the place of each, 0 for those that the
  // ranking lacks (Manning, Raghavan & Schütze 2008, section 8.4).
  double average_precision = 0;
};

// The gate on one quantity that would have picked the phrases with the highest F1 out of a pool.
struct GradeGate {
  Quantity on = Quantity::kPmi;
  double least = 0;
  uint64_t chosen = 0;
  uint64_t hits = 0;
  double average_precision = 0;  // of the pool's ranking
};

// Phrases among which gates are tried out.
struct GradePool {
  std::string name;         // "audit" or "pass 1"
  uint64_t candidates = 0;  // phrases, each once
  uint64_t hits = 0;        // among them: what a gate of 0 would give
  std::vector<GradeGate> gates;
};

// An entry that stands in the source and is not in the inventory.
struct GradeMiss {
  std::string phrase;
  uint64_t occurrences = 0;  // next to each other, in a run
  uint64_t documents = 0;
  uint64_t across_breaks = 0;  // more, with a break inside
  // "gate", "yielded", "never", "longest", "function_word", "bridge", "number", "part_missing",
  // "take", "break", "rulings" or "not_logged".
  std::string reason;
  std::string why;  // a sentence without a full stop
};

// 0 where `whole` is 0.
double Ratio(uint64_t part, uint64_t whole);

struct GradeReport {
  std::string run;
  std::string list;
  uint64_t entries = 0;       // of two words or more, each once
  uint64_t short_lines = 0;   // left out: fewer than two words
  uint64_t double_lines = 0;  // left out: an entry again
  uint64_t in_source = 0;     // entries that stand in the source in a run
  uint64_t across_breaks_alone = 0;
  uint64_t least_occurrences = 1;
  uint64_t in_reach = 0;
  uint64_t found = 0;                       // entries in the inventory
  uint64_t found_in_reach = 0;              // of those in reach
  uint64_t phrases = 0;                     // in the inventory
  Quantity rank_by = Quantity::kPmi;        // of the first pass
  std::vector<GradeCutoff> by_score;        // the inventory by rank_by
  std::vector<GradeCutoff> by_occurrences;  // the inventory by occurrences + inside_longer
  std::vector<GradeCutoff> adjacent_pairs;  // for comparison: the source's pairs of adjacent
                                            // words by plain frequency
  std::vector<GradeRanking> rankings;       // by every quantity
  std::vector<GradePool> pools;
  uint64_t missed = 0;
  std::vector<GradeMiss> misses;   // most occurrences first, then in byte order
  std::vector<std::string> notes;  // remarks on where the source came from

  double Recall() const;     // 0 where nothing is in reach
  double Precision() const;  // 0 where the inventory is empty
};

struct GradeOptions {
  std::vector<Quantity> measures;  // to try gates on; empty: rank_by of the first pass
  size_t most_misses = 200;
  std::string scratch_folder;  // empty: beside the run folder
};

// Where rankings are cut.
inline constexpr uint64_t kGradeCutoffs[] = {50, 100, 200, 500, 1000, 2000, 5000};

// Grades the run in folder `run` by the list in file `list`. Reads the run's source once. Errors as
// LoadFinishedRun(), ReadKnownPhrases() and SourceRecount::Read() have them.
absl::StatusOr<GradeReport> Grade(FileSystem& files, const std::string& run,
                                  const std::string& list, const GradeOptions& options,
                                  const Observer& observer);

// For a terminal of 80 columns, with the first `most` of the misses.
std::string GradeText(const GradeReport& report, size_t most);

// One JSON object, ended by a line feed.
std::string GradeJson(const GradeReport& report);

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_GRADE_H_
