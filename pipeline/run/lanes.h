#ifndef PHRASEWELD_RUN_LANES_H_
#define PHRASEWELD_RUN_LANES_H_

#include <atomic>
#include <functional>
#include <memory>

#include "absl/status/statusor.h"
#include "base/parallel.h"

namespace phraseweld {

// Lanes on oneTBB's threads. `stop`, where given, makes ForEach return Cancelled soon after it
// turns true.
class ThreadLanes : public Lanes {
 public:
  // threads: 0 for all that the machine has.
  ThreadLanes(int threads, const std::atomic<bool>* stop);
  ~ThreadLanes() override;
  int lanes() const override { return lanes_; }
  absl::Status ForEach(size_t count,
                       const std::function<absl::Status(int lane, size_t i)>& work) override;

  // Items go through make (one after another, in order; false: no more), work (side by side),
  // place (in order) and store (side by side). At most `in_flight` items exist at once. The first
  // error ends it. Item is handed on by pointer and reused.
  template <typename Item>
  struct Steps {
    std::function<absl::StatusOr<bool>(Item*)> make;
    std::function<absl::Status(int lane, Item*)> work;
    std::function<absl::Status(Item*)> place;
    std::function<absl::Status(Item*)> store;
  };
  template <typename Item>
  absl::Status Pipeline(size_t in_flight, const Steps<Item>& steps) {
    UntypedSteps untyped;
    untyped.create = [] { return std::shared_ptr<void>(std::make_shared<Item>()); };
    untyped.make = [&](void* item) { return steps.make(static_cast<Item*>(item)); };
    untyped.work = [&](int lane, void* item) { return steps.work(lane, static_cast<Item*>(item)); };
    untyped.place = [&](void* item) { return steps.place(static_cast<Item*>(item)); };
    untyped.store = [&](void* item) {
      return steps.store ? steps.store(static_cast<Item*>(item)) : absl::OkStatus();
    };
    return RunPipeline(in_flight, untyped);
  }

 private:
  struct UntypedSteps {
    std::function<std::shared_ptr<void>()> create;
    std::function<absl::StatusOr<bool>(void*)> make;
    std::function<absl::Status(int, void*)> work;
    std::function<absl::Status(void*)> place;
    std::function<absl::Status(void*)> store;
  };
  absl::Status RunPipeline(size_t in_flight, const UntypedSteps& steps);
  bool stopped() const { return stop_ != nullptr && stop_->load(std::memory_order_relaxed); }

  class Arena;
  std::unique_ptr<Arena> arena_;
  int lanes_;
  const std::atomic<bool>* stop_;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_LANES_H_
