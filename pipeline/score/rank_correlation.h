#ifndef PHRASEWELD_SCORE_RANK_CORRELATION_H_
#define PHRASEWELD_SCORE_RANK_CORRELATION_H_

#include <optional>

#include "absl/types/span.h"

namespace phraseweld {

// How far two orders of the same things agree: 1 where they are one, -1 where one is the other
// backwards. a[i] and b[i] are what thing i is ordered by; both have one size, none is NaN. Nothing
// where the value is not defined: fewer than two things, or all of them tied in a or in b.
// Time n log n. Pure; any thread.

// Spearman's rho: Pearson's correlation of the ranks, tied ones sharing the mean of their ranks
// (Spearman 1904; Kendall & Gibbons 1990, chapter 3).
std::optional<double> SpearmanRho(absl::Span<const double> a, absl::Span<const double> b);

// Kendall's tau-b, which corrects for ties (Kendall 1945), by the algorithm of Knight 1966.
std::optional<double> KendallTauB(absl::Span<const double> a, absl::Span<const double> b);

}  // namespace phraseweld

#endif  // PHRASEWELD_SCORE_RANK_CORRELATION_H_
