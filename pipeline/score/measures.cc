#include "score/measures.h"

#include <array>
#include <charconv>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <limits>
#include <numbers>
#include <string>

#include "absl/numeric/int128.h"

namespace phraseweld {
namespace {

// Names as in the literature: n, L, R, N are the counts of SlotTable, E = L*R/N the expected
// number, O11 = n, O12 = L-n, O21 = R-n, O22 = N-L-R+n the cells of the 2x2 table.
//
// Where the margins are word frequencies, a pair of twice the same word can have more tokens in its
// margins than the text has room for ("no no no": n = 2, L = R = N = 3), and O22 is negative. The
// formulas are then taken as they stand, but a cell below zero adds nothing to a logarithm, just as
// an empty one, and a term with denominator 0 is 0.

constexpr double kBillion = 1e9;

// Scores are printed to nine decimals, and two programs must print the same ones. A double's own
// rounding errors would decide some of the last digits, so that sums and logarithms are taken in
// the widest type there is and become a double once, at the end.
using Wide = long double;

// n*N - L*R. The two products can agree in more digits than a double has, so that their difference
// is taken in whole numbers; this is what keeps every measure right near independence.
Wide ExcessProduct(const SlotTable& table) {
  const absl::uint128 observed = absl::uint128(table.n) * table.total;
  const absl::uint128 expected = absl::uint128(table.left) * table.right;
  return observed >= expected ? static_cast<Wide>(observed - expected)
                              : -static_cast<Wide>(expected - observed);
}

// n - E.
Wide Excess(const SlotTable& table) {
  return ExcessProduct(table) / static_cast<Wide>(table.total);
}

// `billionths` / 10^9, without trailing zeros.
std::string FormatBillionths(int64_t billionths) {
  constexpr int64_t kOne = 1000000000;
  std::array<char, 24> text;
  char* out = text.data();
  if (billionths < 0) *out++ = '-';
  const int64_t size = std::abs(billionths);
  out = std::to_chars(out, text.data() + text.size(), size / kOne).ptr;
  int64_t rest = size % kOne;
  if (rest != 0) *out++ = '.';
  for (int64_t digit = kOne / 10; rest != 0; digit /= 10) {
    *out++ = static_cast<char>('0' + rest / digit);
    rest %= digit;
  }
  return std::string(text.data(), out);
}

// Church & Hanks 1990; Fano 1961: log2(n/E) = log2(n*N / (L*R)).
Wide Pmi(const SlotTable& table) {
  const Wide margins = static_cast<Wide>(table.left) * static_cast<Wide>(table.right);
  const Wide ratio = static_cast<Wide>(table.n) * static_cast<Wide>(table.total) / margins;
  if (ratio > 0.5 && ratio < 2) {
    return std::log1p(ExcessProduct(table) / margins) * std::numbers::log2e_v<Wide>;
  }
  return std::log2(ratio);
}

// Bouma 2009: pmi / -log2(n/N), whose limit where both vanish is set to 1.
double Npmi(const SlotTable& table) {
  if (table.n >= table.total) return 1;
  const Wide n = static_cast<Wide>(table.n);
  const Wide rest = static_cast<Wide>(table.total - table.n);
  const Wide information = rest < n ? std::log1p(rest / n) * std::numbers::log2e_v<Wide>
                                    : std::log2(static_cast<Wide>(table.total) / n);
  return Pmi(table) / information;
}

// Daille 1994: pmi + (k-1) * log2(n/M).
double PmiToThePower(const SlotTable& table, int k) {
  return Pmi(table) +
         (k - 1) * std::log2(static_cast<Wide>(table.n) / static_cast<Wide>(table.all));
}

double PmiFloor(const SlotTable& table) {
  return std::log2(PoissonLower95(table.n) / Expected(table));
}

// O*ln(O/E) - (O - E), which is never negative. Near O = E the two parts cancel, and the series of
// Loader 2000 ("Fast and accurate computation of binomial probabilities", the function bd0) has
// every digit. `difference` is O - E, which the caller knows more exactly than O and E tell.
Wide CellDeviance(Wide observed, Wide expected, Wide difference) {
  if (observed <= 0 || expected <= 0) return -difference;
  if (std::abs(difference) >= 0.1 * (observed + expected)) {
    return observed * std::log(observed / expected) - difference;
  }
  const Wide ratio = difference / (observed + expected);
  Wide sum = difference * ratio;
  Wide power = 2 * observed * ratio;
  for (int odd = 3;; odd += 2) {
    power *= ratio * ratio;
    const Wide next = sum + power / odd;
    if (next == sum) return sum;
    sum = next;
  }
}

// The four cells of a table and their expected numbers.
struct Cells {
  std::array<Wide, 4> observed;
  std::array<Wide, 4> expected;
};

Cells CellsOf(const SlotTable& table) {
  const Wide n = static_cast<Wide>(table.n);
  const Wide left = static_cast<Wide>(table.left);
  const Wide right = static_cast<Wide>(table.right);
  const Wide total = static_cast<Wide>(table.total);
  const uint64_t outside_left = table.total - table.left;
  const uint64_t right_alone = table.right - table.n;
  const Wide not_left = static_cast<Wide>(outside_left);
  const Wide not_right = static_cast<Wide>(table.total - table.right);
  const Wide left_only = static_cast<Wide>(table.left - table.n);
  const Wide right_only = static_cast<Wide>(right_alone);
  const Wide neither = outside_left >= right_alone ? static_cast<Wide>(outside_left - right_alone)
                                                   : -static_cast<Wide>(right_alone - outside_left);
  return {{n, left_only, right_only, neither},
          {left * right / total, left * not_right / total, not_left * right / total,
           not_left * not_right / total}};
}

// Dunning 1993: 2 * sum of O*ln(O/E), with the sign of n - E. The differences O - E of the four
// cells are n - E or its negative and add up to 0, so that they may be taken off cell by cell.
double LogLikelihoodRatio(const SlotTable& table) {
  const Cells cells = CellsOf(table);
  const Wide excess = Excess(table);
  const std::array<Wide, 4> differences = {excess, -excess, -excess, excess};
  Wide sum = 0;
  for (size_t i = 0; i < 4; ++i) {
    sum += CellDeviance(cells.observed[i], cells.expected[i], differences[i]);
  }
  return std::copysign(2 * sum, excess);
}

// Pearson: sum of (O-E)^2 / E, no correction for continuity.
double ChiSquared(const SlotTable& table) {
  const Wide excess = Excess(table);
  Wide sum = 0;
  for (const Wide expected : CellsOf(table).expected) {
    if (expected > 0) sum += excess * (excess / expected);
  }
  return sum;
}

// Church et al. 1991; Manning & Schuetze 1999, section 5.3.1: (n - E) / sqrt(n).
double StudentT(const SlotTable& table) {
  return Excess(table) / std::sqrt(static_cast<Wide>(table.n));
}

// Dice 1945: 2n / (L + R).
double Dice(const SlotTable& table) {
  return 2 * static_cast<Wide>(table.n) /
         (static_cast<Wide>(table.left) + static_cast<Wide>(table.right));
}

// Allan 1980: P(outcome | cue) - P(outcome | no cue) = n/cue - (outcome-n) / (N-cue).
double DeltaP(uint64_t n, uint64_t cue, uint64_t outcome, uint64_t total) {
  const Wide with = static_cast<Wide>(n) / static_cast<Wide>(cue);
  if (total == cue) return with;
  return with - static_cast<Wide>(outcome - n) / static_cast<Wide>(total - cue);
}

// Church & Gale 1995: mean occurrences in a document that has the type.
double Burst(const SlotTable& table) {
  if (table.documents == 0) return 0;
  return static_cast<double>(table.n) / static_cast<double>(table.documents);
}

double Unrounded(Quantity quantity, const SlotTable& table) {
  switch (quantity) {
    case Quantity::kOccurrences:
      return static_cast<double>(table.n);
    case Quantity::kDocuments:
      return static_cast<double>(table.documents);
    case Quantity::kPmi:
      return static_cast<double>(Pmi(table));
    case Quantity::kNpmi:
      return Npmi(table);
    case Quantity::kPmi2:
      return PmiToThePower(table, 2);
    case Quantity::kPmi3:
      return PmiToThePower(table, 3);
    case Quantity::kPmiFloor:
      return PmiFloor(table);
    case Quantity::kG2:
      return LogLikelihoodRatio(table);
    case Quantity::kChi2:
      return ChiSquared(table);
    case Quantity::kT:
      return StudentT(table);
    case Quantity::kDice:
      return Dice(table);
    case Quantity::kDpForward:
      return DeltaP(table.n, table.left, table.right, table.total);
    case Quantity::kDpBackward:
      return DeltaP(table.n, table.right, table.left, table.total);
    case Quantity::kBurst:
      return Burst(table);
  }
  return 0;
}

}  // namespace

double Expected(const SlotTable& table) {
  return static_cast<double>(table.left) * static_cast<double>(table.right) /
         static_cast<double>(table.total);
}

double Score(Quantity quantity, const SlotTable& table) {
  return Round9(Unrounded(quantity, table));
}

double Round9(double value) {
  // Doubles from here on lie further apart than 1e-9.
  constexpr double kCoarse = 0x1p53 / kBillion;
  if (std::abs(value) >= kCoarse) return value;
  return std::round(value * kBillion) / kBillion + 0.0;  // + 0.0 turns -0 into 0
}

std::string FormatScore(double value) {
  value = Round9(value);
  // Up to here the product below is off by less than a quarter, so that the nearest whole number is
  // the one that all nine decimals of the value spell. The general way takes ten times as long.
  constexpr double kExact = 0x1p50 / kBillion;
  if (std::abs(value) < kExact) return FormatBillionths(std::llround(value * kBillion));
  // All digits before the point of the largest double, a sign, the point and 9 decimals.
  constexpr size_t kLongest = std::numeric_limits<double>::max_exponent10 + 12;
  std::array<char, kLongest> text;
  char* end =
      std::to_chars(text.data(), text.data() + text.size(), value, std::chars_format::fixed, 9).ptr;
  while (end[-1] == '0') --end;
  if (end[-1] == '.') --end;
  return std::string(text.data(), end);
}

}  // namespace phraseweld
