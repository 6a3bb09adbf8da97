#include "cli/handle_trace.h"

#include <mutex>

#include "base/status.h"
#include "cli/progress.h"
#include "run/trace.h"

namespace phraseweld {

absl::Status HandleTrace(const TraceArguments& arguments, Console& console) {
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
  const absl::StatusOr<Trace> trace =
      TracePhrase(FileSystem::Posix(), arguments.run_folder, arguments.phrase, observer);
  progress.Clear();
  PW_RETURN_IF_ERROR(trace.status());
  *console.out << (arguments.json ? TraceJson(*trace) : TraceText(*trace));
  return absl::OkStatus();
}

}  // namespace phraseweld
