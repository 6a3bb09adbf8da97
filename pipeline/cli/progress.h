#ifndef PHRASEWELD_CLI_PROGRESS_H_
#define PHRASEWELD_CLI_PROGRESS_H_

#include <cstdint>
#include <functional>
#include <mutex>
#include <string>
#include <string_view>

#include "cli/console.h"

namespace phraseweld {

// How far the work is.
struct ProgressPoint {
  int pass = 0;                // 0: outside the passes
  std::string_view pass_name;  // with a pass only
  std::string_view stage;      // "counting"
  uint64_t done = 0;
  uint64_t total = 0;  // 0: not known
  // What `done` counts: "bytes" are shown with their units, anything else as a plain count.
  std::string_view unit;
};

// Shows progress on `console.err`. On a terminal it is one live line, drawn at most ten times a
// second, no wider than the terminal, and gone in the end; elsewhere a plain line every five
// seconds, so that short work leaves none. It draws only when it is called. Rate and time left are
// those of the stage since its first point. All functions may be called from any thread.
class Progress {
 public:
  // Seconds from any start on, never going back.
  using Clock = std::function<double()>;
  static double SteadySeconds();

  // `console` outlives this object.
  explicit Progress(Console& console, Clock clock = SteadySeconds);
  ~Progress();
  Progress(const Progress&) = delete;
  Progress& operator=(const Progress&) = delete;

  void Update(const ProgressPoint& point);

  // Writes `line` on a line of its own, above the live one.
  void Say(std::string_view line);

  // Removes the live line; a later Update() draws it again.
  void Clear();

 private:
  void ClearLocked();
  std::string Text(const ProgressPoint& point, double now) const;

  std::mutex mutex_;
  Console& console_;
  Clock clock_;
  double next_draw_;
  bool line_is_drawn_ = false;
  int stage_pass_ = -1;
  std::string stage_;
  double stage_start_ = 0;
  uint64_t stage_first_done_ = 0;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_CLI_PROGRESS_H_
