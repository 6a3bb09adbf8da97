#ifndef PHRASEWELD_PHRASEWELD_H_
#define PHRASEWELD_PHRASEWELD_H_

// Phraseweld as a library.
//
//   absl::StatusOr<phraseweld::RunResult> result =
//       phraseweld::RunJobFile("configs/demo.yaml", {.settings = {"limits.threads=2"}});
//   if (!result.ok()) return result.status();
//   std::cout << result->phrases << " phrases in " << result->run_folder << "\n";
//
// A second call with the same job fails with InvalidArgument, because the run folder holds a
// finished run and a run folder is final; RunOptions::fresh replaces it.

#include <atomic>
#include <cstdint>
#include <functional>
#include <string>
#include <string_view>
#include <vector>

#include "absl/status/status.h"
#include "absl/status/statusor.h"

namespace phraseweld {

struct RunOptions {
  std::vector<std::string> settings;  // "key=value", as after --set
  bool fresh = false;                 // replace a finished run
  const std::atomic<bool>* stop = nullptr;  // turn it true to end the run with Cancelled
};

struct RunResult {
  std::string run_folder;
  uint64_t documents = 0;
  uint64_t words = 0;             // tokens before any pass
  uint64_t tokens = 0;            // tokens after the last pass
  uint64_t phrases = 0;           // lines of the inventory
  uint64_t words_in_phrases = 0;  // words that stand inside a phrase token in the end
  std::vector<std::string> warnings;
};

// Runs the job in `job_file` (YAML). InvalidArgument: the job file or an override is wrong, or the
// run folder is taken; the message names every fault with its place. Other errors: the work failed;
// then no run folder appears. Blocks; starts threads as limits.threads says. Calls with different
// run folders may overlap.
absl::StatusOr<RunResult> RunJobFile(const std::string& job_file, const RunOptions& options = {});

// Undoes the rewrite of `file` (a file below corpus/ in a run folder, its joints beside it) and
// hands the source's bytes to `append` in pieces, in order. DataLoss where the file is not what
// the run wrote; by then `append` may have had bytes.
absl::Status Restore(const std::string& file,
                     const std::function<absl::Status(std::string_view)>& append);

}  // namespace phraseweld

#endif  // PHRASEWELD_PHRASEWELD_H_
