#include <gtest/gtest.h>

#include <string>

#include "words/splitter.h"

namespace phraseweld {
namespace {

TEST(Gaps, EmptyIsOpen) { EXPECT_TRUE(GapIsOpen("", false)); }

TEST(Gaps, SpacesOfEveryKindAreOpen) {
  for (const char* gap : {" ", "  ", "\u00A0", "\u1680", "\u2000", "\u2003 ", "\u202F", "\u205F",
                          "\u3000", " \u00A0 \u3000"}) {
    EXPECT_TRUE(GapIsOpen(gap, true)) << gap;
    EXPECT_TRUE(GapIsOpen(gap, false)) << gap;
  }
}

TEST(Gaps, OneLineBreakOfAnyKindIsOpen) {
  for (const char* gap : {"\n", "\r", "\r\n", "\u2028", " \n", "\n ", "  \r\n\u3000"}) {
    EXPECT_TRUE(GapIsOpen(gap, true)) << gap;
  }
}

TEST(Gaps, TwoLineBreaksAreABreak) {
  for (const char* gap :
       {"\n\n", "\r\r", "\r\n\r\n", "\n\r", "\r\n\n", "\n \n", "\u2028\n", "\r\u2028"}) {
    EXPECT_FALSE(GapIsOpen(gap, true)) << gap;
  }
}

TEST(Gaps, WhatIsNeitherSeparatorNorLineBreakIsABreak) {
  // The tab, the vertical tab, the form feed and NEL are controls; U+2029 separates paragraphs;
  // U+200B and the byte-order mark are format characters.
  for (const char* gap : {"\t", " \t", "\v", "\f", "\u0085", "\u2029", "\u200B", "\uFEFF", ",",
                          ", ", " .", "\"", "\u2014", "\u2026", "\u0301"}) {
    EXPECT_FALSE(GapIsOpen(gap, true)) << gap;
  }
  EXPECT_FALSE(GapIsOpen(std::string(1, '\0'), true));
}

TEST(Gaps, InvalidBytesAreABreak) {
  for (const char* gap :
       {"\xFF", " \xC2", "\xC2 ", "\xE2\x80", "\xED\xA0\x80", "\xC0\xA0", "\xA0"}) {
    EXPECT_FALSE(GapIsOpen(gap, true));
  }
}

TEST(Gaps, ExactlyOneHyphenIsOpenWhereHyphensJoin) {
  for (const char* gap : {"-", "\u2010", "\u2011"}) {
    EXPECT_TRUE(GapIsOpen(gap, true)) << gap;
    EXPECT_FALSE(GapIsOpen(gap, false)) << gap;
  }
  for (const char* gap :
       {"--", "- ", " -", "-\n", "\u2010\u2010", "\u2012", "\u2013", "\u00AD", "\u2212"}) {
    EXPECT_FALSE(GapIsOpen(gap, true)) << gap;
  }
}

}  // namespace
}  // namespace phraseweld
