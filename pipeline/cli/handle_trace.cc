#include "cli/handle_trace.h"

#include "base/status.h"
#include "cli/watch.h"
#include "run/trace.h"

namespace phraseweld {

absl::Status HandleTrace(const TraceArguments& arguments, Console& console) {
  Watch watch(console);
  const absl::StatusOr<Trace> trace =
      TracePhrase(FileSystem::Posix(), arguments.run_folder, arguments.phrase, watch.observer());
  PW_RETURN_IF_ERROR(watch.End(trace.status()));
  *console.out << (arguments.json ? TraceJson(*trace) : TraceText(*trace));
  return absl::OkStatus();
}

}  // namespace phraseweld
