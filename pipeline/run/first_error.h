#ifndef PHRASEWELD_RUN_FIRST_ERROR_H_
#define PHRASEWELD_RUN_FIRST_ERROR_H_

#include <atomic>
#include <cstddef>
#include <mutex>
#include <utility>

#include "absl/status/status.h"

namespace phraseweld {

// The error of the smallest item, whichever thread met one first. Thread-safe.
class FirstError {
 public:
  void Set(size_t item, absl::Status status) {
    std::lock_guard<std::mutex> lock(mutex_);
    if (failed_.load() && item_ < item) return;
    item_ = item;
    status_ = std::move(status);
    failed_ = true;
  }
  bool failed() const { return failed_.load(std::memory_order_relaxed); }
  absl::Status status() const {
    std::lock_guard<std::mutex> lock(mutex_);
    return status_;
  }

 private:
  mutable std::mutex mutex_;
  std::atomic<bool> failed_{false};
  size_t item_ = 0;
  absl::Status status_;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_FIRST_ERROR_H_
