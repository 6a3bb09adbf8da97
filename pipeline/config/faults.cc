#include "config/faults.h"

#include <algorithm>
#include <tuple>
#include <utility>

#include "base/strings.h"
#include "base/utf8.h"

namespace phraseweld {
namespace {

// A longer line is shown only around the fault, so that the caret stays on the screen.
constexpr size_t kShownBefore = 60;
constexpr size_t kShownWidth = 92;

std::string_view LineOf(const Source& source, size_t line) {
  std::string_view rest = source.text;
  for (size_t number = 1; number < line; ++number) {
    const size_t end = rest.find('\n');
    if (end == std::string_view::npos) return "";
    rest.remove_prefix(end + 1);
  }
  rest = rest.substr(0, rest.find('\n'));
  if (!rest.empty() && rest.back() == '\r') rest.remove_suffix(1);
  return rest;
}

// Bytes that would move the terminal's cursor are shown as "?".
std::string Printable(std::string_view text) {
  std::string shown;
  for (size_t at = 0; at < text.size();) {
    const size_t start = at;
    const auto point = NextCodePoint(text, &at);
    if (point == U'\t') {
      shown.push_back(' ');
    } else if (!point.has_value() || IsControl(*point)) {
      shown.push_back('?');
    } else {
      shown.append(text.substr(start, at - start));
    }
  }
  return shown;
}

std::string Excerpt(std::string_view line, size_t byte_column) {
  std::string before = Printable(line.substr(0, byte_column));
  std::string after = Printable(line.substr(byte_column));
  if (DisplayWidth(before) > kShownBefore) {
    size_t cut = 0;
    while (DisplayWidth(std::string_view(before).substr(cut)) > kShownBefore) {
      NextCodePoint(before, &cut);
    }
    before = Concat("...", before.substr(cut));
  }
  const std::string_view fitting = FitWidth(after, kShownWidth - DisplayWidth(before));
  if (fitting.size() < after.size()) after = Concat(fitting, "...");
  const std::string caret_indent(DisplayWidth(before), ' ');
  return Concat("\n    ", before, after, "\n    ", caret_indent, "^");
}

}  // namespace

const Source* Faults::AddSource(std::string label, std::string text, bool has_lines) {
  sources_.push_back({std::move(label), std::move(text), has_lines, sources_.size()});
  return &sources_.back();
}

void Faults::Add(const FaultPlace& place, std::string message) {
  faults_.push_back({place, std::move(message)});
}

absl::Status Faults::Status() const {
  if (faults_.empty()) return absl::OkStatus();
  std::vector<Fault> ordered = faults_;
  std::stable_sort(ordered.begin(), ordered.end(), [](const Fault& left, const Fault& right) {
    const auto key = [](const Fault& fault) {
      return std::tuple(fault.place.source->order, fault.place.line, fault.place.byte_column);
    };
    return key(left) < key(right);
  });
  std::string message;
  for (const Fault& fault : ordered) {
    const Source& source = *fault.place.source;
    AppendTo(&message, message.empty() ? "" : "\n", source.label);
    if (!source.has_lines || fault.place.line == 0) {
      AppendTo(&message, ": ", fault.message);
      continue;
    }
    const std::string_view line = LineOf(source, fault.place.line);
    const size_t byte_column = std::min(fault.place.byte_column, line.size());
    AppendTo(&message, ":", fault.place.line, ":", CodePoints(line.substr(0, byte_column)) + 1,
             ": ", fault.message, Excerpt(line, byte_column));
  }
  return absl::InvalidArgumentError(message);
}

}  // namespace phraseweld
