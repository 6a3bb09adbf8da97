#include "base/strings.h"

#include <gmock/gmock.h>
#include <gtest/gtest.h>

namespace phraseweld {
namespace {

TEST(Strings, ConcatTakesEveryKindOfText) {
  const std::string_view view = "view";
  EXPECT_EQ(Concat("plain ", view, std::string(" own "), uint64_t{18446744073709551615u}),
            "plain view own 18446744073709551615");
  std::string text = "a";
  AppendTo(&text, view, -1);
  EXPECT_EQ(text, "aview-1");
}

TEST(Strings, SplitKeepsEmptyPieces) {
  EXPECT_THAT(Split("a..b.", '.'), testing::ElementsAre("a", "", "b", ""));
  EXPECT_THAT(Split("", '.'), testing::ElementsAre(""));
}

TEST(Strings, JoinPutsTheSeparatorBetweenOnly) {
  EXPECT_EQ(Join(std::vector<std::string>{"a", "b"}, ", "), "a, b");
  EXPECT_EQ(Join(std::vector<std::string_view>{}, ", "), "");
}

TEST(Strings, StripTakesBlanksFromBothEndsOnly) {
  EXPECT_EQ(Strip(" \t a b\r\n"), "a b");
  EXPECT_EQ(Strip(" \n"), "");
}

TEST(Strings, AsciiLowerLeavesOtherBytes) { EXPECT_EQ(AsciiLower("A\xC3\x89z"), "a\xC3\x89z"); }

}  // namespace
}  // namespace phraseweld
