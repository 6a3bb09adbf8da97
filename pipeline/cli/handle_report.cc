#include "cli/handle_report.h"

#include <mutex>

#include "base/status.h"
#include "base/strings.h"
#include "cli/progress.h"
#include "run/report.h"

namespace phraseweld {

absl::Status HandleReport(const ReportArguments& arguments, Console& console) {
  Progress progress(console);
  std::mutex mutex;
  Stage current;
  Observer observer;
  observer.stage = [&](const Stage& stage) {
    std::lock_guard<std::mutex> lock(mutex);
    current = stage;
  };
  observer.advance = [&](uint64_t done) {
    std::lock_guard<std::mutex> lock(mutex);
    progress.Update({0, "", current.name, done, current.total, current.unit});
  };
  const std::string output =
      arguments.output.empty() ? Concat(arguments.run_folder, "/report.html") : arguments.output;
  ThreadLanes lanes(0, nullptr);
  const absl::StatusOr<WrittenReport> report =
      WriteReport(FileSystem::Posix(), arguments.run_folder, {}, output, lanes, observer);
  progress.Clear();
  PW_RETURN_IF_ERROR(report.status());
  for (const std::string& note : report->notes) *console.err << "note: " << note << "\n";
  *console.out << output << "\n";
  return absl::OkStatus();
}

}  // namespace phraseweld
