#include "run/context_finder.h"

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include <algorithm>
#include <map>
#include <string>
#include <vector>

#include "agreement/random_job.h"
#include "base/strings.h"
#include "reference/corpus.h"
#include "support/temp_folder.h"

namespace phraseweld {
namespace {

using ::testing::ElementsAre;
using ::testing::IsEmpty;
using ::testing::Pair;

using Phrases = std::vector<std::vector<std::string>>;

std::string Shown(const PhraseContext& context) {
  return Concat(context.document, "/", context.passage, "/", context.byte, ": ", context.before,
                "[", context.match, "]", context.after);
}

std::string Shown(const PhraseFindings& found) {
  std::string text =
      Concat(found.occurrences, " in ", found.documents, ", broken ", found.across_breaks, "\n");
  for (const auto& [name, times] : found.breaks) AppendTo(&text, name, " ", times, "\n");
  for (const PhraseContext& context : found.contexts) AppendTo(&text, Shown(context), "\n");
  for (const PhraseContext& context : found.broken_contexts) {
    AppendTo(&text, "broken ", Shown(context), "\n");
  }
  return text;
}

class Corpus {
 public:
  explicit Corpus(Job job, const std::vector<RefInput>& inputs) : job_(std::move(job)) {
    for (const RefInput& input : inputs) {
      files_.push_back({folder_.Put(input.name, input.bytes), input.name});
    }
  }
  Findings Find(const Phrases& phrases, const FindOptions& options = {}, int threads = 2,
                size_t block_bytes = size_t{1} << 20) const {
    ThreadLanes lanes(threads, nullptr);
    auto found = FindPhrases(job_, files_, phrases, options, lanes, Observer{}, block_bytes);
    EXPECT_TRUE(found.ok()) << found.status();
    return *std::move(found);
  }

 private:
  TempFolder folder_;
  Job job_;
  std::vector<InputFile> files_;
};

Corpus Lines(std::string_view text) {
  Job job;
  job.corpus.layout = Layout::kLines;
  return Corpus(job, {{"notes.txt", std::string(text)}});
}

TEST(ContextFinder, WordsNextToEachOtherInOneRunAreAnOccurrence) {
  const Findings found = Lines(
                             "The Pump house. Pump\xC2\xA0house\n"
                             "pump-house and pumphouse\n"
                             "a pump. House\n")
                             .Find({{"pump", "house"}});
  EXPECT_TRUE(found.whole);
  const PhraseFindings& phrase = found.phrases[0];
  EXPECT_EQ(phrase.occurrences, 3u);
  EXPECT_EQ(phrase.documents, 2u);
  EXPECT_EQ(phrase.across_breaks, 1u);
  EXPECT_THAT(phrase.breaks, ElementsAre(Pair("a full stop", 1)));
  ASSERT_EQ(phrase.contexts.size(), 3u);
  EXPECT_EQ(Shown(phrase.contexts[0]), "1//4: The [Pump house]. Pump\xC2\xA0house");
  EXPECT_EQ(phrase.contexts[1].match, "Pump\xC2\xA0house");
  EXPECT_EQ(Shown(phrase.contexts[2]), "2//0: [pump-house] and pumphouse");
  ASSERT_EQ(phrase.broken_contexts.size(), 1u);
  EXPECT_EQ(phrase.broken_contexts[0].match, "pump. House");
}

TEST(ContextFinder, AContextIsCutBetweenCharacters) {
  // Sixty bytes would end in the middle of a letter of two bytes, one of three and one of four.
  for (const std::string letter : {"\xC3\xA9", "\xE2\x82\xAC", "\xF0\x9F\x8C\x8A"}) {
    for (int shift = 0; shift < 4; ++shift) {
      std::string side(static_cast<size_t>(shift), '.');
      while (side.size() < 80) side += letter;
      std::string mirrored;
      while (mirrored.size() < 80) mirrored += letter;
      mirrored.append(static_cast<size_t>(shift), '.');
      const Findings found = Lines(mirrored + " tide gauge " + side).Find({{"tide", "gauge"}});
      ASSERT_EQ(found.phrases[0].contexts.size(), 1u);
      const PhraseContext& context = found.phrases[0].contexts[0];
      EXPECT_LE(context.before.size(), kContextBytes);
      EXPECT_GT(context.before.size(), kContextBytes - letter.size());
      EXPECT_LE(context.after.size(), kContextBytes);
      EXPECT_GT(context.after.size(), kContextBytes - letter.size());
      EXPECT_EQ(context.before.substr(0, letter.size()), letter);
      EXPECT_EQ(context.after.substr(context.after.size() - letter.size()), letter);
    }
  }
}

TEST(ContextFinder, BytesThatAreNoTextDoNotHoldTheCutUp) {
  const std::string junk(100, '\xBF');
  const Findings found = Lines(junk + " tide gauge " + junk).Find({{"tide", "gauge"}});
  EXPECT_GE(found.phrases[0].contexts[0].before.size(), kContextBytes - 4);
  EXPECT_GE(found.phrases[0].contexts[0].after.size(), kContextBytes - 4);
}

TEST(ContextFinder, NamesTheFirstBreakInside) {
  EXPECT_EQ(BreakName(","), "a comma");
  EXPECT_EQ(BreakName(", \""), "a comma");
  EXPECT_EQ(BreakName(" \xE2\x80\x93 "), "a dash");
  EXPECT_EQ(BreakName("\n\n"), "a blank line");
  EXPECT_EQ(BreakName(" \r\n \r\n"), "a blank line");
  EXPECT_EQ(BreakName(" - "), "a hyphen");
  EXPECT_EQ(BreakName("\xC2\xA7"), "'\xC2\xA7'");
  EXPECT_EQ(BreakName("\xFF"), "a byte that is no UTF-8");
  EXPECT_EQ(BreakName("\x01"), "a control character");
}

TEST(ContextFinder, BreaksAreTheMostFrequentFirst) {
  const Findings found =
      Lines("tide; gauge, tide, gauge\ntide, gauge\ntide: gauge gauge\n").Find({{"tide", "gauge"}});
  EXPECT_THAT(found.phrases[0].breaks,
              ElementsAre(Pair("a comma", 2), Pair("a colon", 1), Pair("a semicolon", 1)));
}

TEST(ContextFinder, OccurrencesMayOverlap) {
  const Findings found = Lines("hip hip hip hurra").Find({{"hip", "hip"}});
  EXPECT_EQ(found.phrases[0].occurrences, 2u);
}

TEST(ContextFinder, PhrasesThatShareABeginningAreAllFound) {
  const Findings found = Lines("tide gauge light, tide gauge")
                             .Find({{"tide", "gauge"}, {"tide", "gauge", "light"}, {"gauge"}});
  EXPECT_EQ(found.phrases[0].occurrences, 2u);
  EXPECT_EQ(found.phrases[1].occurrences, 1u);
  EXPECT_EQ(found.phrases[2].occurrences, 2u);
}

TEST(ContextFinder, StopsWhenItHasEnough) {
  std::string text;
  for (int i = 0; i < 2000; ++i) text += "the tide gauge and other things of the sea\n";
  FindOptions options;
  options.first_contexts_alone = true;
  const Corpus corpus = Lines(text);
  const Findings found = corpus.Find({{"tide", "gauge"}}, options, 2, 100);
  EXPECT_FALSE(found.whole);
  EXPECT_LT(found.phrases[0].occurrences, 2000u);
  const Findings all = corpus.Find({{"tide", "gauge"}}, {}, 2, 100);
  EXPECT_EQ(all.phrases[0].occurrences, 2000u);
  ASSERT_EQ(found.phrases[0].contexts.size(), 3u);
  for (size_t i = 0; i < 3; ++i) {
    EXPECT_EQ(Shown(found.phrases[0].contexts[i]), Shown(all.phrases[0].contexts[i]));
  }
  // What never comes keeps it going to the end.
  EXPECT_TRUE(corpus.Find({{"tide", "gauge"}, {"sea", "gauge"}}, options, 2, 100).whole);
}

TEST(ContextFinder, KeepsTheRunsThatHoldASequence) {
  FindOptions options;
  options.keep = {{"tide", "gauge"}};
  Findings found =
      Lines("a tide gauge here, no gauge\nno tide\nold tide gauge\n").Find({{"gauge"}}, options);
  ASSERT_NE(found.runs, nullptr);
  std::string shown;
  for (const Entry entry : found.runs->entries) {
    if (IsMark(entry)) {
      shown += entry == kDocumentEnd ? "." : ",";
    } else {
      AppendTo(&shown, " ", found.runs->vocabulary.form(entry));
    }
  }
  EXPECT_EQ(shown, " a tide gauge here,. old tide gauge,.");
}

// The same by the letter of the contract, from whole passages.
PhraseFindings Expected(const Job& job, const std::vector<RefInput>& inputs,
                        const std::vector<std::string>& phrase, size_t most) {
  PhraseFindings found;
  std::map<std::string, uint64_t> breaks;
  for (const reference::Document& document : reference::ReadCorpus(job, inputs)) {
    bool in_document = false;
    for (const reference::Passage& passage : document.passages) {
      for (size_t at = 0; at + phrase.size() <= passage.words.size(); ++at) {
        size_t same = 0, first_break = 0;
        while (same < phrase.size() && passage.words[at + same].form == phrase[same]) ++same;
        if (same < phrase.size()) continue;
        for (size_t i = phrase.size() - 1; i > 0; --i) {
          if (passage.tokens[at + i].break_before) first_break = i;
        }
        PhraseContext context;
        context.document = document.name;
        context.passage = passage.name;
        context.byte = passage.words[at].begin;
        const size_t end = passage.words[at + phrase.size() - 1].end;
        context.match = passage.text.substr(context.byte, end - context.byte);
        size_t from = context.byte > kContextBytes ? context.byte - kContextBytes : 0;
        const auto inside = [&](size_t place) {
          return place > 0 && place < passage.text.size() &&
                 (static_cast<unsigned char>(passage.text[place]) & 0xC0) == 0x80;
        };
        for (int i = 0; i < 3 && from > 0 && inside(from); ++i) ++from;
        context.before = passage.text.substr(from, context.byte - from);
        size_t to = end + kContextBytes;
        for (int i = 0; i < 3 && inside(to); ++i) --to;
        context.after = passage.text.substr(end, to - end);
        if (first_break > 0) {
          ++found.across_breaks;
          const size_t gap = passage.words[at + first_break - 1].end;
          ++breaks[BreakName(std::string_view(passage.text)
                                 .substr(gap, passage.words[at + first_break].begin - gap))];
          if (found.broken_contexts.size() < most) found.broken_contexts.push_back(context);
          continue;
        }
        ++found.occurrences;
        in_document = true;
        if (found.contexts.size() < most) found.contexts.push_back(context);
      }
    }
    found.documents += in_document ? 1 : 0;
  }
  found.breaks.assign(breaks.begin(), breaks.end());
  std::stable_sort(found.breaks.begin(), found.breaks.end(),
                   [](const auto& a, const auto& b) { return a.second > b.second; });
  return found;
}

// Runs as words and marks, from whole passages.
std::string ExpectedRuns(const Job& job, const std::vector<RefInput>& inputs) {
  std::string runs;
  for (const reference::Document& document : reference::ReadCorpus(job, inputs)) {
    bool any = false;
    for (const reference::Passage& passage : document.passages) {
      for (size_t i = 0; i < passage.words.size(); ++i) {
        AppendTo(&runs, i > 0 && passage.tokens[i].break_before ? ",|" : "|",
                 passage.words[i].form);
      }
      if (!passage.words.empty()) runs += ",";
      any = any || !passage.words.empty();
    }
    if (any) runs += ".";
  }
  return runs;
}

TEST(ContextFinder, RandomCorporaGiveWhatWholePassagesGive) {
  uint64_t occurrences = 0, broken = 0, cut = 0;
  for (uint64_t seed = 1; seed <= 400; ++seed) {
    RandomJobs random(seed);
    const Job job = random.NextJob();
    const std::vector<RefInput> inputs = random.NextInputs(job);
    Phrases phrases;
    std::vector<std::string> forms;
    try {
      for (const auto& document : reference::ReadCorpus(job, inputs)) {
        for (const auto& passage : document.passages) {
          for (const auto& word : passage.words) forms.push_back(word.form);
        }
      }
    } catch (const std::runtime_error&) {
      continue;  // a line stops the job
    }
    if (forms.size() < 8) continue;
    for (int i = 0; i < 6; ++i) {
      const size_t words = 1 + random.Below(4);
      const size_t at = random.Below(forms.size() - words);
      phrases.emplace_back(forms.begin() + static_cast<ptrdiff_t>(at),
                           forms.begin() + static_cast<ptrdiff_t>(at + words));
    }
    const Corpus corpus(job, inputs);
    FindOptions options;
    options.contexts = 1 + random.Below(3);
    options.keep_all = random.Below(2) == 0;
    const size_t block_bytes = 1 + random.Below(120);
    const int threads = 1 + static_cast<int>(random.Below(3));
    const Findings found = corpus.Find(phrases, options, threads, block_bytes);
    for (size_t i = 0; i < phrases.size(); ++i) {
      const PhraseFindings expected = Expected(job, inputs, phrases[i], options.contexts);
      ASSERT_EQ(Shown(found.phrases[i]), Shown(expected))
          << "seed " << seed << ", blocks of " << block_bytes << ": " << Join(phrases[i], " ");
      occurrences += expected.occurrences;
      broken += expected.across_breaks;
      for (const PhraseContext& context : expected.contexts) cut += context.before.size() >= 57;
    }
    if (!options.keep_all) continue;
    std::string runs;
    for (const Entry entry : found.runs->entries) {
      if (IsMark(entry)) {
        runs += entry == kDocumentEnd ? "." : ",";
      } else {
        AppendTo(&runs, "|", found.runs->vocabulary.form(entry));
      }
    }
    ASSERT_EQ(runs, ExpectedRuns(job, inputs)) << "seed " << seed;
  }
  EXPECT_GT(occurrences, 5000u);
  EXPECT_GT(broken, 500u);
  EXPECT_GT(cut, 500u);
}

TEST(ContextFinder, LongPassagesInManyPiecesGiveTheSame) {
  Job job;
  std::string text;
  const std::vector<std::string> words = {"tide", "Gauge", "caf\xC3\xA9", "light", "of", "7"};
  const std::vector<std::string> gaps = {" ", " ", ", ", "-", "\n", " (", "\n\n"};
  RandomJobs random(5);
  for (int i = 0; i < 3000; ++i) {
    text += words[random.Below(words.size())] + gaps[random.Below(gaps.size())];
  }
  const std::vector<RefInput> inputs = {{"a.txt", text}, {"b.txt", text.substr(0, 700)}};
  const Corpus corpus(job, inputs);
  const Phrases phrases = {{"tide", "gauge"}, {"light", "of", "caf\xC3\xA9"}, {"7"}};
  std::vector<std::string> expected;
  for (const auto& phrase : phrases) expected.push_back(Shown(Expected(job, inputs, phrase, 40)));
  FindOptions options;
  options.contexts = 40;
  for (const size_t block_bytes : {1, 30, 100, 333, 5000, 1 << 20}) {
    for (const int threads : {1, 3}) {
      const Findings found = corpus.Find(phrases, options, threads, block_bytes);
      for (size_t i = 0; i < phrases.size(); ++i) {
        ASSERT_EQ(Shown(found.phrases[i]), expected[i]) << block_bytes;
      }
    }
  }
}

}  // namespace
}  // namespace phraseweld
