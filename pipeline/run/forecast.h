#ifndef PHRASEWELD_RUN_FORECAST_H_
#define PHRASEWELD_RUN_FORECAST_H_

#include <cstdint>
#include <optional>
#include <vector>

#include "absl/status/statusor.h"
#include "base/job.h"
#include "files/file_system.h"
#include "read/corpus.h"
#include "run/observer.h"
#include "run/plan.h"

namespace phraseweld {

// What a run will take, from trial runs of the job on a sample.
struct Forecast {
  uint64_t memory_bytes = 0;   // peak
  uint64_t scratch_bytes = 0;  // on disk while it runs
  uint64_t output_bytes = 0;   // the run folder
  uint64_t sampled_bytes = 0;  // of text
};

// Runs the job on a sample of at most 16 MiB, taken evenly over the inputs, and on half of it,
// in a folder that it makes for that and removes; what each kind of thing grew by from the half to
// the whole tells how it goes on to the size of the corpus. Where the sample is the corpus the
// sizes of the outputs are exact. None where an input is standard input, or where there is no text.
absl::StatusOr<std::optional<Forecast>> ForecastRun(const Job& job,
                                                    const std::vector<InputFile>& inputs,
                                                    const std::vector<uint64_t>& sizes,
                                                    const MemoryPlan& plan, int lanes,
                                                    FileSystem& files, const Observer& observer);

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_FORECAST_H_
