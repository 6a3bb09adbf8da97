#include "run/lanes.h"

#include <tbb/global_control.h>
#include <tbb/parallel_for.h>
#include <tbb/parallel_pipeline.h>
#include <tbb/task_arena.h>

#include <mutex>
#include <thread>
#include <vector>

#include "run/first_error.h"

namespace phraseweld {
namespace {

absl::Status Interrupted() { return absl::CancelledError("interrupted"); }

}  // namespace

class ThreadLanes::Arena {
 public:
  explicit Arena(int threads)
      : control_(tbb::global_control::max_allowed_parallelism, static_cast<size_t>(threads)),
        arena_(threads) {}
  tbb::task_arena& arena() { return arena_; }

 private:
  tbb::global_control control_;
  tbb::task_arena arena_;
};

ThreadLanes::ThreadLanes(int threads, const std::atomic<bool>* stop)
    : lanes_(threads > 0 ? threads
                         : static_cast<int>(std::max(1u, std::thread::hardware_concurrency()))),
      stop_(stop) {
  arena_ = std::make_unique<Arena>(lanes_);
}

ThreadLanes::~ThreadLanes() = default;

absl::Status ThreadLanes::ForEach(size_t count,
                                  const std::function<absl::Status(int, size_t)>& work) {
  FirstError error;
  arena_->arena().execute([&] {
    tbb::parallel_for(tbb::blocked_range<size_t>(0, count, 1),
                      [&](const tbb::blocked_range<size_t>& range) {
                        const int lane = tbb::this_task_arena::current_thread_index();
                        for (size_t i = range.begin(); i != range.end(); ++i) {
                          if (error.failed() || stopped()) return;
                          if (absl::Status status = work(lane, i); !status.ok())
                            error.Set(i, std::move(status));
                        }
                      });
  });
  if (error.failed()) return error.status();
  return stopped() ? Interrupted() : absl::OkStatus();
}

absl::Status ThreadLanes::RunPipeline(size_t in_flight, const UntypedSteps& steps) {
  struct Carrier {
    std::shared_ptr<void> item;
    size_t number = 0;
  };
  FirstError error;
  std::mutex free_mutex;
  std::vector<std::unique_ptr<Carrier>> slots;
  std::vector<Carrier*> free_slots;
  size_t made = 0;
  const auto fail = [&](Carrier* slot, absl::Status status) {
    if (!status.ok()) error.Set(slot->number, std::move(status));
  };
  // After an error the items still under way pass through untouched.
  const auto make = [&](tbb::flow_control& flow) -> Carrier* {
    if (error.failed() || stopped()) {
      flow.stop();
      return nullptr;
    }
    Carrier* slot = nullptr;
    {
      std::lock_guard<std::mutex> lock(free_mutex);
      if (free_slots.empty()) {
        slots.push_back(std::make_unique<Carrier>());
        slots.back()->item = steps.create();
        free_slots.push_back(slots.back().get());
      }
      slot = free_slots.back();
      free_slots.pop_back();
    }
    slot->number = made++;
    absl::StatusOr<bool> more = steps.make(slot->item.get());
    if (!more.ok() || !*more) {
      if (!more.ok()) fail(slot, more.status());
      flow.stop();
      return nullptr;
    }
    return slot;
  };
  const auto work = [&](Carrier* slot) {
    if (!error.failed() && !stopped()) {
      fail(slot, steps.work(tbb::this_task_arena::current_thread_index(), slot->item.get()));
    }
    return slot;
  };
  const auto place = [&](Carrier* slot) {
    if (!error.failed() && !stopped()) fail(slot, steps.place(slot->item.get()));
    return slot;
  };
  const auto store = [&](Carrier* slot) {
    if (!error.failed() && !stopped()) fail(slot, steps.store(slot->item.get()));
    std::lock_guard<std::mutex> lock(free_mutex);
    free_slots.push_back(slot);
  };
  arena_->arena().execute([&] {
    tbb::parallel_pipeline(
        in_flight,
        tbb::make_filter<void, Carrier*>(tbb::filter_mode::serial_in_order, make) &
            tbb::make_filter<Carrier*, Carrier*>(tbb::filter_mode::parallel, work) &
            tbb::make_filter<Carrier*, Carrier*>(tbb::filter_mode::serial_in_order, place) &
            tbb::make_filter<Carrier*, void>(tbb::filter_mode::parallel, store));
  });
  if (error.failed()) return error.status();
  return stopped() ? Interrupted() : absl::OkStatus();
}

}  // namespace phraseweld
