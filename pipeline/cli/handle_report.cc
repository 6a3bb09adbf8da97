#include "cli/handle_report.h"

#include "base/status.h"
#include "base/strings.h"
#include "cli/watch.h"
#include "run/report.h"

namespace phraseweld {

absl::Status HandleReport(const ReportArguments& arguments, Console& console) {
  Watch watch(console);
  const std::string output =
      arguments.output.empty() ? Concat(arguments.run_folder, "/report.html") : arguments.output;
  ThreadLanes lanes(0, watch.observer().stop);
  const absl::StatusOr<WrittenReport> report =
      WriteReport(FileSystem::Posix(), arguments.run_folder, {}, output, lanes, watch.observer());
  PW_RETURN_IF_ERROR(watch.End(report.status()));
  for (const std::string& note : report->notes) *console.err << "note: " << note << "\n";
  *console.out << output << "\n";
  return absl::OkStatus();
}

}  // namespace phraseweld
