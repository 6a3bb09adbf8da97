#ifndef PHRASEWELD_RUN_OBSERVER_H_
#define PHRASEWELD_RUN_OBSERVER_H_

#include <atomic>
#include <chrono>
#include <cstdint>
#include <functional>
#include <string>
#include <utility>
#include <vector>

namespace phraseweld {

// A stage of a run, as a person following it sees it.
struct Stage {
  int pass = 0;  // 0: outside of passes
  std::string pass_name;
  std::string name;    // "read", "count", …
  uint64_t total = 0;  // amount of work in `unit`; 0: not known
  std::string unit;    // "bytes", "tokens"
};

// What a run tells about itself while it works. The functions may be called from any thread.
struct Observer {
  std::function<void(const Stage&)> stage = [](const Stage&) {};
  std::function<void(uint64_t done)> advance = [](uint64_t) {};  // of the current stage, in all
  const std::atomic<bool>* stop = nullptr;
};

// Seconds a stage, in the order of first use.
class Timings {
 public:
  // Ends the stage before, if any.
  void Begin(const std::string& stage) {
    End();
    stage_ = stage;
    begun_ = std::chrono::steady_clock::now();
  }
  void End() {
    if (stage_.empty()) return;
    const double seconds =
        std::chrono::duration<double>(std::chrono::steady_clock::now() - begun_).count();
    for (auto& [name, sum] : seconds_) {
      if (name == stage_) {
        sum += seconds;
        stage_.clear();
        return;
      }
    }
    seconds_.emplace_back(std::move(stage_), seconds);
    stage_.clear();
  }
  const std::vector<std::pair<std::string, double>>& seconds() const { return seconds_; }

 private:
  std::string stage_;
  std::chrono::steady_clock::time_point begun_;
  std::vector<std::pair<std::string, double>> seconds_;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_OBSERVER_H_
