#include "run/check.h"

#include "base/status.h"
#include "run/forecast.h"
#include "run/lanes.h"
#include "run/passes.h"

namespace phraseweld {

absl::StatusOr<CheckReport> CheckJob(const Job& job, FileSystem& files, const Observer& observer) {
  PW_RETURN_IF_ERROR(FunctionWordForms(job).status());
  PW_RETURN_IF_ERROR(ResolveRulings(job).status());
  CheckReport report;
  PW_ASSIGN_OR_RETURN(report.inputs, ResolveInputs(job.corpus.files));
  PW_ASSIGN_OR_RETURN(report.sizes, InputSizes(files, report.inputs));
  report.lanes = ThreadLanes(job.limits.threads, nullptr).lanes();
  report.plan = PlanMemory(job, report.inputs, report.sizes, report.lanes, RunControls{});
  PW_ASSIGN_OR_RETURN(
      const std::optional<Forecast> forecast,
      ForecastRun(job, report.inputs, report.sizes, report.plan, report.lanes, files, observer));
  if (forecast) {
    report.plan.memory_bytes = forecast->memory_bytes;
    report.plan.scratch_bytes = forecast->scratch_bytes;
    report.plan.output_bytes = forecast->output_bytes;
    report.sampled_bytes = forecast->sampled_bytes;
  }
  // The run folder need not exist yet: ask the nearest folder above it that does.
  std::string folder = job.run_folder;
  for (;;) {
    PW_ASSIGN_OR_RETURN(FileInfo info, files.Stat(folder));
    if (info.exists) break;
    const size_t slash = folder.rfind('/');
    folder = slash == std::string::npos ? "." : slash == 0 ? "/" : folder.substr(0, slash);
  }
  PW_ASSIGN_OR_RETURN(report.free_bytes, files.FreeBytes(folder));
  return report;
}

}  // namespace phraseweld
