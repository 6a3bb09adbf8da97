// Words, gaps, forms and numbers.

#include <gtest/gtest.h>

#include <stdexcept>

#include "reference_self/jobs.h"

namespace phraseweld {
namespace {

// The text with each open gap between an a and a b replaced by "_".
std::string Joined(const std::string& text, Hyphens hyphens = Hyphens::kJoin) {
  Job job = RulingJob(Layout::kText, "a b");
  job.words.hyphens = hyphens;
  return CorpusOf(job, text);
}

TEST(Gaps, Open) {
  for (const std::string gap : {" ", "   ", "\u00A0", "\u3000 ", "\n", "\r", "\r\n", " \r\n ",
                                "\u2028", "-", "\u2010", "\u2011"}) {
    EXPECT_EQ(Joined("x a" + gap + "b x"), "x a_b x") << testing::PrintToString(gap);
  }
}

TEST(Gaps, Breaks) {
  for (const std::string gap : {"\t", ",", ", ", "--", " - ", "-\n", "\u2013", "\n\n", "\r\n\r\n",
                                "\n\r", "\u2029", "\u200B", " \x01", "\xFF", " \xC3 ", " \uFFFD ",
                                // U+3164 is a word whose form is empty under compatibility_case.
                                " \u3164 "}) {
    EXPECT_EQ(Joined("x a" + gap + "b x"), "x a" + gap + "b x") << testing::PrintToString(gap);
  }
  EXPECT_EQ(Joined("a-b", Hyphens::kSeparate), "a-b");
  EXPECT_EQ(Joined(std::string("a\0b a b", 7)), std::string("a\0b a_b", 7));
}

// UAX #29 breaks between a Latin letter and a Katakana one: two words with an empty gap.
TEST(Gaps, EmptyOneTakesTheJoiner) {
  EXPECT_EQ(CorpusOf(RulingJob(Layout::kText, "a ア"), "aア a-ア"), "a_ア a_ア");
}

std::string FormsOf(Fold fold, bool strip_accents, const std::string& text) {
  Job job = LinesJob(1000);
  job.words.fold = fold;
  job.words.strip_accents = strip_accents;
  return CorpusOf(job, text);
}

TEST(Forms, Folds) {
  // U+FB01 is the ligature fi, U+216B the Roman numeral twelve, U+217B its small form.
  const std::string text = "CAFE\u0301 Stra\u00DFe \uFB01n \u216B Don\u2019t";
  EXPECT_EQ(FormsOf(Fold::kNone, false, text), "CAF\u00C9 Stra\u00DFe \uFB01n \u216B Don\u2019t\n");
  EXPECT_EQ(FormsOf(Fold::kCase, false, text), "caf\u00E9 strasse fin \u217B don't\n");
  EXPECT_EQ(FormsOf(Fold::kCompatibilityCase, false, text), "caf\u00E9 strasse fin xii don't\n");
  EXPECT_EQ(FormsOf(Fold::kCompatibilityCase, true, text), "cafe strasse fin xii don't\n");
  EXPECT_EQ(FormsOf(Fold::kNone, true, text), "CAFE Stra\u00DFe \uFB01n \u216B Don\u2019t\n");
}

TEST(Forms, BothApostrophesAreOneWord) {
  EXPECT_EQ(CorpusOf(LinesJob(3), "don\u2019t go\nDON'T go\ndon\u02BCt go\n"),
            "don't+go\ndon't+go\ndon't+go\n");
}

TEST(Forms, FunctionWordsAreWords) {
  Job job = LinesJob(2);
  job.words.function_word_list = {"of course"};
  EXPECT_THROW(RunOn(job, "a"), std::runtime_error);
}

std::string WithNumbers(Numbers numbers, const std::string& text) {
  Job job = LinesJob(2);
  job.words.numbers = numbers;
  job.passes[0].repeat = 2;
  return CorpusOf(job, text);
}

TEST(Numbers, Anywhere) {
  EXPECT_EQ(WithNumbers(Numbers::kAnywhere, "12 mm\n12 mm\n"), "12+mm\n12+mm\n");
}

TEST(Numbers, NotFirst) {
  EXPECT_EQ(WithNumbers(Numbers::kNotFirst, "12 mm\n12 mm\n"), "12 mm\n12 mm\n");
  EXPECT_EQ(WithNumbers(Numbers::kNotFirst, "mm 12\nmm 12\n"), "mm+12\nmm+12\n");
  // A merged token is not a single word.
  EXPECT_EQ(WithNumbers(Numbers::kNotFirst, "mm 12 kg\nmm 12 kg\n"), "mm+12+kg\nmm+12+kg\n");
  // ICU's rule status goes by how the word ends: b12 is in the NUMBER range, 12b is not.
  EXPECT_EQ(WithNumbers(Numbers::kNotFirst, "b12 mm\nb12 mm\n"), "b12 mm\nb12 mm\n");
  EXPECT_EQ(WithNumbers(Numbers::kNotFirst, "12b mm\n12b mm\n"), "12b+mm\n12b+mm\n");
}

// U+3164 is a letter that compatibility_case drops: 12 and a filler is a word of letters by its
// status, of the form 12. The first word with the form says whether it is a number.
TEST(Numbers, TheFirstWordWithTheFormDecides) {
  EXPECT_EQ(WithNumbers(Numbers::kNotFirst, "12\u3164 mm\n12 mm\n"), "12+mm\n12+mm\n");
  EXPECT_EQ(WithNumbers(Numbers::kNotFirst, "12 mm\n12\u3164 mm\n"), "12 mm\n12 mm\n");
}

// A number is a break for slots, but a token: mm, 12.5, mm, kg are four, and there is one slot.
TEST(Numbers, Nowhere) {
  const std::string text = "mm 12.5 mm kg\nmm 12.5 mm kg\n";
  EXPECT_EQ(WithNumbers(Numbers::kNowhere, text), "mm 12.5 mm+kg\nmm 12.5 mm+kg\n");
  Job job = LinesJob(1000);
  job.words.numbers = Numbers::kNowhere;
  job.passes[0].accept = {{Quantity::kOccurrences, 1}};
  const std::string audit = RunOn(job, "mm 12.5 mm kg\n").at("audit/pass-01.jsonl");
  EXPECT_NE(audit.find("\"tokens_in\":4,\"types_in\":3,\"slots\":1,"), std::string::npos) << audit;
  job.phrases.ruling_list = {{true, "mm 12.5", "", "r", 1}};
  EXPECT_EQ(CorpusOf(job, "mm 12.5\n"), "mm 12.5\n");
}

// Most frequent spelling; a bridge and the hyphen as written, other gaps as one space.
TEST(Surface, MostFrequentSpelling) {
  Job job = LinesJob(2);
  job.words.function_word_list = {"of"};
  const std::string inventory =
      RunOn(job, "cup\u00A0Of  Tea. Cup of tea. cup-of tea\n").at("inventory.jsonl");
  // "cup Of Tea", "Cup of tea", "cup-of tea" once each: the first in byte order.
  EXPECT_NE(inventory.find("\"surface\":\"Cup of tea\""), std::string::npos) << inventory;
  const std::string twice =
      RunOn(job, "cup-of tea. Cup of tea. cup-of\u3000tea\n").at("inventory.jsonl");
  EXPECT_NE(twice.find("\"surface\":\"cup-of tea\""), std::string::npos) << twice;
}

}  // namespace
}  // namespace phraseweld
