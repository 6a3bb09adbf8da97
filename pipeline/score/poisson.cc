#include <array>
#include <cmath>
#include <cstdint>

#include "score/measures.h"

namespace phraseweld {
namespace {

// The limit is the x at which a Poisson count with mean x is n or more with probability 2.5 %:
// P(n, x) = 0.025, P being the regularised lower incomplete gamma function. Solving that takes time
// that grows with sqrt(n), hence two ways: small n are solved once and kept, large n come from an
// expansion that is exact enough from kSolved on (there 5e-14 relative, falling with n^-4).
constexpr uint64_t kSolved = 512;
constexpr double kTail = 0.025;

// P(n, x) = p * S with the Poisson probability p = e^-x x^n / n! and the series
// S = 1 + x/(n+1) + x^2/((n+1)(n+2)) + ... (Abramowitz & Stegun 6.5.29), all terms positive.
// Newton's method on ln P as a function of s = ln x, which is concave there:
// d ln P / ds = n / S.
double Solve(uint64_t count, double log_factorial) {
  const double n = static_cast<double>(count);
  // Wilson & Hilferty 1931 as the start; their cube is positive for every n >= 1.
  const double root = 1 - 1 / (9 * n) - 1.96 / (3 * std::sqrt(n));
  double log_x = std::log(n * root * root * root);
  constexpr int kMostSteps = 20;  // it takes 4 to 6
  for (int step = 0; step < kMostSteps; ++step) {
    const double x = std::exp(log_x);
    double series = 1;
    double term = 1;
    for (double k = n + 1; term > series * 1e-17; ++k) {
      term *= x / k;
      series += term;
    }
    const double log_tail = n * log_x - x - log_factorial + std::log(series);
    const double move = (log_tail - std::log(kTail)) * series / n;
    log_x -= move;
    if (std::abs(move) < 1e-15) break;
  }
  return std::exp(log_x);
}

std::array<double, kSolved + 1> SolveSmallCounts() {
  std::array<double, kSolved + 1> limits{};
  double log_factorial = 0;
  for (uint64_t n = 1; n <= kSolved; ++n) {
    log_factorial += std::log(static_cast<double>(n));
    limits[n] = Solve(n, log_factorial);
  }
  return limits;
}

// The 2.5 % point of a gamma variate of shape n in powers of 1/sqrt(n), the Cornish-Fisher
// expansion as carried to this order by Goldberg & Levine 1946.
double Expansion(uint64_t count) {
  constexpr double z = -1.959963984540054;  // 2.5 % point of the standard normal distribution
  constexpr double z2 = z * z;
  constexpr double z3 = z2 * z;
  constexpr double z4 = z2 * z2;
  constexpr double z5 = z4 * z;
  constexpr double z6 = z4 * z2;
  constexpr double z7 = z6 * z;
  constexpr double c0 = (z2 - 1) / 3;
  constexpr double c1 = (z3 - 7 * z) / 36;
  constexpr double c2 = -(3 * z4 + 7 * z2 - 16) / 810;
  constexpr double c3 = (9 * z5 + 256 * z3 - 433 * z) / 38880;
  constexpr double c4 = (12 * z6 - 243 * z4 - 923 * z2 + 1472) / 204120;
  constexpr double c5 = -(3753 * z7 + 4353 * z5 - 289517 * z3 - 289717 * z) / 146966400;
  const double n = static_cast<double>(count);
  const double root = std::sqrt(n);
  const double step = 1 / root;
  return n + z * root + (c0 + step * (c1 + step * (c2 + step * (c3 + step * (c4 + step * c5)))));
}

}  // namespace

double PoissonLower95(uint64_t n) {
  if (n > kSolved) return Expansion(n);
  static const std::array<double, kSolved + 1> limits = SolveSmallCounts();
  return limits[n];
}

}  // namespace phraseweld
