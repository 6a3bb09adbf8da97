#ifndef PHRASEWELD_CLI_WATCH_H_
#define PHRASEWELD_CLI_WATCH_H_

#include <mutex>

#include "absl/status/status.h"
#include "cli/progress.h"
#include "run/observer.h"

namespace phraseweld {

// Follows a piece of work: shows how far it is and, when the person or the system asks for an end
// (SIGINT, SIGTERM), lets the work stop by itself, so that what it made in passing is removed. A
// second request ends the process at once. One at a time.
class Watch {
 public:
  // quiet: shows nothing.
  explicit Watch(Console& console, bool quiet = false);
  ~Watch();
  Watch(const Watch&) = delete;
  Watch& operator=(const Watch&) = delete;

  const Observer& observer() const { return observer_; }

  // Removes the line of progress. Returns the status of the work, for one that was interrupted with
  // what that leaves.
  absl::Status End(const absl::Status& status, const char* when_interrupted = "interrupted");

 private:
  Progress progress_;
  std::mutex mutex_;
  Stage stage_;
  Observer observer_;
  void (*before_[2])(int);  // what handled the signals
};

}  // namespace phraseweld

#endif  // PHRASEWELD_CLI_WATCH_H_
