#include "cli/watch.h"

#include <atomic>
#include <csignal>
#include <cstdlib>

namespace phraseweld {
namespace {

std::atomic<bool> interrupted{false};

void OnInterrupt(int) {
  // A second one ends the process at once, as if nothing had been caught.
  if (interrupted.exchange(true)) std::_Exit(128 + SIGINT);
}

}  // namespace

Watch::Watch(Console& console, bool quiet) : progress_(console) {
  if (!quiet) {
    const auto show = [this](uint64_t done) {
      std::lock_guard<std::mutex> lock(mutex_);
      progress_.Update(
          {stage_.pass, stage_.pass_name, stage_.name, done, stage_.total, stage_.unit});
    };
    observer_.stage = [this, show](const Stage& stage) {
      {
        std::lock_guard<std::mutex> lock(mutex_);
        stage_ = stage;
      }
      show(0);
    };
    observer_.advance = show;
  }
  observer_.stop = &interrupted;
  interrupted = false;
  before_[0] = std::signal(SIGINT, OnInterrupt);
  before_[1] = std::signal(SIGTERM, OnInterrupt);
}

Watch::~Watch() {
  std::signal(SIGINT, before_[0]);
  std::signal(SIGTERM, before_[1]);
}

absl::Status Watch::End(const absl::Status& status, const char* when_interrupted) {
  progress_.Clear();
  return absl::IsCancelled(status) ? absl::CancelledError(when_interrupted) : status;
}

}  // namespace phraseweld
