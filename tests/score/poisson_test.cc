#include <gtest/gtest.h>

#include <cmath>
#include <vector>

#include "score/measures.h"

namespace phraseweld {
namespace {

// The probability of a Poisson count of n or more with mean x, term by term in long double: slow
// and obvious.
long double TailProbability(uint64_t n, long double x) {
  long double log_term = -x;
  for (uint64_t k = 1; k <= n; ++k) log_term += std::log(x / static_cast<long double>(k));
  long double term = std::exp(log_term);
  long double sum = term;
  for (long double k = static_cast<long double>(n) + 1; term > sum * 1e-22L; ++k) {
    term *= x / k;
    sum += term;
  }
  return sum;
}

TEST(PoissonLower95, OfOneHasAClosedForm) {
  // 1 - e^-x = 0.025
  EXPECT_DOUBLE_EQ(PoissonLower95(1), -std::log1p(-0.025));
}

// The tail's relative error is that of the limit times sqrt(n)/0.43 or so: 1e-12 of the limit shows
// as more than 1e-12 of the tail. 512 and 513 stand on both sides of the change of method.
TEST(PoissonLower95, LeavesTwoAndAHalfPercentAbove) {
  for (const uint64_t n : {1, 2, 3, 5, 10, 30, 100, 300, 511, 512, 513, 514, 600, 1000, 3000}) {
    const long double tail = TailProbability(n, PoissonLower95(n));
    const double relative = static_cast<double>(tail / 0.025L - 1);
    EXPECT_LT(std::abs(relative), 1e-12 * (1 + std::sqrt(static_cast<double>(n)))) << n;
  }
}

TEST(PoissonLower95, GrowsByLittleMoreThanOneWithEveryCount) {
  double before = PoissonLower95(1);
  for (uint64_t n = 2; n < 5000; ++n) {
    const double limit = PoissonLower95(n);
    EXPECT_LT(0.2, limit - before) << n;
    EXPECT_LT(limit - before, 1) << n;
    EXPECT_LT(limit, static_cast<double>(n)) << n;
    before = limit;
  }
}

// Values of the 2.5 % point from mpmath 1.3 with 50 digits (gammainc, regularized), rounded to 20.
TEST(PoissonLower95, AgreesWithFiftyDigitArithmetic) {
  struct Known {
    uint64_t n;
    double limit;
  };
  const std::vector<Known> known = {
      {2, 0.2422092785439649029},     {16, 9.1453824536415235472},    {100, 81.363991250923140433},
      {512, 468.60569419793765449},   {513, 469.56239868761027798},   {1000, 938.97301840769521562},
      {10000, 9804.9524672601831468}, {100000, 99381.152663744730583}};
  for (const Known& value : known) {
    EXPECT_NEAR(PoissonLower95(value.n) / value.limit, 1, 2e-13) << value.n;
  }
}

}  // namespace
}  // namespace phraseweld
