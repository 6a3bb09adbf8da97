#include "cli/handle_grade.h"

#include <cstddef>
#include <mutex>

#include "base/status.h"
#include "cli/progress.h"
#include "run/grade.h"

namespace phraseweld {
namespace {

constexpr size_t kMissesShown = 25;  // about a screen

}  // namespace

absl::Status HandleGrade(const GradeArguments& arguments, Console& console) {
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
  GradeOptions options;
  options.measures = arguments.measures;
  const absl::StatusOr<GradeReport> report =
      Grade(FileSystem::Posix(), arguments.run_folder, arguments.list_file, options, observer);
  progress.Clear();
  PW_RETURN_IF_ERROR(report.status());
  for (const std::string& note : report->notes) *console.err << "note: " << note << "\n";
  *console.out << (arguments.json ? GradeJson(*report) : GradeText(*report, kMissesShown));
  return absl::OkStatus();
}

}  // namespace phraseweld
