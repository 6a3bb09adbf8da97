// ThreadLanes on the standard library's threads, for the build under ThreadSanitizer: it sees every
// lock and hand-over here, and none of oneTBB's, which is not built with it. Stands in for
// run/lanes.cc, so that whole runs can be watched.

#include "run/lanes.h"

#include <condition_variable>
#include <mutex>
#include <thread>
#include <vector>

#include "run/first_error.h"

namespace phraseweld {
namespace {

absl::Status Interrupted() { return absl::CancelledError("interrupted"); }

// Runs body(lane) on `lanes` threads and waits.
void OnThreads(int lanes, const std::function<void(int lane)>& body) {
  std::vector<std::thread> threads;
  for (int lane = 0; lane < lanes; ++lane) threads.emplace_back(body, lane);
  for (std::thread& thread : threads) thread.join();
}

}  // namespace

class ThreadLanes::Arena {};

ThreadLanes::ThreadLanes(int threads, const std::atomic<bool>* stop)
    : lanes_(threads > 0 ? threads
                         : static_cast<int>(std::max(1u, std::thread::hardware_concurrency()))),
      stop_(stop) {}

ThreadLanes::~ThreadLanes() = default;

absl::Status ThreadLanes::ForEach(size_t count,
                                  const std::function<absl::Status(int, size_t)>& work) {
  FirstError error;
  std::atomic<size_t> next{0};
  OnThreads(lanes_, [&](int lane) {
    for (size_t i = next++; i < count && !error.failed() && !stopped(); i = next++) {
      if (absl::Status status = work(lane, i); !status.ok()) error.Set(i, std::move(status));
    }
  });
  if (error.failed()) return error.status();
  return stopped() ? Interrupted() : absl::OkStatus();
}

absl::Status ThreadLanes::RunPipeline(size_t in_flight, const UntypedSteps& steps) {
  FirstError error;
  std::mutex make_mutex, place_mutex;
  std::condition_variable placed;
  size_t made = 0, next_to_place = 0;
  bool ended = false;
  // A thread takes an item through all steps, so that there are no more items than threads.
  const int threads = static_cast<int>(std::min(in_flight, static_cast<size_t>(lanes_)));
  OnThreads(threads, [&](int lane) {
    const std::shared_ptr<void> item = steps.create();
    const auto step = [&](size_t number, const std::function<absl::Status()>& work) {
      if (error.failed() || stopped()) return;
      if (absl::Status status = work(); !status.ok()) error.Set(number, std::move(status));
    };
    while (true) {
      size_t number = 0;
      {
        std::lock_guard<std::mutex> lock(make_mutex);
        if (ended || error.failed() || stopped()) return;
        absl::StatusOr<bool> more = steps.make(item.get());
        if (!more.ok()) error.Set(made, more.status());
        if (!more.ok() || !*more) {
          ended = true;
          return;
        }
        number = made++;
      }
      step(number, [&] { return steps.work(lane, item.get()); });
      {
        std::unique_lock<std::mutex> lock(place_mutex);
        placed.wait(lock, [&] { return next_to_place == number; });
        step(number, [&] { return steps.place(item.get()); });
        ++next_to_place;
      }
      placed.notify_all();
      step(number, [&] { return steps.store(item.get()); });
    }
  });
  if (error.failed()) return error.status();
  return stopped() ? Interrupted() : absl::OkStatus();
}

}  // namespace phraseweld
