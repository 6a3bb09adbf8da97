#include "base/status.h"
#include "config/job_file.h"
#include "deliver/joints.h"
#include "phraseweld/phraseweld.h"
#include "run/run.h"

namespace phraseweld {

absl::StatusOr<RunResult> RunJobFile(const std::string& job_file, const RunOptions& options) {
  FileSystem& files = FileSystem::Posix();
  PW_ASSIGN_OR_RETURN(const Job job, LoadJob(files, job_file, options.settings));
  RunControls controls;
  controls.fresh = options.fresh;
  Observer observer;
  observer.stop = options.stop;
  PW_ASSIGN_OR_RETURN(RunSummary summary, RunJob(job, controls, files, observer));
  RunResult result;
  result.run_folder = summary.run_folder;
  result.documents = summary.totals.documents;
  result.words = summary.totals.words;
  result.tokens = summary.totals.tokens_out;
  result.phrases = summary.totals.phrases;
  result.words_in_phrases = summary.totals.words_in_phrases;
  result.warnings = std::move(summary.warnings);
  return result;
}

absl::Status Restore(const std::string& file,
                     const std::function<absl::Status(std::string_view)>& append) {
  return RestoreFile(FileSystem::Posix(), file, append).status();
}

}  // namespace phraseweld
