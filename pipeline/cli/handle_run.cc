#include "cli/handle_run.h"

#include <atomic>
#include <csignal>
#include <memory>

#include "absl/strings/str_cat.h"
#include "absl/strings/str_format.h"
#include "base/status.h"
#include "base/units.h"
#include "cli/progress.h"
#include "config/job_file.h"
#include "run/run.h"

namespace phraseweld {
namespace {

std::atomic<bool> interrupted{false};

void OnInterrupt(int) {
  // A second one ends the process at once, as if nothing had been caught.
  if (interrupted.exchange(true)) std::_Exit(128 + SIGINT);
}

// Catches SIGINT and SIGTERM while it lives.
class InterruptGuard {
 public:
  InterruptGuard() {
    interrupted = false;
    before_[0] = std::signal(SIGINT, OnInterrupt);
    before_[1] = std::signal(SIGTERM, OnInterrupt);
  }
  ~InterruptGuard() {
    std::signal(SIGINT, before_[0]);
    std::signal(SIGTERM, before_[1]);
  }

 private:
  void (*before_[2])(int);
};

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
  Progress progress(console);
  std::mutex mutex;
  Stage current;
  Observer observer;
  if (!arguments.quiet) {
    const auto show = [&](uint64_t done) {
      std::lock_guard<std::mutex> lock(mutex);
      progress.Update(
          {current.pass, current.pass_name, current.name, done, current.total, current.unit});
    };
    observer.stage = [&, show](const Stage& stage) {
      {
        std::lock_guard<std::mutex> lock(mutex);
        current = stage;
      }
      show(0);
    };
    observer.advance = show;
  }
  const InterruptGuard guard;
  observer.stop = &interrupted;
  RunControls controls;
  controls.fresh = arguments.fresh;
  absl::StatusOr<RunSummary> summary = RunJob(job, controls, files, observer);
  progress.Clear();
  if (absl::IsCancelled(summary.status())) {
    return absl::CancelledError("interrupted; nothing was left behind, run it again to start over");
  }
  PW_RETURN_IF_ERROR(summary.status());
  for (const std::string& warning : summary->warnings) {
    *console.err << "warning: " << warning << "\n";
  }
  PrintSummary(*summary, *console.out);
  return absl::OkStatus();
}

}  // namespace phraseweld
