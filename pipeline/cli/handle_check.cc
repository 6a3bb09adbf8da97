#include "absl/strings/str_format.h"
#include "base/status.h"
#include "base/units.h"
#include "cli/handle_run.h"
#include "cli/watch.h"
#include "config/job_file.h"
#include "run/check.h"

namespace phraseweld {

absl::Status HandleCheck(const CheckArguments& arguments, Console& console) {
  FileSystem& files = FileSystem::Posix();
  PW_ASSIGN_OR_RETURN(const Job job, LoadJob(files, arguments.job_file, arguments.settings));
  Watch watch(console, true);
  const absl::StatusOr<CheckReport> checked = CheckJob(job, files, watch.observer());
  PW_RETURN_IF_ERROR(watch.End(checked.status()));
  const CheckReport& report = *checked;
  const MemoryPlan& plan = report.plan;
  std::ostream& out = *console.out;
  out << WriteJobYaml(job) << "\n";
  uint64_t stored = 0;
  for (uint64_t size : report.sizes) stored += size;
  const auto rounded = [](uint64_t bytes) { return RoundedBytes(static_cast<double>(bytes)); };
  out << absl::StrFormat("# inputs    %d files, %s\n", static_cast<int>(report.inputs.size()),
                         rounded(stored))
      << absl::StrFormat("# memory    about %s of the limit of %s; %s\n",
                         rounded(plan.memory_bytes), FormatBytes(job.limits.memory),
                         plan.on_disk ? "stream and counts on disk" : "everything in memory")
      << absl::StrFormat("# disk      about %s for the results and %s while it runs; %s free\n",
                         rounded(plan.output_bytes), rounded(plan.scratch_bytes),
                         rounded(report.free_bytes))
      << absl::StrFormat("# rounds    %d\n", plan.rounds)
      << (report.sampled_bytes > 0
              ? absl::StrFormat("# estimate  from a trial on %s of the text\n",
                                rounded(report.sampled_bytes))
              : std::string("# estimate  from the sizes of the inputs alone\n"))
      << absl::StrFormat("# threads   %d\n", report.lanes);
  if (plan.output_bytes + plan.scratch_bytes > report.free_bytes) {
    *console.err << "warning: the disk has less free space than the run will need\n";
  }
  return absl::OkStatus();
}

}  // namespace phraseweld
