#ifndef PHRASEWELD_BASE_NEAREST_H_
#define PHRASEWELD_BASE_NEAREST_H_

#include <cstddef>
#include <optional>
#include <string>
#include <string_view>

#include "absl/types/span.h"

namespace phraseweld {

// The least number of single-byte insertions, deletions, replacements and swaps of neighbours that
// turn `from` into `to` (Damerau 1964; the unrestricted distance, by the algorithm of Lowrance and
// Wagner 1975, so it is a metric). Time and memory are the product of the lengths.
size_t EditDistance(std::string_view from, std::string_view to);

// The name most like `wrong`, or none when all are too far off to be what was meant. ASCII case
// counts for nothing, so "Pmi" is at distance 0 from "pmi". Of equally near names the first wins.
// At most a third of the longer text may differ (one letter is always allowed), and something must
// be left in common.
std::optional<std::string_view> NearestName(std::string_view wrong,
                                            absl::Span<const std::string_view> names);

// "; did you mean 'x'?", or "" when nothing is near; to be put behind an error's text.
std::string DidYouMean(std::string_view wrong, absl::Span<const std::string_view> names);

}  // namespace phraseweld

#endif  // PHRASEWELD_BASE_NEAREST_H_
