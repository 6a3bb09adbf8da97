#ifndef PHRASEWELD_RUN_CHECK_H_
#define PHRASEWELD_RUN_CHECK_H_

#include <string>
#include <vector>

#include "absl/status/statusor.h"
#include "base/job.h"
#include "files/file_system.h"
#include "read/corpus.h"
#include "run/observer.h"
#include "run/plan.h"

namespace phraseweld {

// What a run of the job would take, worked out without running it.
struct CheckReport {
  std::vector<InputFile> inputs;
  std::vector<uint64_t> sizes;  // of the inputs as stored
  MemoryPlan plan;
  uint64_t free_bytes = 0;  // where the run folder will be
  int lanes = 0;
  uint64_t sampled_bytes = 0;  // of text that the estimate was made from; 0: from sizes alone
};

// Tries the job on a sample of its inputs for the estimate (see ForecastRun) and checks all that
// can be checked before a run: function words, rulings, inputs, the run folder.
absl::StatusOr<CheckReport> CheckJob(const Job& job, FileSystem& files, const Observer& observer);

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_CHECK_H_
