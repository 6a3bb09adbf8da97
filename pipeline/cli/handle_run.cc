#include "cli/handle_run.h"

#include "absl/strings/str_cat.h"
#include "absl/strings/str_format.h"
#include "base/status.h"
#include "base/units.h"
#include "cli/watch.h"
#include "config/job_file.h"
#include "run/run.h"

namespace phraseweld {
namespace {

void PrintSummary(const RunSummary& summary, std::ostream& out) {
  const RunTotals& totals = summary.totals;
  const double share = totals.words == 0 ? 0
                                         : 100.0 * static_cast<double>(totals.words_in_phrases) /
                                               static_cast<double>(totals.words);
  std::string lengths;
  for (const auto& [words, phrases] : summary.phrases_by_length) {
    absl::StrAppend(&lengths, lengths.empty() ? "" : ", ", FormatCount(phrases), " of ", words);
  }
  out << absl::StrFormat("documents   %s\n", FormatCount(totals.documents))
      << absl::StrFormat("words       %s, %s different\n", FormatCount(totals.words),
                         FormatCount(totals.word_types))
      << absl::StrFormat("phrases     %s\n", FormatCount(totals.phrases))
      << absl::StrFormat("by words    %s\n", lengths.empty() ? "-" : lengths)
      << absl::StrFormat("in phrases  %.1f %% of all words\n", share)
      << absl::StrFormat("tokens      %s -> %s\n", FormatCount(totals.words),
                         FormatCount(totals.tokens_out))
      << absl::StrFormat("passes      %d\n", static_cast<int>(totals.passes))
      << absl::StrFormat("time        %.2f s\n", summary.seconds)
      << absl::StrFormat("results     %s\n", summary.run_folder)
      << absl::StrFormat("next        phraseweld verify %s\n", summary.run_folder);
}

}  // namespace

absl::Status HandleRun(const RunArguments& arguments, Console& console) {
  FileSystem& files = FileSystem::Posix();
  PW_ASSIGN_OR_RETURN(const Job job, LoadJob(files, arguments.job_file, arguments.settings));
  Watch watch(console, arguments.quiet);
  RunControls controls;
  controls.fresh = arguments.fresh;
  const absl::StatusOr<RunSummary> summary = RunJob(job, controls, files, watch.observer());
  PW_RETURN_IF_ERROR(watch.End(summary.status(),
                               "interrupted; nothing was left behind, run it again to start over"));
  for (const std::string& warning : summary->warnings) {
    *console.err << "warning: " << warning << "\n";
  }
  PrintSummary(*summary, *console.out);
  return absl::OkStatus();
}

}  // namespace phraseweld
