#include "words/vocabulary.h"

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include <cmath>
#include <string>
#include <thread>

#include "absl/hash/hash.h"
#include "absl/strings/str_cat.h"
#include "words/reference_splitter.h"

namespace phraseweld {
namespace {

using testing::ElementsAre;

std::vector<std::string> Forms(const Vocabulary& vocabulary) {
  std::vector<std::string> forms;
  for (uint32_t id = 0; id < vocabulary.size(); ++id) forms.emplace_back(vocabulary.form(id));
  return forms;
}

TEST(VocabularyTest, FinalIdsFollowTheFirstPlaces) {
  Vocabulary vocabulary;
  const uint32_t late = vocabulary.Intern("late", 90, false);
  const uint32_t early = vocabulary.Intern("early", 50, false);
  EXPECT_EQ(vocabulary.Intern("late", 10, false), late);
  EXPECT_EQ(vocabulary.Intern("early", 70, false), early);
  const auto finals = vocabulary.Finish({});
  ASSERT_TRUE(finals.ok());
  EXPECT_EQ((*finals)[late], 0u);
  EXPECT_EQ((*finals)[early], 1u);
  EXPECT_THAT(Forms(vocabulary), ElementsAre("late", "early"));
}

TEST(VocabularyTest, ReservedFormsComeFirstWhetherTheyOccurOrNot) {
  Vocabulary vocabulary;
  const uint32_t of = vocabulary.Intern("of", 3, false);
  const uint32_t word = vocabulary.Intern("word", 1, false);
  const auto finals = vocabulary.Finish({"the", "of", "the"});
  ASSERT_TRUE(finals.ok());
  EXPECT_THAT(Forms(vocabulary), ElementsAre("the", "of", "word"));
  EXPECT_EQ((*finals)[of], 1u);
  EXPECT_EQ((*finals)[word], 2u);
  EXPECT_FALSE(vocabulary.is_number(0));
}

TEST(VocabularyTest, ANumberIsWhatItsFirstPlaceSays) {
  Vocabulary vocabulary;
  vocabulary.Intern("x1", 20, true);
  vocabulary.Intern("x1", 10, false);
  vocabulary.Intern("x1", 30, true);
  vocabulary.Intern("y1", 40, true);
  vocabulary.Intern("y1", 50, false);
  ASSERT_TRUE(vocabulary.Finish({"z"}).ok());
  EXPECT_FALSE(vocabulary.is_number(vocabulary.Find("x1")));
  EXPECT_TRUE(vocabulary.is_number(vocabulary.Find("y1")));
}

TEST(VocabularyTest, FindsWhatItHasAndNothingElse) {
  Vocabulary vocabulary;
  const std::string long_form(100000, 'x');
  for (uint64_t i = 0; i < 20000; ++i) vocabulary.Intern(absl::StrCat("form", i), i, false);
  vocabulary.Intern(long_form, 20000, false);
  vocabulary.Intern("after", 20001, false);
  ASSERT_TRUE(vocabulary.Finish({}).ok());
  ASSERT_EQ(vocabulary.size(), 20002u);
  for (uint32_t i = 0; i < 20000; ++i) {
    ASSERT_EQ(vocabulary.Find(absl::StrCat("form", i)), i);
    ASSERT_EQ(vocabulary.form(i), absl::StrCat("form", i));
  }
  EXPECT_EQ(vocabulary.form(20000), long_form);
  EXPECT_EQ(vocabulary.Find(long_form), 20000u);
  EXPECT_EQ(vocabulary.Find("after"), 20001u);
  EXPECT_EQ(vocabulary.Find("form"), kBreak);
  EXPECT_EQ(vocabulary.Find(""), kBreak);
}

TEST(VocabularyTest, AnEmptyOneFinishes) {
  Vocabulary vocabulary;
  const auto finals = vocabulary.Finish({});
  ASSERT_TRUE(finals.ok());
  EXPECT_EQ(vocabulary.size(), 0u);
  EXPECT_EQ(vocabulary.Find("x"), kBreak);
}

TEST(VocabularyTest, CostsFortyBytesAFormBesideItsOwnBytes) {
  Vocabulary vocabulary;
  const uint64_t empty = vocabulary.memory();
  constexpr uint64_t kForms = 1000000;
  uint64_t bytes = 0;
  for (uint64_t i = 0; i < kForms; ++i) {
    const std::string form = absl::StrCat(i * 7919);
    bytes += form.size();
    vocabulary.Intern(form, i, true);
  }
  EXPECT_LT(vocabulary.memory() - empty, bytes + 40 * kForms);
  EXPECT_GT(vocabulary.memory() - empty, bytes + 12 * kForms);
  ASSERT_TRUE(vocabulary.Finish({}).ok());
  EXPECT_LT(vocabulary.memory() - empty, bytes + 40 * kForms);
}

// What Encode must give, from the reference words, with the forms for ids.
std::vector<std::string> ReferenceEntries(std::string_view text, const WordOptions& options) {
  WordFolder folder(options);
  std::vector<std::string> entries;
  uint32_t last_end = 0;
  for (const WordSpan& word : ReferenceWords(text, options)) {
    if (!entries.empty() &&
        !GapIsOpen(text.substr(last_end, word.begin - last_end), options.join_hyphens)) {
      entries.emplace_back("<break>");
    }
    entries.push_back(folder.Form(text.substr(word.begin, word.end - word.begin)));
    last_end = word.end;
  }
  return entries;
}

TEST(EncoderTest, GivesTheFormsAndBreaksOfTheText) {
  std::mt19937_64 random(9);
  for (int round = 0; round < 3000; ++round) {
    const WordOptions options{.fold = static_cast<FormFold>(random() % 3),
                              .strip_accents = random() % 2 == 0,
                              .join_hyphens = random() % 2 == 0};
    const SplitPath path = random() % 4 == 0 ? SplitPath::kExact : SplitPath::kFast;
    Vocabulary vocabulary;
    Encoder encoder(options, &vocabulary, path);
    const std::string text = RandomText(&random, 1 + random() % 200);
    // Twice, so that the second time the cache answers.
    std::vector<Entry> entries;
    encoder.Encode(text, false, 0, &entries);
    const size_t once = entries.size();
    encoder.Encode(text, false, 0, &entries);
    ASSERT_EQ(entries.size(), 2 * once);
    const auto finals = vocabulary.Finish({});
    ASSERT_TRUE(finals.ok());
    std::vector<std::string> forms;
    for (const Entry entry : entries) {
      forms.emplace_back(entry == kBreak ? "<break>" : vocabulary.form((*finals)[entry]));
    }
    std::vector<std::string> expected = ReferenceEntries(text, options);
    ASSERT_EQ(std::vector<std::string>(forms.begin() + static_cast<ptrdiff_t>(once), forms.end()),
              expected);
    forms.resize(once);
    ASSERT_EQ(forms, expected);
  }
}

TEST(EncoderTest, TellsWordsApartThatShareTheirFirstBytes) {
  // Around the 8 and 16 bytes of a key and the longest that is remembered.
  Vocabulary vocabulary;
  Encoder encoder({}, &vocabulary);
  std::string text;
  for (size_t size = 1; size <= 70; ++size) {
    text += std::string(size, 'a') + ' ' + std::string(size - 1, 'a') + "b ";
  }
  std::vector<Entry> entries;
  encoder.Encode(text, false, 0, &entries);
  encoder.Encode(text, false, entries.size(), &entries);
  const auto finals = vocabulary.Finish({});
  ASSERT_TRUE(finals.ok());
  ASSERT_EQ(entries.size(), 280u);
  EXPECT_EQ(vocabulary.size(), 140u);
  for (size_t i = 0; i < 280; ++i) {
    const size_t size = i % 140 / 2 + 1;
    const std::string expected = std::string(size - 1, 'a') + (i % 2 == 0 ? 'a' : 'b');
    EXPECT_EQ(vocabulary.form((*finals)[entries[i]]), expected);
  }
}

TEST(EncoderTest, PlacesCountFromTheStartOfTheEntries) {
  Vocabulary vocabulary;
  Encoder encoder({}, &vocabulary);
  std::vector<Entry> entries = {kDocumentEnd, kDocumentEnd};
  encoder.Encode("one, two", false, 100, &entries);
  // "one" stands at place 102, a break at 103, "two" at 104.
  vocabulary.Intern("before one", 101, false);
  vocabulary.Intern("between", 103, false);
  vocabulary.Intern("after two", 105, false);
  ASSERT_TRUE(vocabulary.Finish({}).ok());
  EXPECT_THAT(Forms(vocabulary), ElementsAre("before one", "one", "between", "two", "after two"));
}

TEST(EncoderTest, FillsInAheadWhatItLeftOpen) {
  // Short texts, of which many bring new words and some the same new word several times.
  std::mt19937_64 random(11);
  std::vector<std::string> texts;
  for (int i = 0; i < 20000; ++i) {
    texts.push_back(absl::StrCat("w", random() % 9000, ", Word", random() % 300, " w", i / 3));
    if (i % 1000 == 0) texts.back() += " " + std::string(70000, 'y') + absl::StrCat(i);
  }
  Vocabulary vocabulary;
  Encoder plain({}, &vocabulary), ahead({}, &vocabulary);
  std::vector<Entry> expected, entries;
  for (const std::string& text : texts) plain.Encode(text, true, 0, &expected);
  for (const std::string& text : texts) ahead.EncodeAhead(text, true, 0, &entries);
  ahead.Settle(&entries);
  EXPECT_EQ(entries, expected);
}

// Words of a skewed distribution, as in a language, some capitalised, some long, some not ASCII.
std::string LanguageLikeText(size_t bytes) {
  std::mt19937_64 random(17);
  std::string text;
  while (text.size() < bytes) {
    // Zipf: the logarithm of the rank is uniform.
    const double uniform = static_cast<double>(random() % 1000000) / 1000000.0;
    const auto rank = static_cast<uint64_t>(std::pow(500000.0, uniform));
    std::string word;
    for (uint64_t rest = rank; rest > 0; rest /= 20) word += static_cast<char>('a' + rest % 20);
    if (rank % 13 == 0) word += "\u00E9";
    if (rank % 17 == 0) word += "longer-than-a-key-holds_indeed";
    if (rank % 5 == 0) word += absl::StrCat(rank);
    if (random() % 8 == 0) word[0] = static_cast<char>(word[0] - 'a' + 'A');
    text += word;
    text += random() % 6 == 0 ? ". " : random() % 9 == 0 ? "\n" : " ";
  }
  return text;
}

struct Encoded {
  std::vector<Entry> entries;
  std::vector<std::string> forms;
  std::vector<bool> numbers;
  friend bool operator==(const Encoded&, const Encoded&) = default;
};

// Encodes `text` cut into parts of about `part_bytes`, each thread taking every threads-th part.
Encoded EncodeInParallel(std::string_view text, size_t thread_count, size_t part_bytes) {
  std::vector<std::string_view> parts;
  for (size_t begin = 0; begin < text.size();) {
    size_t end = std::min(text.size(), begin + part_bytes);
    while (end < text.size() &&
           !((text[end - 1] == ' ' || text[end - 1] == '\n') && StartsWord(text.substr(end)))) {
      ++end;
    }
    parts.push_back(text.substr(begin, end - begin));
    begin = end;
  }
  Vocabulary vocabulary;
  std::vector<std::vector<Entry>> entries(parts.size());
  std::vector<std::thread> threads;
  for (size_t thread = 0; thread < thread_count; ++thread) {
    threads.emplace_back([&, thread] {
      Encoder encoder({}, &vocabulary);
      for (size_t part = thread; part < parts.size(); part += thread_count) {
        encoder.Encode(parts[part], part + 1 < parts.size(), uint64_t{part} << 32, &entries[part]);
      }
    });
  }
  for (std::thread& thread : threads) thread.join();
  Encoded encoded;
  const auto finals = vocabulary.Finish({"the", "a"});
  EXPECT_TRUE(finals.ok());
  for (const std::vector<Entry>& part : entries) {
    for (const Entry entry : part) {
      encoded.entries.push_back(entry == kBreak ? kBreak : (*finals)[entry]);
    }
  }
  encoded.forms = Forms(vocabulary);
  for (uint32_t id = 0; id < vocabulary.size(); ++id) {
    encoded.numbers.push_back(vocabulary.is_number(id));
  }
  return encoded;
}

TEST(EncoderTest, IdsDependNeitherOnThreadsNorOnChopping) {
  const std::string text = LanguageLikeText(3 << 20);
  const Encoded expected = EncodeInParallel(text, 1, text.size());
  EXPECT_GT(expected.forms.size(), 40000u);
  for (const size_t threads : {1, 2, 3, 8}) {
    for (const size_t part_bytes : {1000, 65536, 400000}) {
      EXPECT_TRUE(EncodeInParallel(text, threads, part_bytes) == expected)
          << threads << " threads, parts of " << part_bytes;
    }
  }
}

}  // namespace
}  // namespace phraseweld
