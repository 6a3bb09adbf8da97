#include "cli/progress.h"

#include <algorithm>
#include <chrono>
#include <cmath>
#include <utility>

#include "base/strings.h"
#include "base/units.h"
#include "base/utf8.h"

namespace phraseweld {
namespace {

constexpr double kLiveInterval = 0.1;                // seconds; faster than the eye is of no use
constexpr double kPlainInterval = 5.0;               // seconds; a log stays short
constexpr double kShortestStage = 0.5;               // seconds; before, a rate is mostly noise
constexpr std::string_view kClearLine = "\r\x1b[K";  // ECMA-48: erase to the end of the line

std::string Amount(double amount, std::string_view unit) {
  if (unit == "bytes") return RoundedBytes(amount);
  return Concat(FormatCount(static_cast<uint64_t>(std::llround(amount))), " ", unit);
}

}  // namespace

double Progress::SteadySeconds() {
  const auto now = std::chrono::steady_clock::now().time_since_epoch();
  return std::chrono::duration<double>(now).count();
}

Progress::Progress(Console& console, Clock clock) : console_(console), clock_(std::move(clock)) {
  next_draw_ = clock_() + (console_.err_is_terminal ? 0 : kPlainInterval);
}

Progress::~Progress() { Clear(); }

void Progress::Update(const ProgressPoint& point) {
  const std::lock_guard lock(mutex_);
  const double now = clock_();
  if (stage_pass_ != point.pass || stage_ != point.stage) {
    stage_pass_ = point.pass;
    stage_ = point.stage;
    stage_start_ = now;
    stage_first_done_ = point.done;
  }
  if (now < next_draw_) return;
  const std::string text = Text(point, now);
  if (console_.err_is_terminal) {
    // The last column stays free: writing to it makes some terminals start a new line.
    const size_t width = static_cast<size_t>(std::max(console_.width() - 1, 0));
    *console_.err << kClearLine << FitWidth(text, width) << std::flush;
    line_is_drawn_ = true;
    next_draw_ = now + kLiveInterval;
  } else {
    *console_.err << text << std::endl;
    next_draw_ = now + kPlainInterval;
  }
}

void Progress::Say(std::string_view line) {
  const std::lock_guard lock(mutex_);
  ClearLocked();
  *console_.err << line << std::endl;
}

void Progress::Clear() {
  const std::lock_guard lock(mutex_);
  ClearLocked();
}

void Progress::ClearLocked() {
  if (!line_is_drawn_) return;
  *console_.err << kClearLine << std::flush;
  line_is_drawn_ = false;
}

std::string Progress::Text(const ProgressPoint& point, double now) const {
  std::string text;
  if (point.pass > 0) AppendTo(&text, "pass ", point.pass, " (", point.pass_name, "): ");
  AppendTo(&text, point.stage, ", ");
  if (point.total > 0) {
    const double share =
        std::min(1.0, static_cast<double>(point.done) / static_cast<double>(point.total));
    // The unit of a count follows the second number only; sizes carry their own.
    const bool sizes = point.unit == "bytes";
    AppendTo(&text, sizes ? RoundedBytes(static_cast<double>(point.done)) : FormatCount(point.done),
             " of ", Amount(static_cast<double>(point.total), point.unit), " (",
             static_cast<int>(share * 100), "%)");
  } else {
    AppendTo(&text, Amount(static_cast<double>(point.done), point.unit));
  }
  const double seconds = now - stage_start_;
  if (seconds < kShortestStage || point.done <= stage_first_done_) return text;
  const double rate = static_cast<double>(point.done - stage_first_done_) / seconds;
  AppendTo(&text, ", ", Amount(rate, point.unit), "/s");
  if (point.total >= point.done) {
    const double left = static_cast<double>(point.total - point.done) / rate;
    AppendTo(&text, ", ", FormatDuration(left), " left");
  }
  return text;
}

}  // namespace phraseweld
