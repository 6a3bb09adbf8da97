// The measures and the printing of numbers, against published values and definitions.

#include "reference/measures.h"

#include <gtest/gtest.h>

#include <cmath>

#include "reference/json_writer.h"

namespace phraseweld::reference {
namespace {

Counts Table(uint64_t n, uint64_t L, uint64_t R, uint64_t N) {
  Counts counts;
  counts.n = n;
  counts.L = L;
  counts.R = R;
  counts.N = N;
  counts.M = N;
  counts.documents = 1;
  return counts;
}

// Dunning 1993, "Accurate Methods for the Statistics of Surprise and Coincidence", the tables of
// bigrams ranked by −2 log λ and by χ²: "the swiss", cells 110, 2442, 111, 29114: 270.72 and
// 525.02. Quoted from memory.
TEST(Measures, DunningTheSwiss) {
  const auto values = Measure(Table(110, 110 + 2442, 110 + 111, 110 + 2442 + 111 + 29114));
  EXPECT_NEAR(values.at(Quantity::kG2), 270.72, 0.005);
  EXPECT_NEAR(values.at(Quantity::kChi2), 525.02, 0.005);
}

// Manning & Schütze 1999, section 5.3, "new companies": t = 0.999932, χ² = 1.55. From memory.
TEST(Measures, ManningAndSchuetzeNewCompanies) {
  const auto values = Measure(Table(8, 15828, 4675, 14307668));
  EXPECT_NEAR(values.at(Quantity::kT), 0.999932, 5e-7);
  EXPECT_NEAR(values.at(Quantity::kChi2), 1.55, 0.005);
}

// n = 4, L = 8, R = 16, N = 64, M = 128, 2 documents: E = 2, so pmi = 1; n/N = 2^−4, n/M = 2^−5.
TEST(Measures, RoundFigures) {
  Counts counts = Table(4, 8, 16, 64);
  counts.M = 128;
  counts.documents = 2;
  const auto values = Measure(counts);
  EXPECT_EQ(values.at(Quantity::kOccurrences), 4);
  EXPECT_EQ(values.at(Quantity::kDocuments), 2);
  EXPECT_EQ(values.at(Quantity::kPmi), 1);
  EXPECT_EQ(values.at(Quantity::kNpmi), 0.25);
  EXPECT_EQ(values.at(Quantity::kPmi2), -4);
  EXPECT_EQ(values.at(Quantity::kPmi3), -9);
  EXPECT_EQ(values.at(Quantity::kT), 1);
  EXPECT_EQ(values.at(Quantity::kDice), 0.333333333);
  EXPECT_EQ(values.at(Quantity::kDpForward), 0.285714286);   // 4/8 − 12/56 = 2/7
  EXPECT_EQ(values.at(Quantity::kDpBackward), 0.166666667);  // 4/16 − 4/48 = 1/6
  EXPECT_EQ(values.at(Quantity::kBurst), 2);
  // O = 4 4 12 44, E = 2 6 14 42: 4/2 + 4/6 + 4/14 + 4/42.
  EXPECT_EQ(values.at(Quantity::kChi2), 3.047619048);
}

TEST(Measures, EmptyMargins) {
  const auto values = Measure(Table(3, 3, 3, 3));
  EXPECT_EQ(values.at(Quantity::kNpmi), 1);
  EXPECT_EQ(values.at(Quantity::kDpForward), 1);
  EXPECT_EQ(values.at(Quantity::kDpBackward), 1);
  EXPECT_EQ(values.at(Quantity::kG2), 0);
  EXPECT_EQ(values.at(Quantity::kChi2), 0);
}

// By its definition: at the limit the chance of n or more is 0.025. For n = 1 that is
// 1 − e^−λ = 0.025; the sum below is of the chances of 0 to n − 1.
TEST(Measures, PoissonLowerLimit) {
  EXPECT_NEAR(PoissonLowerLimit(1), -std::log(0.975), 1e-15);
  for (const uint64_t n : {2, 3, 5, 10, 20, 50}) {
    const double limit = PoissonLowerLimit(n);
    double term = std::exp(-limit);
    double below = 0;
    for (uint64_t k = 0; k < n; ++k) {
      below += term;
      term *= limit / static_cast<double>(k + 1);
    }
    EXPECT_NEAR(below, 0.975, 1e-13) << n;
  }
  // Garwood's limits as tables print them (0.242, 1.62, 4.80, 81.4), to 13 digits from a
  // calculation with 60.
  EXPECT_NEAR(PoissonLowerLimit(2), 0.2422092785439, 1e-12);
  EXPECT_NEAR(PoissonLowerLimit(5), 1.6234863901184, 1e-12);
  EXPECT_NEAR(PoissonLowerLimit(10), 4.7953886961324, 1e-12);
  EXPECT_NEAR(PoissonLowerLimit(100) / 81.3639912509231, 1, 1e-13);
  EXPECT_NEAR(PoissonLowerLimit(1000) / 938.9730184076952, 1, 1e-12);
}

TEST(Numbers, NineDecimals) {
  EXPECT_EQ(NineDecimals(5), "5");
  EXPECT_EQ(NineDecimals(4.71), "4.71");
  EXPECT_EQ(NineDecimals(-0.0), "0");
  EXPECT_EQ(NineDecimals(-1e-10), "0");
  EXPECT_EQ(NineDecimals(-2.5), "-2.5");
  EXPECT_EQ(NineDecimals(1.0 / 3), "0.333333333");
  EXPECT_EQ(NineDecimals(1.0 / 1024), "0.000976563");  // exactly 0.0009765625
  EXPECT_EQ(NineDecimals(-1.0 / 1024), "-0.000976563");
  EXPECT_EQ(NineDecimals(99.9999999999), "100");
  EXPECT_EQ(NineDecimals(1e20), "100000000000000000000");
  EXPECT_EQ(RoundToNineDecimals(0.1234567894), 0.123456789);
}

TEST(Numbers, Escapes) {
  EXPECT_EQ(Escape("\"\\\b\f\n\r\t\x01\x1f\x7f/\u00e9"),
            "\\\"\\\\\\b\\f\\n\\r\\t\\u0001\\u001f\x7f/\u00e9");
}

}  // namespace
}  // namespace phraseweld::reference
