#ifndef PHRASEWELD_RUN_MANIFEST_H_
#define PHRASEWELD_RUN_MANIFEST_H_

#include <string>
#include <utility>
#include <vector>

#include "base/job.h"
#include "read/corpus.h"
#include "run/delivery.h"
#include "run/run.h"

namespace phraseweld {

inline constexpr char kProgramVersion[] = "0.1.0";

// manifest.json: program, inputs and outputs with sizes and XXH3-128 hashes, totals, timings.
// Everything but `timings` depends on the job and the corpus alone. `input_names` are the inputs'
// paths as the job has them ("-" for standard input).
std::string ManifestJson(const Job& job, const std::vector<InputFile>& inputs,
                         const std::vector<InputDigest>& digests,
                         std::vector<DeliveredFile> outputs, const RunTotals& totals,
                         const std::vector<std::pair<std::string, double>>& timings);

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_MANIFEST_H_
