#include "run/text_table.h"

#include <algorithm>
#include <optional>

#include "absl/strings/str_format.h"
#include "base/strings.h"
#include "base/utf8.h"

namespace phraseweld {
namespace {

constexpr std::string_view kCut = "…";
constexpr std::string_view kReplacement = "\xEF\xBF\xBD";
constexpr size_t kIndent = 2;
constexpr size_t kBetween = 2;
constexpr size_t kLeastFirst = 12;  // columns of the first column, however wide the others are

std::string WithoutControls(std::string_view text) {
  std::string clean;
  for (size_t at = 0; at < text.size();) {
    const size_t begin = at;
    const std::optional<char32_t> point = NextCodePoint(text, &at);
    clean += point && !IsControl(*point) ? text.substr(begin, at - begin) : kReplacement;
  }
  return clean;
}

}  // namespace

std::string Shown(std::string_view text, size_t width) {
  std::string clean = WithoutControls(text);
  if (DisplayWidth(clean) <= width) return clean;
  return Concat(FitWidth(clean, width - 1), kCut);
}

std::string TextTable::Text() const {
  std::vector<size_t> widths(rows_[0].size(), 0);
  for (const auto& row : rows_) {
    for (size_t i = 0; i < row.size(); ++i) widths[i] = std::max(widths[i], DisplayWidth(row[i]));
  }
  size_t others = kIndent;
  for (size_t i = 1; i < widths.size(); ++i) others += kBetween + widths[i];
  const size_t room = others + kLeastFirst < kTextWidth ? kTextWidth - others : kLeastFirst;
  widths[0] = std::min(widths[0], room);
  std::string text;
  for (const auto& row : rows_) {
    std::string line(kIndent, ' ');
    for (size_t i = 0; i < row.size(); ++i) {
      if (i == 0) {
        const std::string cell = Shown(row[0], widths[0]);
        line += cell;
        if (row.size() > 1) line.append(widths[0] - std::min(widths[0], DisplayWidth(cell)), ' ');
      } else {
        line.append(kBetween + widths[i] - DisplayWidth(row[i]), ' ');
        line += row[i];
      }
    }
    line.erase(line.find_last_not_of(' ') + 1);
    AppendTo(&text, line, "\n");
  }
  return text;
}

std::string WrappedText(std::string_view text, size_t indent) {
  const std::string clean = WithoutControls(text);
  std::string wrapped, line;
  for (const std::string_view word : Split(clean, ' ')) {
    if (word.empty()) continue;
    if (!line.empty() && indent + DisplayWidth(line) + 1 + DisplayWidth(word) > kTextWidth) {
      AppendTo(&wrapped, std::string(indent, ' '), line, "\n");
      line.clear();
    }
    if (!line.empty()) line += ' ';
    line += word;
  }
  return Concat(wrapped, std::string(indent, ' '), line, "\n");
}

void AppendTitle(std::string* text, std::string_view title) { AppendTo(text, "\n", title, "\n"); }

std::string Percent(double part, double whole) {
  return whole > 0 ? absl::StrFormat("%.1f %%", 100 * part / whole) : "–";
}

std::string Share(double value) { return absl::StrFormat("%.3f", value); }

}  // namespace phraseweld
