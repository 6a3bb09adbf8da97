#include "base/units.h"

#include <array>
#include <charconv>
#include <cmath>
#include <limits>

#include "absl/status/status.h"
#include "absl/strings/ascii.h"
#include "absl/strings/str_format.h"
#include "base/nearest.h"
#include "base/strings.h"

namespace phraseweld {
namespace {

struct Unit {
  std::string_view name;
  uint64_t bytes;
};

// Powers of 1024 first: where two are equally short, FormatBytes() takes the first.
constexpr std::array<Unit, 9> kUnits = {{{"TiB", uint64_t{1} << 40},
                                         {"GiB", uint64_t{1} << 30},
                                         {"MiB", uint64_t{1} << 20},
                                         {"KiB", uint64_t{1} << 10},
                                         {"TB", 1'000'000'000'000},
                                         {"GB", 1'000'000'000},
                                         {"MB", 1'000'000},
                                         {"kB", 1'000},
                                         {"B", 1}}};

constexpr std::string_view kSizeWanted = "a size such as 2 GiB, 256 MiB or 1048576";

absl::Status NotASize(std::string_view text) {
  return absl::InvalidArgumentError(Concat(kSizeWanted, ", not '", text, "'"));
}

absl::StatusOr<uint64_t> UnitBytes(std::string_view name, std::string_view text) {
  if (name.empty()) return 1;
  for (const Unit& unit : kUnits) {
    if (AsciiLower(unit.name) == AsciiLower(name)) return unit.bytes;
  }
  // "2 G" leaves open which of two sizes is meant, so both are named and none is guessed.
  for (const Unit& unit : kUnits) {
    if (name.size() == 1 && unit.name.size() == 3 &&
        absl::ascii_tolower(unit.name[0]) == absl::ascii_tolower(name[0])) {
      return absl::InvalidArgumentError(Concat(kSizeWanted, ", not '", text, "'; write ", unit.name,
                                               " (powers of 1024) or ", unit.name.substr(0, 1),
                                               "B (of 1000)"));
    }
  }
  constexpr std::array<std::string_view, 9> kNames = {"TiB", "GiB", "MiB", "KiB", "TB",
                                                      "GB",  "MB",  "kB",  "B"};
  return absl::InvalidArgumentError(
      Concat(kSizeWanted, ", not '", text, "'", DidYouMean(name, kNames)));
}

}  // namespace

absl::StatusOr<uint64_t> ParseBytes(std::string_view text) {
  const std::string_view trimmed = Strip(text);
  const size_t number_end = std::min(trimmed.find_first_not_of("0123456789."), trimmed.size());
  const std::string_view number = trimmed.substr(0, number_end);
  const size_t point = std::min(number.find('.'), number.size());
  const std::string_view whole = number.substr(0, point);
  const std::string_view fraction = point < number.size() ? number.substr(point + 1) : "";
  const bool point_without_fraction = point < number.size() && fraction.empty();
  if (whole.empty() || point_without_fraction || Contains(fraction, ".")) {
    return NotASize(text);
  }
  const auto unit = UnitBytes(Strip(trimmed.substr(number_end)), text);
  if (!unit.ok()) return unit.status();

  // Exact: digits and the unit are multiplied as integers and the power of ten divided out at the
  // end. 2^40 * 10^20 is below 2^107, so 20 digits, the most in 64 bits, cannot overflow 128.
  constexpr size_t kMostDigits = 20;
  if (whole.size() + fraction.size() > kMostDigits) return NotASize(text);
  unsigned __int128 value = 0;
  unsigned __int128 scale = 1;
  for (const char digit : whole) value = value * 10 + static_cast<unsigned>(digit - '0');
  for (const char digit : fraction) {
    value = value * 10 + static_cast<unsigned>(digit - '0');
    scale *= 10;
  }
  value *= *unit;
  if (value % scale != 0) {
    return absl::InvalidArgumentError(
        Concat("a whole number of bytes, which '", text, "' does not come to"));
  }
  value /= scale;
  if (value > std::numeric_limits<uint64_t>::max()) return NotASize(text);
  return static_cast<uint64_t>(value);
}

std::string FormatBytes(uint64_t bytes) {
  std::string best = Concat(bytes);
  if (bytes == 0) return best;
  size_t best_digits = best.size();
  for (const Unit& unit : kUnits) {
    if (unit.bytes == 1 || bytes % unit.bytes != 0) continue;
    const std::string digits = Concat(bytes / unit.bytes);
    if (digits.size() >= best_digits) continue;
    best = Concat(digits, " ", unit.name);
    best_digits = digits.size();
  }
  return best;
}

std::string RoundedBytes(double bytes) {
  constexpr std::array<std::string_view, 5> kNames = {"B", "KiB", "MiB", "GiB", "TiB"};
  size_t power = 0;
  while (bytes >= 1000 && power + 1 < kNames.size()) {
    bytes /= 1024;
    ++power;
  }
  const int decimals = power == 0 || bytes >= 100 ? 0 : bytes >= 10 ? 1 : 2;
  return absl::StrFormat("%.*f %s", decimals, bytes, kNames[power]);
}

std::string FormatCount(uint64_t count) {
  std::string digits = Concat(count);
  for (size_t at = digits.size(); at > 3;) {
    at -= 3;
    digits.insert(at, 1, ',');
  }
  return digits;
}

std::string FormatDuration(double seconds) {
  if (!std::isfinite(seconds) || seconds < 0) return "?";
  const double rounded = std::round(seconds);
  constexpr double kLongest = 1e15;  // beyond it a double no longer counts single seconds
  if (rounded > kLongest) return "?";
  const auto whole = static_cast<int64_t>(rounded);
  if (whole < 60) return Concat(whole, " s");
  if (whole < 3600) return Concat(whole / 60, " min ", whole % 60, " s");
  return Concat(whole / 3600, " h ", whole % 3600 / 60, " min");
}

absl::StatusOr<int64_t> ParseWhole(std::string_view text, int64_t least, int64_t most) {
  int64_t value = 0;
  const auto [end, error] = std::from_chars(text.data(), text.data() + text.size(), value);
  const bool is_whole = error == std::errc() && end == text.data() + text.size();
  if (is_whole && value >= least && value <= most) return value;
  const std::string range = most == std::numeric_limits<int64_t>::max()
                                ? Concat("of at least ", least)
                                : Concat("from ", least, " to ", most);
  return absl::InvalidArgumentError(Concat("a whole number ", range, ", not '", text, "'"));
}

absl::StatusOr<double> ParseNumber(std::string_view text) {
  // from_chars takes no leading plus and, unlike strtod, heeds no locale.
  double value = 0;
  const auto [end, error] = std::from_chars(text.data(), text.data() + text.size(), value);
  if (error == std::errc() && end == text.data() + text.size() && std::isfinite(value)) {
    return value;
  }
  return absl::InvalidArgumentError(Concat("a number such as 5 or 0.25, not '", text, "'"));
}

std::string FormatNumber(double value) {
  // The longest shortest form: a sign, 309 digits before the point or "0." and 340 after it.
  std::array<char, 400> buffer;
  const auto [end, error] =
      std::to_chars(buffer.data(), buffer.data() + buffer.size(), value, std::chars_format::fixed);
  return error == std::errc() ? std::string(buffer.data(), end) : Concat(value);
}

}  // namespace phraseweld
