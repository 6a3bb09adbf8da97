// The fast path against ICU itself, on every level of the scanner.

#include <gtest/gtest.h>
#include <unicode/utf8.h>

#include <string>

#include "words/reference_splitter.h"

namespace phraseweld {
namespace {

// Every stream that must agree with the reference.
class Streams {
 public:
  explicit Streams(const WordOptions& options = {}) : options_(options) {
    streams_.push_back({"exact", MakeExactStream(options)});
    for (const ScanLevel level : AvailableScanLevels()) {
      streams_.push_back({"scanner level " + std::to_string(static_cast<int>(level)),
                          MakeFastStream(options, level)});
    }
  }

  // False, with a message, at the first stream that differs.
  testing::AssertionResult AllGiveWhatIcuGives(std::string_view text) {
    const std::vector<WordSpan> expected = ReferenceWords(text, options_);
    for (const auto& [name, stream] : streams_) {
      const std::vector<WordSpan> words = WordsOf(stream.get(), text);
      if (words == expected) continue;
      if (text.size() < 300) {
        return testing::AssertionFailure()
               << name << "\n  ICU  " << Show(text, expected) << "\n  gave " << Show(text, words);
      }
      // The line where the first difference is.
      size_t same = 0;
      while (same < std::min(words.size(), expected.size()) && words[same] == expected[same]) {
        ++same;
      }
      const size_t at = same == 0 ? 0 : expected[same - 1].end;
      return testing::AssertionFailure()
             << name << " differs after byte " << at << " of " << text.size() << ", at "
             << Show(text.substr(at, 80), {})
             << "; ICU's next word: " << (same < expected.size() ? expected[same].begin : 0) << "-"
             << (same < expected.size() ? expected[same].end + 0 : 0)
             << " given: " << (same < words.size() ? words[same].begin : 0) << "-"
             << (same < words.size() ? words[same].end + 0 : 0);
    }
    return testing::AssertionSuccess();
  }

 private:
  WordOptions options_;
  std::vector<std::pair<std::string, std::unique_ptr<WordStream>>> streams_;
};

// Calls `use` with texts that hold every string of `length` pieces, each followed by `separator`.
template <typename Use>
void ForAllStrings(const std::vector<std::string>& pieces, int length, std::string_view separator,
                   Use use) {
  constexpr size_t kTextBytes = 1 << 16;
  std::vector<size_t> digits(static_cast<size_t>(length), 0);
  std::string text;
  while (true) {
    for (const size_t digit : digits) text += pieces[digit];
    text += separator;
    if (text.size() >= kTextBytes) {
      use(text);
      text.clear();
    }
    size_t place = 0;
    while (place < digits.size() && ++digits[place] == pieces.size()) digits[place++] = 0;
    if (place == digits.size()) break;
  }
  use(text);
}

TEST(PathsAgree, OnEveryShortStringOfClassRepresentatives) {
  Streams streams;
  for (int length = 1; length <= 3; ++length) {
    ForAllStrings(Representatives(), length, "\n",
                  [&](const std::string& text) { ASSERT_TRUE(streams.AllGiveWhatIcuGives(text)); });
  }
}

TEST(PathsAgree, OnEveryTextOfAtMostTwoRepresentatives) {
  Streams streams;
  for (const std::string& first : Representatives()) {
    ASSERT_TRUE(streams.AllGiveWhatIcuGives(first));
    for (const std::string& second : Representatives()) {
      ASSERT_TRUE(streams.AllGiveWhatIcuGives(first + second));
    }
  }
}

TEST(PathsAgree, OnEveryStringOfSixAsciiClasses) {
  Streams streams;
  ForAllStrings({"a", "1", "_", ".", ",", " ", "\xC3\xA9"}, 6, "\n",
                [&](const std::string& text) { ASSERT_TRUE(streams.AllGiveWhatIcuGives(text)); });
}

TEST(PathsAgree, OnEveryStringOfFourMixedClasses) {
  Streams streams;
  ForAllStrings({"a",      "1",      "_",      ".",      "'",      ",",      " ",      "\xFF",
                 "\u00E9", "\u0300", "\u200D", "\u05D0", "\"",     "\u30AB", "\u4E00", "\uAC00",
                 "\u0E01", "\u24C2", "\u2019", "\u115F", "\u0661", "\u03B1"},
                4, "\n",
                [&](const std::string& text) { ASSERT_TRUE(streams.AllGiveWhatIcuGives(text)); });
}

TEST(PathsAgree, OnEveryStringOfFiveHardClasses) {
  Streams streams;
  ForAllStrings({"a", "1", "_", ".", " ", "\u0300", "\u200D", "\u05D0", "\u24C2", "\u03B1"}, 5, "-",
                [&](const std::string& text) { ASSERT_TRUE(streams.AllGiveWhatIcuGives(text)); });
}

TEST(PathsAgree, OnEveryCodePointInContext) {
  Streams streams;
  std::string text;
  for (char32_t code_point = 0; code_point <= 0x10FFFF; ++code_point) {
    if (code_point >= 0xD800 && code_point <= 0xDFFF) continue;
    char bytes[4];
    int32_t size = 0;
    U8_APPEND_UNSAFE(bytes, size, code_point);
    const std::string_view piece(bytes, static_cast<size_t>(size));
    for (const std::string_view context : {"a?a\n", "1?1\n", "?.? ?_\n"}) {
      for (const char byte : context) {
        if (byte == '?') {
          text += piece;
        } else {
          text += byte;
        }
      }
    }
    if (text.size() > 1 << 18 || code_point == 0x10FFFF) {
      ASSERT_TRUE(streams.AllGiveWhatIcuGives(text)) << "up to " << uint32_t{code_point};
      text.clear();
    }
  }
}

TEST(PathsAgree, OnRandomTextsOfManyScripts) {
  Streams streams;
  std::mt19937_64 random(20230915);
  for (int round = 0; round < 200000; ++round) {
    const std::string text = RandomText(&random, 1 + random() % 40);
    ASSERT_TRUE(streams.AllGiveWhatIcuGives(text)) << "round " << round;
  }
}

TEST(PathsAgree, OnLongRandomTextsThatFillTheBuffer) {
  Streams streams;
  std::mt19937_64 random(7);
  for (int round = 0; round < 100; ++round) {
    std::string text;
    while (text.size() < 20000) text += RandomText(&random, 1 + random() % 60);
    ASSERT_TRUE(streams.AllGiveWhatIcuGives(text)) << "round " << round;
  }
}

TEST(PathsAgree, WhereverABlockOfSixtyFourBytesEnds) {
  Streams streams;
  // Each pair of pieces at each place around the ends of the first two blocks, in texts that end
  // there or go on.
  for (const std::string& first : Representatives()) {
    for (const std::string& second : Representatives()) {
      for (const size_t before : {58, 59, 60, 61, 62, 63, 64, 126, 127}) {
        for (const char filler : {'a', '1', ' '}) {
          const std::string text = std::string(before, filler) + first + second;
          ASSERT_TRUE(streams.AllGiveWhatIcuGives(text));
          ASSERT_TRUE(streams.AllGiveWhatIcuGives(text + "a 1.5"));
        }
      }
    }
  }
}

TEST(PathsAgree, WhereverTheBufferIsFull) {
  // The last word of a buffer may turn out to go on behind a full stop.
  Streams streams;
  std::string words;
  for (int count = 0; count < 700; ++count) {
    for (const char* end : {"b.\u03B1", "b.\u03B1 ", "b'\u2019", "1.\u0661", "\u03B1.\u03B1"}) {
      ASSERT_TRUE(streams.AllGiveWhatIcuGives(words + end)) << count;
    }
    words += "a ";
  }
}

TEST(PathsAgree, WhenAccentsAreStripped) {
  WordOptions options;
  options.strip_accents = true;
  Streams streams(options);
  for (int length = 1; length <= 3; ++length) {
    ForAllStrings({"\u0300", "\u200D", "\u24C2", "\u115F", "\u302A", "\u1160", "\u3164", "\u00AD",
                   "\u034F", "a", " ", "\U00016FE4", "\u17B4", "\u0E31"},
                  length, "\n",
                  [&](const std::string& text) { ASSERT_TRUE(streams.AllGiveWhatIcuGives(text)); });
  }
}

TEST(PathsAgree, OnALongStretchWithoutALineBreak) {
  // Longer than what the exact path hands to ICU at once.
  Streams streams;
  std::mt19937_64 random(11);
  std::string text;
  while (text.size() < 400000) {
    std::string piece = RandomText(&random, 30);
    std::erase(piece, '\n');
    text += piece;
  }
  ASSERT_TRUE(streams.AllGiveWhatIcuGives(text));
}

}  // namespace
}  // namespace phraseweld
