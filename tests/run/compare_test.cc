#include "run/compare.h"

#include <gmock/gmock.h>
#include <gtest/gtest.h>
#include <simdjson.h>

#include <map>
#include <set>
#include <string>
#include <vector>

#include "base/strings.h"
#include "base/utf8.h"
#include "config/job_file.h"
#include "deliver/compare_page.h"
#include "support/finished_run.h"
#include "support/temp_folder.h"

namespace phraseweld {
namespace {

using ::testing::HasSubstr;
using ::testing::IsEmpty;
using ::testing::Not;

std::string Times(int times, const std::string& line) {
  std::string lines;
  for (int i = 0; i < times; ++i) lines += line + "\n";
  return lines;
}

Job LinesJob() {
  Job job;
  job.job = "harbour";
  job.corpus.layout = Layout::kLines;
  job.passes.resize(2);
  job.passes[0].name = "pairs";
  job.passes[0].accept = {{Quantity::kOccurrences, 3}, {Quantity::kDocuments, 3}};
  job.passes[1] = job.passes[0];
  job.passes[1].repeat = 2;
  return job;
}

const std::string kHarbour = Times(4, "tide gauge") + Times(5, "left bank light") +
                             Times(3, "bank light") + Times(2, "fog horn fog horn") +
                             Times(6, "mooring line");

class CompareTest : public ::testing::Test {
 protected:
  std::string Put(const std::string& name, const Job& job, const std::string& text) {
    return PutFinishedRun(folder_, name, job, {{"notes", text}});
  }
  RunComparison Compare(const std::string& left, const std::string& right) {
    auto comparison = CompareRuns(FileSystem::Posix(), left, right);
    EXPECT_TRUE(comparison.ok()) << comparison.status();
    return comparison.ok() ? *std::move(comparison) : RunComparison{};
  }
  // Compares the run of `left` on kHarbour with that of `right` on `text`.
  RunComparison Changed(const Job& left, const Job& right, const std::string& text = kHarbour) {
    return Compare(Put("left", left, kHarbour), Put("right", right, text));
  }

  TempFolder folder_;
};

// The one phrase that was lost.
OneSidedPhrase Lost(const RunComparison& comparison, const std::string& phrase) {
  for (const OneSidedPhrase& lost : comparison.lost) {
    if (lost.phrase.phrase == phrase) return lost;
  }
  ADD_FAILURE() << phrase << " was not lost";
  return {};
}

std::set<std::string> Texts(const std::vector<OneSidedPhrase>& phrases) {
  std::set<std::string> texts;
  for (const OneSidedPhrase& phrase : phrases) texts.insert(phrase.phrase.phrase);
  return texts;
}

TEST_F(CompareTest, ARunDoesNotDifferFromItself) {
  const RunComparison comparison = Changed(LinesJob(), LinesJob());
  EXPECT_THAT(comparison.gained, IsEmpty());
  EXPECT_THAT(comparison.lost, IsEmpty());
  EXPECT_THAT(comparison.inputs, IsEmpty());
  EXPECT_EQ(comparison.kept.size(), 5u);
  EXPECT_EQ(comparison.kept_changed, 0u);
  for (const OrderAgreement& agreement : comparison.agreements) {
    if (agreement.by == "npmi") {  // 1 for all, so that there is no order
      EXPECT_FALSE(agreement.spearman || agreement.kendall);
      continue;
    }
    EXPECT_EQ(agreement.spearman, 1) << agreement.by;
    EXPECT_EQ(agreement.kendall, 1) << agreement.by;
  }
  for (const KeyDifference& key : comparison.keys) EXPECT_FALSE(key.shapes_phrases) << key.key;
}

TEST_F(CompareTest, EveryPhraseIsGainedLostOrKeptAndSidesMirror) {
  Job other = LinesJob();
  other.passes[0].accept = {{Quantity::kOccurrences, 2}};
  other.phrases.longest = 2;
  const std::string text = Times(2, "tide gauge") + Times(3, "sea mark") + Times(9, "bank light");
  const std::string left = Put("left", LinesJob(), kHarbour), right = Put("right", other, text);
  const RunComparison there = Compare(left, right), back = Compare(right, left);
  EXPECT_EQ(Texts(there.gained), Texts(back.lost));
  EXPECT_EQ(Texts(there.lost), Texts(back.gained));
  EXPECT_EQ(Texts(there.gained), std::set<std::string>({"sea mark"}));
  EXPECT_EQ(Texts(there.lost),
            std::set<std::string>({"left bank", "left bank light", "mooring line"}));
  ASSERT_EQ(there.kept.size(), 2u);
  EXPECT_EQ(there.kept_changed, 2u);
  const KeptPhrase& bank_light = there.kept[0];
  EXPECT_EQ(bank_light.left.phrase, "bank light");
  EXPECT_EQ(bank_light.left.occurrences, 3u);
  EXPECT_EQ(bank_light.right.occurrences, 9u);
  EXPECT_EQ(bank_light.left.rank, 5u);
  EXPECT_EQ(bank_light.right.rank, 1u);
  EXPECT_EQ(there.kept[1].left.phrase, "tide gauge");
  EXPECT_EQ(there.inputs.size(), 1u);
  EXPECT_EQ(there.inputs[0].change, InputChange::kChanged);
}

TEST_F(CompareTest, ANearMissNamesItsGateOnBothSides) {
  Job job = LinesJob();
  job.passes[0].accept[1].least = job.passes[1].accept[1].least = 5;
  const OneSidedPhrase lost = Lost(Changed(LinesJob(), job), "tide gauge");
  EXPECT_EQ(lost.absence, Absence::kGate);
  EXPECT_EQ(lost.why, "right: documents 4 < 5 in pass 1; left: 4 >= 3");
}

TEST_F(CompareTest, WhatYieldedIsNamed) {
  Job left = LinesJob(), right = LinesJob();
  // "left bank" outranks "bank light" by n where that stands nowhere else.
  left.passes[0].accept.push_back({Quantity::kDpForward, 0.9});
  left.passes.resize(1);
  right.passes.resize(1);
  left.passes[0].rank_by = right.passes[0].rank_by = Quantity::kBurst;
  const std::string text = Times(5, "left bank light") + Times(4, "left bank");
  const RunComparison comparison = Changed(left, right, text);
  const OneSidedPhrase lost = Lost(comparison, "bank light");
  EXPECT_EQ(lost.absence, Absence::kYielded);
  EXPECT_EQ(lost.why, "right: accepted in pass 1, but all its 5 slots yielded to better ones");
}

TEST_F(CompareTest, RulesAndRulingsAreNamed) {
  Job never = LinesJob();
  never.phrases.ruling_list = {{false, "Tide-Gauge", "", "", 1}};
  EXPECT_EQ(Lost(Changed(LinesJob(), never), "tide gauge").absence, Absence::kNever);

  Job longest = LinesJob();
  longest.phrases.longest = 2;
  const OneSidedPhrase too_long = Lost(Changed(LinesJob(), longest), "left bank light");
  EXPECT_EQ(too_long.absence, Absence::kLongest);
  EXPECT_EQ(too_long.why, "right: its 3 words are more than phrases.longest: 2");

  Job always = LinesJob();
  always.phrases.ruling_list = {{true, "fog horn fog", "", "", 1}};
  EXPECT_EQ(Lost(Changed(always, LinesJob()), "fog horn fog").absence, Absence::kNoRuling);

  Job take = LinesJob();
  take.passes.resize(1);
  take.passes[0].take = 1;
  const OneSidedPhrase below = Lost(Changed(LinesJob(), take), "mooring line");
  EXPECT_EQ(below.absence, Absence::kTake);
  EXPECT_EQ(below.why, "right: pass 1 took its best 1 alone");
}

TEST_F(CompareTest, AMissingPartAndGatesOnTheOtherCountsAreNamed) {
  Job left = LinesJob(), right = LinesJob();
  for (Job* job : {&left, &right}) job->passes[0].rank_by = Quantity::kBurst;
  right.phrases.ruling_list = {{false, "bank light", "", "", 1}, {false, "left bank", "", "", 2}};
  const OneSidedPhrase part = Lost(Changed(left, right), "left bank light");
  EXPECT_EQ(part.absence, Absence::kPartMissing);
  EXPECT_EQ(part.why, "right: 'bank light', of which it is made, is missing");

  Job strict = LinesJob();
  for (PassOptions& pass : strict.passes) {
    pass.accept = {{Quantity::kOccurrences, 5}, {Quantity::kDocuments, 4}, {Quantity::kG2, 1e6}};
  }
  const OneSidedPhrase gates = Lost(Changed(LinesJob(), strict), "tide gauge");
  EXPECT_EQ(gates.absence, Absence::kGates);
  EXPECT_THAT(gates.why, HasSubstr("gates of right on the counts of left: occurrences 4 < 5 in "
                                   "pass 1, g2 "));
}

TEST_F(CompareTest, WhatNoLogTellsIsPutDownToTheCorpusOrTheKeys) {
  const std::string text = Times(6, "mooring line");
  EXPECT_EQ(Lost(Changed(LinesJob(), LinesJob(), text), "tide gauge").absence, Absence::kCorpus);
  Job broken = LinesJob();
  broken.words.hyphens = Hyphens::kSeparate;
  const std::string hyphens = Times(4, "tide-gauge");
  const OneSidedPhrase keys =
      Lost(Compare(Put("a", LinesJob(), hyphens), Put("b", broken, hyphens)), "tide gauge");
  EXPECT_EQ(keys.absence, Absence::kKeys);
  EXPECT_EQ(keys.why, "changed: words.hyphens");
  const OneSidedPhrase both =
      Lost(Compare(Put("a", LinesJob(), hyphens), Put("b", broken, text)), "tide gauge");
  EXPECT_EQ(both.absence, Absence::kBoth);
}

TEST_F(CompareTest, KeysDifferByTheirSettingsAndInputsByTheirHashes) {
  Job other = LinesJob();
  other.passes[0].accept = {{Quantity::kOccurrences, 3}, {Quantity::kPmi, 1.5}};
  other.limits.threads = 3;
  other.passes.resize(1);
  const std::string left = PutFinishedRun(folder_, "left", LinesJob(),
                                          {{"a", "x\n"}, {"b", "y\n"}, {"c", "z\n"}, {"d", "w\n"}});
  const std::string right = PutFinishedRun(folder_, "right", other,
                                           {{"c", "z\n"}, {"b", "yy\n"}, {"d", "w\n"}, {"e", ""}});
  const RunComparison comparison = Compare(left, right);
  std::map<std::string, std::string> keys;
  for (const KeyDifference& key : comparison.keys) {
    keys[key.key] = Concat(key.left.value_or("-"), " ", key.right.value_or("-"), " ",
                           key.shapes_phrases ? "shapes" : "");
  }
  EXPECT_EQ(keys["passes.0.accept.documents"], "3 - shapes");
  EXPECT_EQ(keys["passes.0.accept.pmi"], "- 1.5 shapes");
  EXPECT_EQ(keys["passes.1.repeat"], "2 - shapes");
  EXPECT_EQ(keys["limits.threads"], "0 3 ");
  EXPECT_FALSE(keys.contains("passes.0.accept.occurrences"));
  std::vector<std::string> inputs;
  for (const InputDifference& input : comparison.inputs) {
    inputs.push_back(Concat(input.name, " ", kInputChangeNames[static_cast<size_t>(input.change)]));
  }
  EXPECT_THAT(inputs, ::testing::ElementsAre("a removed", "b changed", "e added"));
  EXPECT_TRUE(comparison.input_order_differs);
}

// Texts that are hostile to terminals, JSON and HTML.
RunComparison Hostile() {
  RunComparison comparison;
  const std::string evil = "<script>alert(1)</script> \"quote' &amp; \x1b[31m \xE2\x80\xAE \xFF";
  ComparedPhrase phrase;
  phrase.phrase = evil;
  phrase.words = 3;
  phrase.occurrences = 1234567;
  phrase.scores = {{Quantity::kPmi, 5.25}};
  comparison.left.folder = comparison.right.job = evil;
  comparison.gained = {{phrase, Absence::kGate, evil}};
  comparison.lost = {{phrase, Absence::kCorpus, std::string(300, 'w')}};
  ComparedPhrase other = phrase;
  other.occurrences = 9876543;
  other.rank = 1000000;
  comparison.kept = {{phrase, other, true}};
  comparison.kept_changed = 1;
  comparison.keys = {{evil, evil, std::nullopt, true}};
  comparison.inputs = {{evil, InputChange::kAdded, 0, 7}};
  comparison.agreements = {{"occurrences", 1, std::nullopt, std::nullopt}};
  return comparison;
}

TEST(CompareRendering, TextFitsTheTerminalAndHoldsNoControls) {
  const std::string text = ComparisonText(Hostile(), 10);
  for (const std::string_view line : Split(text, '\n')) {
    EXPECT_TRUE(Contains(line, "www") || DisplayWidth(line) <= 80) << line;
    for (size_t at = 0; at < line.size();) {
      const auto point = NextCodePoint(line, &at);
      ASSERT_TRUE(point.has_value()) << line;
      EXPECT_FALSE(IsControl(*point)) << line;
    }
  }
  EXPECT_THAT(text, HasSubstr("1,234,567"));
}

TEST(CompareRendering, ListsSayHowMuchTheyLeaveOut) {
  RunComparison comparison = Hostile();
  comparison.lost.resize(5, comparison.lost[0]);
  EXPECT_THAT(ComparisonText(comparison, 2), HasSubstr("… and 3 more"));
  comparison.lost.resize(kMostComparedRows + 1234, comparison.lost[0]);
  EXPECT_THAT(RenderComparePage(comparison), HasSubstr("1,234 more are not shown here"));
}

TEST(CompareRendering, JsonSaysEverything) {
  RunComparison comparison = Hostile();
  std::string& evil = comparison.gained[0].phrase.phrase;
  evil.pop_back();  // the byte that is no UTF-8; a run's own phrases have none
  comparison.lost[0].phrase.phrase = comparison.gained[0].why = evil;
  comparison.kept[0].left.phrase = comparison.keys[0].key = evil;
  comparison.keys[0].left = comparison.left.folder = evil;
  comparison.inputs[0].name = comparison.right.job = evil;
  const std::string json = ComparisonJson(comparison);
  simdjson::dom::parser parser;
  simdjson::dom::element read;
  ASSERT_EQ(parser.parse(json).get(read), simdjson::SUCCESS) << json;
  EXPECT_EQ(std::string_view(read.at_pointer("/gained/0/phrase")), evil);
  EXPECT_EQ(std::string_view(read.at_pointer("/lost/0/absence")), "corpus");
  EXPECT_EQ(uint64_t(read.at_pointer("/kept/0/right/occurrences")), 9876543u);
  EXPECT_EQ(double(read.at_pointer("/kept/0/left/scores/pmi")), 5.25);
  EXPECT_TRUE(read.at_pointer("/keys/0/right").is_null());
  EXPECT_TRUE(read.at_pointer("/agreement/0/spearman").is_null());
  EXPECT_EQ(std::string_view(read.at_pointer("/inputs/0/change")), "added");
}

TEST(CompareRendering, PageKeepsTextsTexts) {
  const std::string page = RenderComparePage(Hostile());
  size_t scripts = 0;
  for (size_t at = page.find("<script"); at != std::string::npos;
       at = page.find("<script", at + 1)) {
    ++scripts;
  }
  EXPECT_EQ(scripts, 1u);  // its own
  EXPECT_THAT(page, HasSubstr("&lt;script&gt;alert(1)&lt;/script&gt;"));
  EXPECT_THAT(page, HasSubstr("&quot;quote&#39; &amp;amp; "));
  EXPECT_THAT(page, Not(HasSubstr("\x1b")));
  EXPECT_FALSE(FirstInvalidUtf8(page).has_value());
  EXPECT_THAT(page, HasSubstr("default-src 'none'; style-src 'sha256-"));
  EXPECT_EQ(page, RenderComparePage(Hostile()));
}

TEST_F(CompareTest, ThePageIsWrittenWhole) {
  const RunComparison comparison = Changed(LinesJob(), LinesJob());
  const std::string path = folder_.Path("page.html");
  ASSERT_TRUE(WriteComparisonPage(FileSystem::Posix(), comparison, path).ok());
  EXPECT_EQ(folder_.Get("page.html"), RenderComparePage(comparison));
  EXPECT_FALSE(WriteComparisonPage(FileSystem::Posix(), comparison, folder_.Path("no/page")).ok());
}

TEST_F(CompareTest, AJobThatIsNotTheAuditsIsAnError) {
  const std::string run = Put("left", LinesJob(), kHarbour);
  Job other = LinesJob();
  other.passes.resize(1);
  other.corpus.files = {"x"};
  other.run_folder = run;
  folder_.Put("left/job.yaml", WriteJobYaml(other));
  const auto comparison = CompareRuns(FileSystem::Posix(), run, run);
  EXPECT_EQ(comparison.status().code(), absl::StatusCode::kDataLoss);
  EXPECT_THAT(std::string(comparison.status().message()), HasSubstr("other passes than audit/"));
}

}  // namespace
}  // namespace phraseweld
