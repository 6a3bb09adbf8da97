#ifndef PHRASEWELD_BASE_UNITS_H_
#define PHRASEWELD_BASE_UNITS_H_

#include <cstdint>
#include <string>
#include <string_view>

#include "absl/status/statusor.h"

namespace phraseweld {

// Sizes, numbers and durations as people write and read them. Everything here is pure and may be
// called from any thread. Errors are InvalidArgument; their messages start with what the text
// should have been ("a size such as 2 GiB ...") so that the caller can put the key's name first.

// Bytes from a number with an optional unit: "2 GiB", "256MiB", "1.5 GiB", "500 MB", "1048576".
// Units are B, kB, MB, GB, TB (powers of 1000) and KiB, MiB, GiB, TiB (powers of 1024), in any
// case. A fraction must come out as a whole number of bytes; the value must fit 64 bits.
absl::StatusOr<uint64_t> ParseBytes(std::string_view text);

// The shortest text that ParseBytes() reads back as exactly `bytes`: "2 GiB", "500 MB", "1048577".
// Between equally short ones the power of 1024 wins.
std::string FormatBytes(uint64_t bytes);

// For people watching: at most four digits and a unit, rounded ("1.53 GiB", "812 KiB", "17 B").
std::string RoundedBytes(double bytes);

// For people watching: counts with thousands separated ("1,234,567").
std::string FormatCount(uint64_t count);

// For people watching: "48 s", "3 min 20 s", "2 h 5 min". Rounded to whole seconds; negative and
// non-finite durations are "?".
std::string FormatDuration(double seconds);

// A whole number in [least, most], in decimal digits.
absl::StatusOr<int64_t> ParseWhole(std::string_view text, int64_t least, int64_t most);

// A finite number in decimal ("5", "-0.25", "1e-3").
absl::StatusOr<double> ParseNumber(std::string_view text);

// The shortest decimal text, without an exponent, that ParseNumber() reads back as exactly
// `value`, which must be finite.
std::string FormatNumber(double value);

}  // namespace phraseweld

#endif  // PHRASEWELD_BASE_UNITS_H_
