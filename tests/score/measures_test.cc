#include "score/measures.h"

#include <gtest/gtest.h>

#include <array>
#include <cmath>
#include <cstdio>
#include <initializer_list>
#include <limits>
#include <random>
#include <string>
#include <vector>

namespace phraseweld {
namespace {

constexpr std::array<Quantity, 14> kAll = {
    Quantity::kOccurrences, Quantity::kDocuments, Quantity::kPmi,      Quantity::kNpmi,
    Quantity::kPmi2,        Quantity::kPmi3,      Quantity::kPmiFloor, Quantity::kG2,
    Quantity::kChi2,        Quantity::kT,         Quantity::kDice,     Quantity::kDpForward,
    Quantity::kDpBackward,  Quantity::kBurst};

SlotTable Table(uint64_t n, uint64_t left, uint64_t right, uint64_t total) {
  return {.n = n, .left = left, .right = right, .total = total, .all = total, .documents = 1};
}

TEST(Measures, FollowTheirFormulasOnATableDoneByHand) {
  // n = 8, L = 16, R = 32, N = 256: E = 2; cells 8, 8, 24, 216; expected 2, 14, 30, 210.
  SlotTable table = Table(8, 16, 32, 256);
  table.all = 512;
  table.documents = 5;
  EXPECT_EQ(Expected(table), 2);
  EXPECT_EQ(Score(Quantity::kOccurrences, table), 8);
  EXPECT_EQ(Score(Quantity::kDocuments, table), 5);
  EXPECT_EQ(Score(Quantity::kPmi, table), 2);
  EXPECT_EQ(Score(Quantity::kNpmi, table), 0.4);
  EXPECT_EQ(Score(Quantity::kPmi2, table), -4);
  EXPECT_EQ(Score(Quantity::kPmi3, table), -10);
  // lambda of 8 is 3.4538 (Garwood 1936): log2(3.4538 / 2).
  EXPECT_NEAR(Score(Quantity::kPmiFloor, table), 0.78819, 2e-5);
  // 36 * (1/2 + 1/14 + 1/30 + 1/210) = 36 * 128/210
  EXPECT_EQ(Score(Quantity::kChi2, table), Round9(36.0 * 128 / 210));
  const double g2 = 2 * (8 * std::log(4.0) + 8 * std::log(8.0 / 14) + 24 * std::log(0.8) +
                         216 * std::log(216.0 / 210));
  EXPECT_NEAR(Score(Quantity::kG2, table), g2, 1e-9);
  EXPECT_EQ(Score(Quantity::kT, table), Round9(6 / std::sqrt(8.0)));
  EXPECT_EQ(Score(Quantity::kDice, table), Round9(16.0 / 48));
  EXPECT_EQ(Score(Quantity::kDpForward, table), 0.4);  // 1/2 - 24/240
  EXPECT_EQ(Score(Quantity::kDpBackward, table), Round9(0.25 - 8.0 / 224));
  EXPECT_EQ(Score(Quantity::kBurst, table), 1.6);
}

TEST(Measures, PowersOfPmiTakeTheSlotsOfEveryBridge) {
  SlotTable table = Table(8, 16, 32, 256);
  const double within = Score(Quantity::kPmi3, table);
  table.all = 1024;  // a quarter of the share, twice in the third power
  EXPECT_EQ(Score(Quantity::kPmi3, table), within - 4);
  EXPECT_EQ(Score(Quantity::kPmi, table), 2);
}

TEST(Measures, IndependenceIsExactlyZeroWithHugeCounts) {
  // n*N = L*R = 2^64 * 9 * 5, beyond what a double or 64 bits tell apart.
  const uint64_t big = uint64_t{1} << 32;
  const SlotTable table = Table(9 * big / 64, 9 * big, 5 * big, 320 * big);
  for (const Quantity quantity : {Quantity::kPmi, Quantity::kNpmi, Quantity::kG2, Quantity::kChi2,
                                  Quantity::kT, Quantity::kDpForward, Quantity::kDpBackward}) {
    EXPECT_EQ(Score(quantity, table), 0) << QuantityName(quantity);
    EXPECT_FALSE(std::signbit(Score(quantity, table))) << QuantityName(quantity);
  }
}

TEST(Measures, OneSlotMoreThanExpectedAmongBillionsIsSeen) {
  // E = 10^8, n = E + 1. To first order G2 = chi2 = sum of 1/E over the cells:
  // E's are 10^8, 9.9*10^9, 9.9*10^9, 9.801*10^11.
  const SlotTable table = Table(100'000'001, 10'000'000'000, 10'000'000'000, 1'000'000'000'000);
  const double first_order = 1e-8 + 2 / 9.9e9 + 1 / 9.801e11;
  EXPECT_EQ(Score(Quantity::kChi2, table), Round9(first_order));
  EXPECT_EQ(Score(Quantity::kG2, table), Round9(first_order));
  EXPECT_EQ(Score(Quantity::kPmi, table), Round9(1e-8 * std::log2(std::exp(1.0))));
}

TEST(Measures, LogLikelihoodRatioIsNegativeBelowExpectation) {
  EXPECT_GT(Score(Quantity::kG2, Table(5, 20, 20, 100)), 0);
  EXPECT_LT(Score(Quantity::kG2, Table(3, 20, 20, 100)), 0);
  EXPECT_EQ(Score(Quantity::kG2, Table(4, 20, 20, 100)), 0);
}

TEST(Measures, TheOnlySlotTypeOfABridgeScoresAsTheSemanticsSay) {
  const SlotTable table = Table(7, 7, 7, 7);
  EXPECT_EQ(Score(Quantity::kPmi, table), 0);
  EXPECT_EQ(Score(Quantity::kNpmi, table), 1);
  EXPECT_EQ(Score(Quantity::kG2, table), 0);
  EXPECT_EQ(Score(Quantity::kChi2, table), 0);
  EXPECT_EQ(Score(Quantity::kDpForward, table), 1);
  EXPECT_EQ(Score(Quantity::kDpBackward, table), 1);
}

TEST(Measures, AlwaysTogetherHasNormalisedPmiOne) {
  for (const uint64_t n : {1, 3, 999'999}) {
    EXPECT_EQ(Score(Quantity::kNpmi, Table(n, n, n, 1'000'000)), 1) << n;
  }
}

// With word margins "no no no no" has n = 3 slots of no+no and L = R = N = 4: O22 = -1.
TEST(Measures, WordMarginsOfARepeatedWordGiveFiniteScores) {
  EXPECT_EQ(Score(Quantity::kPmi, Table(3, 4, 4, 4)), Round9(std::log2(0.75)));
  EXPECT_EQ(Score(Quantity::kNpmi, Table(3, 4, 4, 4)), -1);
  EXPECT_EQ(Score(Quantity::kChi2, Table(3, 4, 4, 4)), 0.25);  // (3-4)^2/4, the rest has E = 0
  EXPECT_EQ(Score(Quantity::kG2, Table(3, 4, 4, 4)), Round9(6 * std::log(0.75)));
  EXPECT_EQ(Score(Quantity::kDpForward, Table(3, 4, 4, 4)), 0.75);
  // n = 1, L = R = 4, N = 5: O12 = O21 = 3, O22 = -2, which adds nothing to the logarithms.
  const double sum = std::log(1 / 3.2) + 6 * std::log(3 / 0.8);
  EXPECT_EQ(Score(Quantity::kG2, Table(1, 4, 4, 5)), Round9(-2 * sum));
  EXPECT_EQ(Score(Quantity::kChi2, Table(1, 4, 4, 5)),
            Round9(2.2 * 2.2 * (1 / 3.2 + 2 / 0.8 + 1 / 0.2)));
}

TEST(Measures, NoTableOfExtremesGivesNanOrInfinity) {
  const std::vector<uint64_t> sizes = {1,          2,
                                       3,          1000,
                                       1ULL << 31, 1ULL << 32,
                                       1ULL << 52, (1ULL << 53) + 1,
                                       1ULL << 62, (1ULL << 62) + 1};
  int tables = 0;
  for (const uint64_t total : sizes) {
    for (const uint64_t left : sizes) {
      for (const uint64_t right : sizes) {
        for (const uint64_t n : sizes) {
          if (n > left || n > right || left > total || right > total) continue;
          ++tables;
          const SlotTable table = Table(n, left, right, total);
          for (const Quantity quantity : kAll) {
            EXPECT_TRUE(std::isfinite(Score(quantity, table)))
                << QuantityName(quantity) << " of " << n << " " << left << " " << right << " "
                << total;
          }
        }
      }
    }
  }
  EXPECT_GT(tables, 1000);
}

TEST(Round9, RoundsHalvesAwayFromZeroAndDropsTheSignOfZero) {
  EXPECT_EQ(Round9(0.1234567894), 0.123456789);
  EXPECT_EQ(Round9(0.1234567896), 0.12345679);
  EXPECT_EQ(Round9(0.5e-9), 1e-9);
  EXPECT_EQ(Round9(-0.5e-9), -1e-9);
  EXPECT_FALSE(std::signbit(Round9(-0.0)));
  EXPECT_FALSE(std::signbit(Round9(-0.4e-9)));
}

TEST(Round9, LeavesValuesTooLargeForNineDecimalsAlone) {
  for (const double value : {9007199.5, 1e15 + 0.125, 1e300, -1e300}) {
    EXPECT_EQ(Round9(value), value);
  }
}

TEST(Round9, IsIdempotent) {
  for (double value = 1e-9; value < 1e8; value *= 1.37) {
    EXPECT_EQ(Round9(Round9(value)), Round9(value));
    EXPECT_EQ(Round9(-value), -Round9(value));
  }
}

TEST(FormatScore, PrintsFixedNotationWithoutTrailingZeros) {
  EXPECT_EQ(FormatScore(5), "5");
  EXPECT_EQ(FormatScore(4.71), "4.71");
  EXPECT_EQ(FormatScore(-0.000000001), "-0.000000001");
  EXPECT_EQ(FormatScore(0.1 + 0.2), "0.3");
  EXPECT_EQ(FormatScore(0), "0");
  EXPECT_EQ(FormatScore(-0.0), "0");
  EXPECT_EQ(FormatScore(-0.0000000001), "0");
  EXPECT_EQ(FormatScore(100), "100");
  EXPECT_EQ(FormatScore(1e9), "1000000000");
  EXPECT_EQ(FormatScore(456399.9), "456399.9");
  EXPECT_EQ(FormatScore(12345678.5), "12345678.5");
}

TEST(FormatScore, SpellsWhatTheCLibraryPrints) {
  std::mt19937_64 random(20261201);
  std::uniform_real_distribution<double> exponent(-10, 9);
  for (int i = 0; i < 200000; ++i) {
    const double value = (random() % 2 == 0 ? 1 : -1) * std::pow(10, exponent(random));
    char printed[64];
    std::snprintf(printed, sizeof(printed), "%.9f", Round9(value));
    std::string expected = printed;
    expected.erase(expected.find_last_not_of('0') + 1);
    if (expected.back() == '.') expected.pop_back();
    ASSERT_EQ(FormatScore(value), expected) << value;
  }
}

TEST(FormatScore, HoldsTheLargestDouble) {
  const std::string text = FormatScore(std::numeric_limits<double>::lowest());
  EXPECT_EQ(text.size(), 310u);
  EXPECT_EQ(text.substr(0, 7), "-179769");
}

TEST(FormatScore, ReadsBackAsTheSameValue) {
  for (double value = 1.234567891e-9; value < 1e7; value *= 1.618) {
    const double rounded = Round9(value);
    EXPECT_EQ(std::stod(FormatScore(rounded)), rounded);
  }
}

}  // namespace
}  // namespace phraseweld
