#include "cli/handle_grade.h"

#include <cstddef>

#include "base/status.h"
#include "cli/watch.h"
#include "run/grade.h"

namespace phraseweld {
namespace {

constexpr size_t kMissesShown = 25;  // about a screen

}  // namespace

absl::Status HandleGrade(const GradeArguments& arguments, Console& console) {
  Watch watch(console);
  GradeOptions options;
  options.measures = arguments.measures;
  const absl::StatusOr<GradeReport> report = Grade(FileSystem::Posix(), arguments.run_folder,
                                                   arguments.list_file, options, watch.observer());
  PW_RETURN_IF_ERROR(watch.End(report.status()));
  for (const std::string& note : report->notes) *console.err << "note: " << note << "\n";
  *console.out << (arguments.json ? GradeJson(*report) : GradeText(*report, kMissesShown));
  return absl::OkStatus();
}

}  // namespace phraseweld
