#include "base/units.h"

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include <cmath>
#include <limits>
#include <random>

namespace phraseweld {
namespace {

constexpr uint64_t kMost = std::numeric_limits<uint64_t>::max();

uint64_t Bytes(std::string_view text) {
  const auto bytes = ParseBytes(text);
  EXPECT_TRUE(bytes.ok()) << text << ": " << bytes.status();
  return bytes.value_or(0);
}

std::string Fault(const absl::Status& status) {
  EXPECT_EQ(status.code(), absl::StatusCode::kInvalidArgument);
  return std::string(status.message());
}

// The units are those of IEC 80000-13 (powers of 1024) and of the SI (powers of 1000).
TEST(ParseBytes, ReadsNumbersWithAndWithoutUnits) {
  EXPECT_EQ(Bytes("0"), 0u);
  EXPECT_EQ(Bytes("1048576"), 1048576u);
  EXPECT_EQ(Bytes("17 B"), 17u);
  EXPECT_EQ(Bytes("2 GiB"), 2147483648u);
  EXPECT_EQ(Bytes("256MiB"), 268435456u);
  EXPECT_EQ(Bytes("  3 kib "), 3072u);
  EXPECT_EQ(Bytes("500 MB"), 500000000u);
  EXPECT_EQ(Bytes("4KB"), 4000u);
  EXPECT_EQ(Bytes("1 TB"), 1000000000000u);
  EXPECT_EQ(Bytes("16777215 TiB"), 16777215u * (uint64_t{1} << 40));
  EXPECT_EQ(Bytes("18446744073709551"), 18446744073709551u);
}

TEST(ParseBytes, TakesFractionsThatComeToWholeBytes) {
  EXPECT_EQ(Bytes("1.5 GiB"), 1610612736u);
  EXPECT_EQ(Bytes("0.25 KiB"), 256u);
  EXPECT_EQ(Bytes("0.001 kB"), 1u);
  EXPECT_EQ(Fault(ParseBytes("0.3 KiB").status()),
            "a whole number of bytes, which '0.3 KiB' does not come to");
  EXPECT_EQ(Fault(ParseBytes("1.5").status()),
            "a whole number of bytes, which '1.5' does not come to");
}

TEST(ParseBytes, RefusesWhatIsNoSize) {
  for (const std::string_view text :
       {"", " ", "GiB", "-1", "+1", "1.", ".5", "1.2.3", "0x10", "1e6", "two GiB",
        "99999999999999999999", "16777216 TiB", "1,5 GiB"}) {
    EXPECT_THAT(Fault(ParseBytes(text).status()),
                testing::StartsWith("a size such as 2 GiB, 256 MiB or 1048576, not '"))
        << text;
  }
}

TEST(ParseBytes, AnUnclearOrMisspeltUnitIsAnsweredWithTheRightOnes) {
  EXPECT_EQ(Fault(ParseBytes("2 G").status()),
            "a size such as 2 GiB, 256 MiB or 1048576, not '2 G'; write GiB (powers of 1024) or GB "
            "(of 1000)");
  EXPECT_THAT(Fault(ParseBytes("2 GiBB").status()), testing::HasSubstr("did you mean 'GiB'?"));
}

TEST(FormatBytes, IsShortAndExact) {
  EXPECT_EQ(FormatBytes(0), "0");
  EXPECT_EQ(FormatBytes(1), "1");
  EXPECT_EQ(FormatBytes(1048576), "1 MiB");
  EXPECT_EQ(FormatBytes(2147483648u), "2 GiB");
  EXPECT_EQ(FormatBytes(500000000), "500 MB");
  EXPECT_EQ(FormatBytes(1024000), "1000 KiB");
  EXPECT_EQ(FormatBytes(1048577), "1048577");
  EXPECT_EQ(FormatBytes(kMost), "18446744073709551615");
}

TEST(FormatBytes, IsReadBackAsTheSameNumber) {
  EXPECT_EQ(Bytes(FormatBytes(kMost)), kMost);
  std::mt19937_64 random(20240229);
  constexpr uint64_t kUnits[] = {1, 1000, 1024, 1000000, 1048576, 1000000000, 1073741824};
  for (int round = 0; round < 20000; ++round) {
    const uint64_t bytes = (random() >> (24 + random() % 40)) * kUnits[random() % 7];
    EXPECT_EQ(Bytes(FormatBytes(bytes)), bytes);
  }
}

TEST(RoundedBytes, HasThreeDigitsAndAUnit) {
  EXPECT_EQ(RoundedBytes(17), "17 B");
  EXPECT_EQ(RoundedBytes(1023), "1.00 KiB");
  EXPECT_EQ(RoundedBytes(812 * 1024), "812 KiB");
  EXPECT_EQ(RoundedBytes(1.53 * 1073741824), "1.53 GiB");
  EXPECT_EQ(RoundedBytes(20.25 * 1048576), "20.2 MiB");
}

TEST(FormatCount, SeparatesThousands) {
  EXPECT_EQ(FormatCount(0), "0");
  EXPECT_EQ(FormatCount(999), "999");
  EXPECT_EQ(FormatCount(1000), "1,000");
  EXPECT_EQ(FormatCount(1234567), "1,234,567");
}

TEST(FormatDuration, NamesTheTwoLargestUnits) {
  EXPECT_EQ(FormatDuration(0.4), "0 s");
  EXPECT_EQ(FormatDuration(59.6), "1 min 0 s");
  EXPECT_EQ(FormatDuration(200), "3 min 20 s");
  EXPECT_EQ(FormatDuration(7500), "2 h 5 min");
  EXPECT_EQ(FormatDuration(-1), "?");
  EXPECT_EQ(FormatDuration(std::nan("")), "?");
  EXPECT_EQ(FormatDuration(std::numeric_limits<double>::infinity()), "?");
  EXPECT_EQ(FormatDuration(1e300), "?");
}

TEST(ParseWhole, HoldsToItsRange) {
  EXPECT_EQ(*ParseWhole("4", 0, 4), 4);
  EXPECT_EQ(*ParseWhole("-3", -5, 4), -3);
  EXPECT_EQ(Fault(ParseWhole("5", 0, 4).status()), "a whole number from 0 to 4, not '5'");
  EXPECT_EQ(Fault(ParseWhole("0", 1, std::numeric_limits<int64_t>::max()).status()),
            "a whole number of at least 1, not '0'");
  for (const std::string_view text : {"", " 1", "1 ", "1.0", "+1", "0x1", "99999999999999999999"}) {
    EXPECT_FALSE(ParseWhole(text, 0, 4).ok()) << text;
  }
}

TEST(ParseNumber, ReadsFiniteDecimals) {
  EXPECT_EQ(*ParseNumber("5"), 5);
  EXPECT_EQ(*ParseNumber("-0.25"), -0.25);
  EXPECT_EQ(*ParseNumber("1e-3"), 0.001);
  for (const std::string_view text : {"", "nan", "inf", "-infinity", "1e999", "5,5", "5 ", "0x5"}) {
    EXPECT_EQ(Fault(ParseNumber(text).status()),
              "a number such as 5 or 0.25, not '" + std::string(text) + "'");
  }
}

TEST(FormatNumber, IsReadBackAsTheSameNumber) {
  EXPECT_EQ(FormatNumber(5), "5");
  EXPECT_EQ(FormatNumber(0.1), "0.1");
  EXPECT_EQ(FormatNumber(-4.71), "-4.71");
  EXPECT_EQ(FormatNumber(1e21), "1000000000000000000000");
  const double extremes[] = {std::numeric_limits<double>::max(),
                             std::numeric_limits<double>::denorm_min(),
                             -std::numeric_limits<double>::denorm_min()};
  for (const double value : extremes) EXPECT_EQ(*ParseNumber(FormatNumber(value)), value);
  std::mt19937_64 random(7);
  std::uniform_real_distribution<double> values(-100, 100);
  for (int round = 0; round < 1000; ++round) {
    const double value = values(random);
    EXPECT_EQ(*ParseNumber(FormatNumber(value)), value);
  }
}

}  // namespace
}  // namespace phraseweld
