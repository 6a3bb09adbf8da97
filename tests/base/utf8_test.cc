#include "base/utf8.h"

#include <gtest/gtest.h>

#include <fstream>
#include <string>

namespace phraseweld {
namespace {

std::string Encoded(char32_t point) {
  std::string text;
  const auto put = [&text](char32_t byte) { text.push_back(static_cast<char>(byte)); };
  if (point < 0x80) {
    put(point);
  } else if (point < 0x800) {
    put(0xC0 | point >> 6);
    put(0x80 | (point & 0x3F));
  } else if (point < 0x10000) {
    put(0xE0 | point >> 12);
    put(0x80 | (point >> 6 & 0x3F));
    put(0x80 | (point & 0x3F));
  } else {
    put(0xF0 | point >> 18);
    put(0x80 | (point >> 12 & 0x3F));
    put(0x80 | (point >> 6 & 0x3F));
    put(0x80 | (point & 0x3F));
  }
  return text;
}

TEST(NextCodePoint, ReadsEveryScalarValue) {
  for (char32_t point = 0; point <= 0x10FFFF; ++point) {
    if (point >= 0xD800 && point < 0xE000) continue;
    const std::string text = Encoded(point);
    size_t at = 0;
    ASSERT_EQ(NextCodePoint(text, &at), point);
    ASSERT_EQ(at, text.size());
  }
}

// The Unicode Standard 15.0, table 3-7, and the examples of its section 3.9.
TEST(FirstInvalidUtf8, PointsAtTheFirstByteThatIsNotWellFormed) {
  EXPECT_EQ(FirstInvalidUtf8("plain \xC3\xA9 \xF0\x9F\x98\x80"), std::nullopt);
  EXPECT_EQ(FirstInvalidUtf8("a\xC0\xAF"), 1u);         // overlong
  EXPECT_EQ(FirstInvalidUtf8("\xE0\x9F\xBF"), 0u);      // overlong
  EXPECT_EQ(FirstInvalidUtf8("ab\xED\xA0\x80"), 2u);    // a surrogate
  EXPECT_EQ(FirstInvalidUtf8("\xF4\x90\x80\x80"), 0u);  // beyond U+10FFFF
  EXPECT_EQ(FirstInvalidUtf8("\xC3\xA9\x80"), 2u);      // a continuation alone
  EXPECT_EQ(FirstInvalidUtf8("\xE2\x82"), 0u);          // cut off
  EXPECT_EQ(FirstInvalidUtf8(std::string("\0\xFF", 2)), 1u);
}

TEST(CodePoints, CountsInvalidBytesOneByOne) { EXPECT_EQ(CodePoints("a\xC3\xA9\xFF\xE2\x82"), 5u); }

TEST(DisplayWidth, CountsColumns) {
  EXPECT_EQ(DisplayWidth("abc"), 3u);
  EXPECT_EQ(DisplayWidth("e\xCC\x81"), 1u);      // a combining acute accent
  EXPECT_EQ(DisplayWidth("\xE6\xBC\xA2x"), 3u);  // a CJK ideograph
}

// Unicode's EastAsianWidth.txt 15.0, from the package unicode-data: every W or F letter of the
// living East Asian scripts is two columns wide here, every Na or N letter below U+3000 at most
// one.
TEST(DisplayWidth, AgreesWithUnicodeOnLetters) {
  std::ifstream file("/usr/share/unicode/EastAsianWidth.txt");
  ASSERT_TRUE(file) << "install the package unicode-data";
  size_t checked = 0;
  for (std::string line; std::getline(file, line);) {
    const size_t semicolon = line.find(';');
    const size_t hash = line.find('#');
    if (line.empty() || semicolon == std::string::npos || hash < semicolon) continue;
    const std::string kind = line.substr(semicolon + 1, line.find(' ') - semicolon - 1);
    const std::string category = line.substr(hash + 2, 2);
    if (category != "Lo" && category != "Ll" && category != "Lu") continue;
    const char32_t first = std::stoul(line, nullptr, 16);
    const size_t dots = line.find("..");
    const char32_t last = dots < semicolon ? std::stoul(line.substr(dots + 2), nullptr, 16) : first;
    for (char32_t point = first; point <= last; ++point) {
      const size_t width = DisplayWidth(Encoded(point));
      const bool ancient = point >= 0x16FE0 && point < 0x1B2FF + 1;  // Tangut, Khitan, Nushu
      const bool jamo = point >= 0xA960 && point < 0xA980;           // Hangul of older texts
      if ((kind == "W" || kind == "F") && !ancient && !jamo) {
        ASSERT_EQ(width, 2u) << line;
        ++checked;
      } else if ((kind == "N" || kind == "Na") && point < 0x2E80) {
        ASSERT_LE(width, 1u) << line;
        ++checked;
      }
    }
  }
  EXPECT_GT(checked, 100000u);
}

TEST(FitWidth, CutsBetweenCodePoints) {
  EXPECT_EQ(FitWidth("abc", 2), "ab");
  EXPECT_EQ(FitWidth("abc", 3), "abc");
  EXPECT_EQ(FitWidth("\xE6\xBC\xA2\xE6\xBC\xA2", 3), "\xE6\xBC\xA2");
  EXPECT_EQ(FitWidth("", 0), "");
}

}  // namespace
}  // namespace phraseweld
