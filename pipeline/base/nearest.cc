#include "base/nearest.h"

#include <algorithm>
#include <array>
#include <vector>

#include "base/strings.h"

namespace phraseweld {
namespace {

// Longer texts are no misspelt names, and the table below grows with the square of the length.
constexpr size_t kLongestName = 64;

}  // namespace

size_t EditDistance(std::string_view from, std::string_view to) {
  // Row and column 0 hold a bound that no path through them can beat; row and column 1 are the
  // empty prefixes.
  const size_t rows = from.size() + 2;
  const size_t columns = to.size() + 2;
  const size_t bound = from.size() + to.size();
  std::vector<size_t> table(rows * columns, bound);
  const auto cell = [&table, columns](size_t row, size_t column) -> size_t& {
    return table[row * columns + column];
  };
  for (size_t row = 1; row < rows; ++row) cell(row, 1) = row - 1;
  for (size_t column = 1; column < columns; ++column) cell(1, column) = column - 1;

  std::array<size_t, 256> last_row_with{};  // by byte of `from`, 0: not met yet
  for (size_t row = 2; row < rows; ++row) {
    size_t last_match_column = 0;
    for (size_t column = 2; column < columns; ++column) {
      const size_t swap_row = last_row_with[static_cast<unsigned char>(to[column - 2])];
      const size_t swap_column = last_match_column;
      const bool same = from[row - 2] == to[column - 2];
      if (same) last_match_column = column - 1;
      size_t best = cell(row - 1, column - 1) + (same ? 0 : 1);
      best = std::min(best, cell(row, column - 1) + 1);
      best = std::min(best, cell(row - 1, column) + 1);
      const size_t swap =
          cell(swap_row, swap_column) + (row - 2 - swap_row) + 1 + (column - 2 - swap_column);
      cell(row, column) = std::min(best, swap);
    }
    last_row_with[static_cast<unsigned char>(from[row - 2])] = row - 1;
  }
  return cell(rows - 1, columns - 1);
}

std::optional<std::string_view> NearestName(std::string_view wrong,
                                            absl::Span<const std::string_view> names) {
  if (wrong.empty() || wrong.size() > kLongestName) return std::nullopt;
  const std::string lowered = AsciiLower(wrong);
  std::optional<std::string_view> nearest;
  size_t least = 0;
  for (const std::string_view name : names) {
    if (name.size() > kLongestName) continue;
    const size_t distance = EditDistance(lowered, AsciiLower(name));
    const size_t longer = std::max(wrong.size(), name.size());
    const size_t shorter = std::min(wrong.size(), name.size());
    const bool near = distance <= std::max<size_t>(1, longer / 3) && distance < shorter;
    if (near && (!nearest.has_value() || distance < least)) {
      nearest = name;
      least = distance;
    }
  }
  return nearest;
}

std::string DidYouMean(std::string_view wrong, absl::Span<const std::string_view> names) {
  const std::optional<std::string_view> nearest = NearestName(wrong, names);
  return nearest.has_value() ? Concat("; did you mean '", *nearest, "'?") : "";
}

}  // namespace phraseweld
