#ifndef PHRASEWELD_BASE_PARALLEL_H_
#define PHRASEWELD_BASE_PARALLEL_H_

#include <cstddef>
#include <functional>

#include "absl/status/status.h"

namespace phraseweld {

// How step code asks for work to be done side by side without knowing threads. A lane is a number
// below lanes(); two calls with one lane never overlap, so a lane may own scratch space.
class Lanes {
 public:
  virtual ~Lanes() = default;
  virtual int lanes() const = 0;
  // Calls work(lane, i) for each i below `count`, in any order, and waits. The first error in the
  // order of i among those that occurred is returned; calls not begun by then may be left out.
  virtual absl::Status ForEach(size_t count,
                               const std::function<absl::Status(int lane, size_t i)>& work) = 0;
};

// One lane, in order: the serial case.
class SerialLanes : public Lanes {
 public:
  int lanes() const override { return 1; }
  absl::Status ForEach(size_t count,
                       const std::function<absl::Status(int lane, size_t i)>& work) override {
    for (size_t i = 0; i < count; ++i) {
      if (absl::Status status = work(0, i); !status.ok()) return status;
    }
    return absl::OkStatus();
  }
};

}  // namespace phraseweld

#endif  // PHRASEWELD_BASE_PARALLEL_H_
