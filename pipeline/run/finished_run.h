#ifndef PHRASEWELD_RUN_FINISHED_RUN_H_
#define PHRASEWELD_RUN_FINISHED_RUN_H_

#include <string>
#include <vector>

#include "absl/container/flat_hash_map.h"
#include "absl/status/statusor.h"
#include "base/job.h"
#include "base/parallel.h"
#include "base/run_data.h"
#include "files/file_system.h"

namespace phraseweld {

// A finished run with its job. Every table of `data` has the `all` that its pass's measures want.
struct FinishedRun {
  RunData data;
  Job job;
  // The options of each pass of `data.passes`; those of pass 0 are defaults and mean nothing.
  std::vector<PassOptions> options;

  // What a gate on `quantity` looks at: as printed in the line, or else computed from its counts.
  static double Value(const RunSlot& slot, Quantity quantity);
};

// Reads a run folder and its job.yaml, whose lists of function words and rulings are read from
// where the job found them. Any thread.
absl::StatusOr<FinishedRun> LoadFinishedRun(FileSystem& files, const std::string& folder,
                                            Lanes& lanes);
absl::StatusOr<FinishedRun> LoadFinishedRun(FileSystem& files, const std::string& folder);

// Where the audit of a run speaks of a phrase. Points into the run, which must stay.
struct PhraseTrail {
  struct Line {
    size_t pass = 0;  // index into FinishedRun::data.passes
    const RunSlot* slot = nullptr;
  };
  const RunPhrase* made = nullptr;
  std::vector<Line> accepted;     // by pass, then rank
  std::vector<Line> near_misses;  // by pass, then rank
};

class PhraseTrails {
 public:
  explicit PhraseTrails(const FinishedRun& run);
  // By the phrase's text; an empty trail where the run does not speak of it.
  const PhraseTrail& Find(const std::string& phrase) const;

 private:
  absl::flat_hash_map<std::string, PhraseTrail> trails_;
  PhraseTrail none_;
};

// "pmi 4.71 < 5 in pass 1".
std::string GateText(const RunSlot& slot, Quantity quantity, double least, int pass);

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_FINISHED_RUN_H_
