#include "reference/measures.h"

#include <cmath>

#include "reference/json_writer.h"

namespace phraseweld::reference {
namespace {

// The probability that a Poisson variable of mean `mean` < n is n or more, which is the regularised
// lower incomplete gamma function P(n, mean): the sum over k >= n of e^-mean·mean^k/k!.
double PoissonTail(double n, double mean) {
  double sum = 1;
  double term = 1;  // of the terms divided by the first
  for (double k = n + 1; term > sum * 1e-18; ++k) {
    term *= mean / k;
    sum += term;
  }
  return std::exp(n * std::log(mean) - mean - std::lgamma(n + 1)) * sum;
}

// O·ln(O/E). 0·ln 0 = 0; a cell in which O or E is not above 0, as can happen with the margins of
// words, has no logarithm and adds nothing.
long double G2Cell(long double o, long double e) {
  return o > 0 && e > 0 ? o * std::log(o / e) : 0;
}

// (O−E)²/E. A cell in which nothing is expected adds nothing.
long double Chi2Cell(long double o, long double e) { return e > 0 ? (o - e) * (o - e) / e : 0; }

// A quotient that is 0 where the denominator is.
long double QuotientOrZero(long double a, long double b) { return b == 0 ? 0 : a / b; }

}  // namespace

double Expected(const Counts& counts) {
  return static_cast<double>(counts.L) * static_cast<double>(counts.R) /
         static_cast<double>(counts.N);
}

// Garwood 1936: ½·χ²(0.025; 2n), that is the mean at which the chance of n or more is 0.025.
double PoissonLowerLimit(uint64_t n) {
  static std::map<uint64_t, double> known;
  const auto found = known.find(n);
  if (found != known.end()) return found->second;
  double low = 0;
  double high = static_cast<double>(n);
  while (high - low > 1e-14 * high) {
    const double middle = low + (high - low) / 2;
    if (middle <= low || middle >= high) break;
    if (PoissonTail(static_cast<double>(n), middle) < 0.025) {
      low = middle;
    } else {
      high = middle;
    }
  }
  return known[n] = low + (high - low) / 2;
}

// Section 5, the table.
std::map<Quantity, double> Measure(const Counts& counts) {
  const long double n = static_cast<long double>(counts.n);
  const long double L = static_cast<long double>(counts.L);
  const long double R = static_cast<long double>(counts.R);
  const long double N = static_cast<long double>(counts.N);
  const long double M = static_cast<long double>(counts.M);
  const long double documents = static_cast<long double>(counts.documents);

  const long double O11 = n;
  const long double O12 = L - n;
  const long double O21 = R - n;
  const long double O22 = N - L - R + n;
  const long double E = L * R / N;
  const long double E11 = E;
  const long double E12 = L * (N - R) / N;
  const long double E21 = (N - L) * R / N;
  const long double E22 = (N - L) * (N - R) / N;

  const long double pmi = std::log2(n / E);
  long double g2 = 2 * (G2Cell(O11, E11) + G2Cell(O12, E12) + G2Cell(O21, E21) + G2Cell(O22, E22));
  if (n < E) g2 = -std::abs(g2);

  std::map<Quantity, long double> scores;
  scores[Quantity::kPmi] = pmi;
  scores[Quantity::kNpmi] = n == N ? 1 : pmi / -std::log2(n / N);
  scores[Quantity::kPmi2] = pmi + 1 * std::log2(n / M);
  scores[Quantity::kPmi3] = pmi + 2 * std::log2(n / M);
  scores[Quantity::kPmiFloor] = std::log2(PoissonLowerLimit(counts.n) / E);
  scores[Quantity::kG2] = g2;
  scores[Quantity::kChi2] =
      Chi2Cell(O11, E11) + Chi2Cell(O12, E12) + Chi2Cell(O21, E21) + Chi2Cell(O22, E22);
  scores[Quantity::kT] = (n - E) / std::sqrt(n);
  scores[Quantity::kDice] = 2 * n / (L + R);
  scores[Quantity::kDpForward] = QuotientOrZero(n, L) - QuotientOrZero(O21, N - L);
  scores[Quantity::kDpBackward] = QuotientOrZero(n, R) - QuotientOrZero(O12, N - R);
  scores[Quantity::kBurst] = n / documents;
  // Scores come from a wider type than the program's, so that its last bits decide no rounding
  // here.
  std::map<Quantity, double> values;
  for (const auto& [quantity, value] : scores) {
    values[quantity] = RoundToNineDecimals(static_cast<double>(value));
  }

  values[Quantity::kOccurrences] = static_cast<double>(n);
  values[Quantity::kDocuments] = static_cast<double>(documents);
  return values;
}

}  // namespace phraseweld::reference
