// A text cut where StartsWord() allows has the words and gaps of the whole.

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include <string>

#include "words/reference_splitter.h"
#include "words/vocabulary.h"

namespace phraseweld {
namespace {

using testing::ElementsAre;

TEST(Cuts, AreAllowedBeforeWordsOfEveryScript) {
  for (const char* text :
       {"word and", "1 ", "W. ", "\u00E9t\u00E9 ", "\u0436. ", "\u05D0 ", "\u4E00 ", "\uAC00.",
        "\u0E01\u0E01 ", "\u30AB ", "@ ", "don't. ", "__ ", "a-", "3.5,\n"}) {
    EXPECT_TRUE(StartsWord(text)) << text;
  }
}

TEST(Cuts, AreRefusedWhereNoWordCertainlyBegins) {
  for (const char* text : {"", " a", "-a", "_ a", ".5 ", "\u0301a ", "\u200D\u24C2a ", "\u115F ",
                           "\xFF"
                           "a",
                           "a\xFF", "'s ", "a\u200D\U0001F600 ", "\uAC00\u0308 ",
                           "\u0903\u200D\u24C2"
                           "a ",
                           "\u3000\u200D\u24C2"
                           "a ",
                           "\u3000a ", "\n", "unfinished"}) {
    EXPECT_FALSE(StartsWord(text)) << text;
  }
  EXPECT_FALSE(StartsWord(std::string(5000, 'a') + " "));
}

TEST(Cuts, LeaveWordsAndBreaksAsTheyWere) {
  std::mt19937_64 random(5);
  size_t cuts = 0;
  WordSplitter splitter({});
  for (int round = 0; round < 10000; ++round) {
    std::string text = RandomText(&random, 1 + random() % 30);
    // More places to cut at.
    for (char& byte : text) {
      if (byte == '-' || byte == ',') byte = random() % 2 == 0 ? ' ' : '\n';
    }
    const std::vector<WordSpan> whole = ReferenceWords(text, {});
    Vocabulary vocabulary;
    Encoder encoder({}, &vocabulary);
    std::vector<Entry> expected;
    encoder.Encode(text, false, 0, &expected);
    for (size_t at = 1; at < text.size(); ++at) {
      const std::string_view rest = std::string_view(text).substr(at);
      if ((text[at - 1] != ' ' && text[at - 1] != '\n') || !StartsWord(rest)) continue;
      ++cuts;
      std::vector<WordSpan> words;
      std::vector<WordSpan> second;
      splitter.Split(std::string_view(text).substr(0, at), &words);
      splitter.Split(rest, &second);
      ASSERT_FALSE(second.empty());
      ASSERT_EQ(second[0].begin, 0u);
      for (const WordSpan& word : second) {
        words.push_back({word.begin + static_cast<uint32_t>(at),
                         (word.end + static_cast<uint32_t>(at)) & 0x7FFFFFFFu, word.number});
      }
      ASSERT_EQ(words, whole) << Show(text, whole) << " cut at " << at << " " << Show(text, words);
      std::vector<Entry> entries;
      encoder.Encode(std::string_view(text).substr(0, at), true, 0, &entries);
      encoder.Encode(rest, false, 0, &entries);
      ASSERT_EQ(entries, expected) << Show(text, whole) << " cut at " << at;
    }
  }
  EXPECT_GT(cuts, 3000u);
}

TEST(Cuts, KeepTheBreakBeforeThem) {
  Vocabulary vocabulary;
  Encoder encoder({}, &vocabulary);
  const auto encode = [&](std::string_view text, bool more_follows) {
    std::vector<Entry> entries;
    encoder.Encode(text, more_follows, 0, &entries);
    return entries;
  };
  const Entry a = encode("a", false)[0];
  EXPECT_THAT(encode("a, ", true), ElementsAre(a, kBreak));
  EXPECT_THAT(encode("a, ", false), ElementsAre(a));
  EXPECT_THAT(encode("a \n", true), ElementsAre(a));
  EXPECT_THAT(encode("a \n\n", true), ElementsAre(a, kBreak));
  EXPECT_THAT(encode("... ", true), ElementsAre());
}

}  // namespace
}  // namespace phraseweld
