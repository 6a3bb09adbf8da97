#include "run/grade.h"

#include <gmock/gmock.h>
#include <gtest/gtest.h>
#include <simdjson.h>

#include <algorithm>
#include <map>
#include <random>
#include <set>
#include <string>
#include <vector>

#include "base/strings.h"
#include "base/utf8.h"
#include "read/run_folder.h"
#include "reference/words.h"
#include "run/finished_run.h"
#include "run/known_phrases.h"
#include "run/ranking_quality.h"
#include "run/source_recount.h"
#include "score/measures.h"
#include "support/finished_run.h"
#include "support/temp_folder.h"

namespace phraseweld {
namespace {

using ::testing::AllOf;
using ::testing::ElementsAre;
using ::testing::HasSubstr;
using ::testing::IsEmpty;

std::string Times(int times, const std::string& line) {
  std::string lines;
  for (int i = 0; i < times; ++i) lines += line + "\n";
  return lines;
}

Job LinesJob() {
  Job job;
  job.corpus.layout = Layout::kLines;
  job.passes[0].accept = {{Quantity::kOccurrences, 3}};
  job.words.function_word_list = {"of", "the", "and"};
  return job;
}

// Lines of few different words, with breaks, hyphens, numbers and function words among them.
std::string RandomLines(uint32_t seed, int lines) {
  const std::vector<std::string> words = {"tide", "Gauge", "light", "bank", "of",
                                          "the",  "and",   "buoy",  "40",   "7"};
  const std::vector<std::string> gaps = {" ", " ", " ", "-", ", ", "  "};
  std::mt19937 random(seed);
  std::string text;
  for (int i = 0; i < lines; ++i) {
    const size_t size = random() % 12;
    for (size_t k = 0; k < size; ++k) {
      if (k > 0) text += gaps[random() % gaps.size()];
      text += words[random() % words.size()];
    }
    text += "\n";
  }
  return text;
}

// Forms of a line's words, and whether the gap before each is open.
struct Line {
  std::vector<std::string> forms;
  std::vector<bool> open;
};

std::vector<Line> LinesOf(const std::string& text, const Job& job) {
  std::vector<Line> lines;
  for (const std::string_view line : Split(text, '\n')) {
    if (Strip(line).empty()) continue;
    Line& read = lines.emplace_back();
    size_t end = 0;
    for (const reference::Word& word : reference::FindWords(line, job.words)) {
      read.forms.push_back(word.form);
      read.open.push_back(
          end > 0 && reference::IsOpenGap(line.substr(end, word.begin - end), job.words.hyphens));
      end = word.end;
    }
  }
  return lines;
}

SequenceCount CountByHand(const std::vector<Line>& lines, const std::vector<std::string>& forms) {
  SequenceCount count{forms, 0, 0, 0};
  for (const Line& line : lines) {
    bool here = false;
    for (size_t at = 0; at + forms.size() <= line.forms.size(); ++at) {
      bool same = true, open = true;
      for (size_t k = 0; k < forms.size(); ++k) {
        same = same && line.forms[at + k] == forms[k];
        open = open && (k == 0 || line.open[at + k]);
      }
      if (!same) continue;
      ++(open ? count.occurrences : count.across_breaks);
      here = here || open;
    }
    count.documents += here ? 1 : 0;
  }
  return count;
}

class GradeTest : public ::testing::Test {
 protected:
  std::string Put(const Job& job, const std::string& text) {
    return PutFinishedRun(folder_, "run", job, {{"notes", text}});
  }
  FinishedRun Load(const std::string& run) {
    auto finished = LoadFinishedRun(FileSystem::Posix(), run);
    EXPECT_TRUE(finished.ok()) << finished.status();
    return *std::move(finished);
  }
  std::unique_ptr<SourceRecount> Recount(const FinishedRun& run) {
    auto source =
        SourceRecount::Read(FileSystem::Posix(), run, folder_.Path("scratch"), Observer{});
    EXPECT_TRUE(source.ok()) << source.status();
    return *std::move(source);
  }
  absl::StatusOr<GradeReport> TryGrade(const std::string& list, GradeOptions options = {}) {
    return Grade(FileSystem::Posix(), folder_.Path("run"), folder_.Put("list.txt", list), options,
                 Observer{});
  }
  GradeReport GradeBy(const std::string& list, const GradeOptions& options = {}) {
    auto report = TryGrade(list, options);
    EXPECT_TRUE(report.ok()) << report.status();
    return report.ok() ? *std::move(report) : GradeReport{};
  }

  TempFolder folder_;
};

TEST(KnownPhrases, LinesAreWordsOfTheJob) {
  const TempFolder folder;
  const std::string path = folder.Put(
      "list", "# towns\n\nTide  Gauge\r\n  left-bank light \ntide gauge\nbuoy\n!!\nH. M. S.");
  const auto known = ReadKnownPhrases(FileSystem::Posix(), path, LinesJob());
  ASSERT_TRUE(known.ok()) << known.status();
  EXPECT_THAT(known->entries,
              ElementsAre(ElementsAre("tide", "gauge"), ElementsAre("left", "bank", "light"),
                          ElementsAre("h", "m", "s")));
  EXPECT_EQ(known->short_lines, 2u);
  EXPECT_EQ(known->double_lines, 1u);
}

TEST(KnownPhrases, AListWithoutPhrasesIsAnError) {
  const TempFolder folder;
  FileSystem& files = FileSystem::Posix();
  EXPECT_THAT(
      std::string(
          ReadKnownPhrases(files, folder.Put("a", "buoy\n# x y\n"), LinesJob()).status().message()),
      HasSubstr("no phrase of two words or more"));
  EXPECT_THAT(
      std::string(ReadKnownPhrases(files, folder.Path("none"), LinesJob()).status().message()),
      HasSubstr("there is no such list"));
}

TEST_F(GradeTest, SequencesAreCountedAsByHand) {
  const std::string text = RandomLines(7, 400);
  const Job job = LinesJob();
  const FinishedRun run = Load(Put(job, text));
  const std::vector<Line> lines = LinesOf(text, job);
  std::set<std::vector<std::string>> sequences = {{"tide", "mark"}, {"tide", "tide", "tide"}};
  for (const Line& line : lines) {
    for (size_t size = 2; size <= 4 && size <= line.forms.size(); ++size) {
      sequences.insert({line.forms.begin(), line.forms.begin() + static_cast<ptrdiff_t>(size)});
    }
  }
  std::vector<SequenceCount> counts;
  for (const auto& forms : sequences) counts.push_back({forms, 0, 0, 0});
  Recount(run)->Count(&counts);
  uint64_t crossed = 0;
  for (const SequenceCount& count : counts) {
    const SequenceCount wanted = CountByHand(lines, count.forms);
    EXPECT_EQ(count.occurrences, wanted.occurrences) << Join(count.forms, " ");
    EXPECT_EQ(count.documents, wanted.documents) << Join(count.forms, " ");
    EXPECT_EQ(count.across_breaks, wanted.across_breaks) << Join(count.forms, " ");
    crossed += count.across_breaks;
  }
  EXPECT_GT(crossed, 100u);
}

TEST_F(GradeTest, FrequentPairsAreThoseCountedByHand) {
  const std::string text = RandomLines(8, 300);
  const Job job = LinesJob();
  const FinishedRun run = Load(Put(job, text));
  std::map<std::string, int> by_text;
  for (const Line& line : LinesOf(text, job)) {
    for (size_t i = 1; i < line.forms.size(); ++i) {
      if (line.open[i]) ++by_text[line.forms[i - 1] + " " + line.forms[i]];
    }
  }
  std::vector<std::pair<int, std::string>> order;
  for (const auto& [pair, n] : by_text) order.emplace_back(-n, pair);
  std::sort(order.begin(), order.end());
  for (const size_t most : {1u, 10u, 1000u}) {
    const auto pairs = Recount(run)->FrequentPairs(most);
    ASSERT_TRUE(pairs.ok());
    ASSERT_EQ(pairs->size(), std::min(most, order.size()));
    for (size_t i = 0; i < pairs->size(); ++i) EXPECT_EQ((*pairs)[i], order[i].second);
  }
}

// With a gate on occurrences alone the reference accepts exactly what pass 1 has to choose from.
void ExpectPassOneOfReference(const FinishedRun& run, SourceRecount* source) {
  const RunPass& pass = run.data.passes[run.data.passes[0].head.number == 0 ? 1 : 0];
  const auto slots = source->PassOne(3);
  ASSERT_TRUE(slots.ok()) << slots.status();
  ASSERT_EQ(slots->size(), pass.accepted.size());
  ASSERT_GT(slots->size(), 20u);
  std::map<std::string, const RunSlot*> accepted;
  for (const RunSlot& slot : pass.accepted) accepted[slot.phrase] = &slot;
  std::vector<Slot> types;
  for (const RecountedSlot& slot : *slots) {
    ASSERT_TRUE(accepted.contains(slot.phrase)) << slot.phrase;
    const RunSlot& wanted = *accepted[slot.phrase];
    EXPECT_EQ(slot.table.n, wanted.table.n) << slot.phrase;
    EXPECT_EQ(slot.table.left, wanted.table.left) << slot.phrase;
    EXPECT_EQ(slot.table.right, wanted.table.right) << slot.phrase;
    EXPECT_EQ(slot.table.total, wanted.table.total) << slot.phrase;
    EXPECT_EQ(slot.table.all, wanted.table.all) << slot.phrase;
    EXPECT_EQ(slot.table.documents, wanted.table.documents) << slot.phrase;
    for (const auto& [quantity, value] : wanted.scores) {
      EXPECT_EQ(Score(quantity, slot.table), value) << slot.phrase << QuantityName(quantity);
    }
    types.push_back(slot.slot);
  }
  const auto tables = source->Tables(types);
  ASSERT_TRUE(tables.ok());
  for (size_t i = 0; i < types.size(); ++i) {
    ASSERT_TRUE((*tables)[i].has_value());
    EXPECT_EQ((*tables)[i]->documents, (*slots)[i].table.documents);
    EXPECT_EQ((*tables)[i]->left, (*slots)[i].table.left);
  }
}

TEST_F(GradeTest, PassOneIsThatOfTheReference) {
  Job words = LinesJob(), nowhere = LinesJob(), ruled = LinesJob();
  words.passes[0].margins = Margins::kWords;
  words.passes[0].rank_by = Quantity::kPmi3;
  nowhere.words.numbers = Numbers::kNowhere;
  ruled.phrases.ruling_list = {{true, "tide gauge light", "", "", 1},
                               {false, "bank buoy", "", "", 2}};
  for (const Job& job : {LinesJob(), words, nowhere, ruled}) {
    const FinishedRun run = Load(Put(job, RandomLines(9, 600)));
    ExpectPassOneOfReference(run, Recount(run).get());
  }
}

TEST_F(GradeTest, TheAnswerIsTheSameWithTheStreamOnDisk) {
  FinishedRun run = Load(Put(LinesJob(), RandomLines(10, 600)));
  run.job.limits.memory = uint64_t{4} << 20;  // less than a stream in memory would take
  std::unique_ptr<SourceRecount> source = Recount(run);
  EXPECT_TRUE(folder_.Has("scratch"));
  const auto pairs = source->FrequentPairs(10);
  ASSERT_TRUE(pairs.ok()) << pairs.status();
  EXPECT_EQ(pairs->size(), 10u);
  ExpectPassOneOfReference(run, source.get());
  source.reset();
  EXPECT_FALSE(folder_.Has("scratch"));
}

TEST(RankingQuality, AveragePrecisionByHand) {
  // Hits at places 1, 3 and 6 of a ranking, one relevant phrase missing: (1/1 + 2/3 + 3/6) / 4.
  std::vector<RankedPhrase> ranking;
  for (int place = 1; place <= 6; ++place) {
    ranking.push_back({Concat("p", place), place == 1 || place == 3 || place == 6, 7.0 - place, 1});
  }
  EXPECT_DOUBLE_EQ(AveragePrecision(ranking, 4), (1.0 + 2.0 / 3 + 3.0 / 6) / 4);
  EXPECT_EQ(AveragePrecision({}, 4), 0);
  EXPECT_EQ(AveragePrecision(ranking, 0), 0);
}

TEST(RankingQuality, SortPutsScoresFirstAndBreaksTies) {
  std::vector<RankedPhrase> ranking = {{"none", true, {}, 900},
                                       {"low", true, -3, 5},
                                       {"tie b", false, 2, 5},
                                       {"tie a", false, 2, 5},
                                       {"tie more", true, 2, 6}};
  SortByScore(&ranking);
  std::vector<std::string> order;
  for (const RankedPhrase& ranked : ranking) order.push_back(ranked.phrase);
  EXPECT_THAT(order, ElementsAre("tie more", "tie a", "tie b", "low", "none"));
}

TEST(RankingQuality, CutOffsAreThoseThatTheRankingReaches) {
  std::vector<RankedPhrase> ranking(130);
  for (size_t i = 0; i < ranking.size(); i += 2) ranking[i].hit = true;
  const std::vector<GradeCutoff> cutoffs = CutOff(ranking);
  ASSERT_EQ(cutoffs.size(), 2u);
  EXPECT_EQ(cutoffs[1].best, 100u);
  EXPECT_EQ(cutoffs[1].hits, 50u);
}

TEST(RankingQuality, BestGateIsTheBestOfAllGates) {
  std::mt19937 random(11);
  for (int round = 0; round < 500; ++round) {
    std::vector<RankedPhrase> ranking;
    const size_t size = 1 + random() % 30;
    uint64_t relevant = random() % 5;
    for (size_t i = 0; i < size; ++i) {
      ranking.push_back({Concat(i), random() % 3 == 0, static_cast<double>(random() % 6), 1});
      relevant += ranking.back().hit;
    }
    SortByScore(&ranking);
    const GradeGate gate = BestGate(Quantity::kT, ranking, relevant);
    double best = -1, least = 0;
    uint64_t best_chosen = 0, best_hits = 0;
    for (int tried = 5; tried >= 0; --tried) {
      uint64_t chosen = 0, hits = 0;
      for (const RankedPhrase& ranked : ranking) {
        chosen += *ranked.score >= tried;
        hits += ranked.hit && *ranked.score >= tried;
      }
      if (chosen == best_chosen) continue;
      const double precision = static_cast<double>(hits) / static_cast<double>(chosen);
      const double recall =
          relevant == 0 ? 0 : static_cast<double>(hits) / static_cast<double>(relevant);
      const double f1 = hits == 0 ? 0 : 2 * precision * recall / (precision + recall);
      EXPECT_NEAR(F1(hits, chosen, relevant), f1, 1e-12);
      if (f1 > best + 1e-12) {
        best = f1;
        least = tried;
        best_chosen = chosen;
        best_hits = hits;
      }
    }
    EXPECT_EQ(gate.least, least);
    EXPECT_EQ(gate.chosen, best_chosen);
    EXPECT_EQ(gate.hits, best_hits);
  }
}

// What is counted, worked out from the run folder's own files and by hand.
TEST_F(GradeTest, TheReportAddsUp) {
  const std::string text = RandomLines(12, 2000);
  Job job = LinesJob();
  job.passes.resize(2);
  job.passes[0].accept = {{Quantity::kOccurrences, 20}, {Quantity::kNpmi, 0.02}};
  job.passes[1].accept = {{Quantity::kOccurrences, 6}};
  job.passes[1].repeat = 2;
  const std::string folder = Put(job, text);
  const FinishedRun run = Load(folder);
  const std::vector<Line> lines = LinesOf(text, job);
  const std::vector<std::string> list = {"tide gauge",
                                         "bank of the light",
                                         "light light",
                                         "tide",
                                         "gauge the bank",
                                         "40 buoy",
                                         "buoy 40",
                                         "buoy mark",
                                         "tide gauge tide gauge",
                                         "bank light",
                                         "the and"};
  std::set<std::string> known, inventory, in_reach, stands;
  uint64_t in_source = 0;
  for (const std::string& entry : list) {
    std::vector<std::string> forms;
    for (const std::string_view form : Split(entry, ' ')) forms.emplace_back(form);
    if (forms.size() < 2) continue;
    known.insert(entry);
    const SequenceCount count = CountByHand(lines, forms);
    in_source += count.occurrences > 0;
    if (count.occurrences >= 6) in_reach.insert(entry);
    if (count.occurrences + count.across_breaks > 0) stands.insert(entry);
  }
  for (const RunPhrase& phrase : run.data.phrases) inventory.insert(phrase.phrase);
  uint64_t found = 0, found_in_reach = 0;
  for (const std::string& phrase : known) {
    found += inventory.contains(phrase);
    found_in_reach += inventory.contains(phrase) && in_reach.contains(phrase);
  }
  GradeOptions options;
  options.measures = {Quantity::kPmi, Quantity::kG2};
  const GradeReport report = GradeBy(Join(list, "\n"), options);
  EXPECT_EQ(report.entries, known.size());
  EXPECT_EQ(report.short_lines, 1u);
  EXPECT_EQ(report.least_occurrences, 6u);
  EXPECT_EQ(report.in_source, in_source);
  EXPECT_EQ(report.in_reach, in_reach.size());
  EXPECT_EQ(report.found, found);
  EXPECT_GT(report.found, 1u);
  EXPECT_EQ(report.phrases, inventory.size());
  EXPECT_DOUBLE_EQ(report.Recall(),
                   static_cast<double>(found_in_reach) / static_cast<double>(in_reach.size()));
  EXPECT_DOUBLE_EQ(report.Precision(),
                   static_cast<double>(found) / static_cast<double>(inventory.size()));

  // The best 50 by the score that the audit printed, ties by n and text.
  std::vector<RankedPhrase> by_pmi;
  for (const RunPhrase& phrase : run.data.phrases) {
    for (const RunPass& pass : run.data.passes) {
      const auto slot = std::find_if(
          pass.accepted.begin(), pass.accepted.end(),
          [&](const RunSlot& one) { return one.phrase == phrase.phrase && one.joined > 0; });
      if (slot == pass.accepted.end()) continue;
      by_pmi.push_back(
          {phrase.phrase, known.contains(phrase.phrase), slot->scores[0].second, slot->table.n});
      break;
    }
  }
  ASSERT_EQ(by_pmi.size(), inventory.size());
  SortByScore(&by_pmi);
  ASSERT_FALSE(report.by_score.empty());
  uint64_t hits = 0;
  for (size_t i = 0; i < 50; ++i) hits += by_pmi[i].hit;
  EXPECT_EQ(report.by_score[0].hits, hits);
  for (const GradeRanking& ranking : report.rankings) {
    if (ranking.by != Quantity::kPmi) continue;
    EXPECT_DOUBLE_EQ(ranking.average_precision, AveragePrecision(by_pmi, in_reach.size()));
  }
  EXPECT_EQ(report.rankings.size(), static_cast<size_t>(kQuantities));
  ASSERT_EQ(report.pools.size(), 2u);
  EXPECT_EQ(report.pools[0].gates.size(), 2u);
  std::set<std::string> missed;
  for (const GradeMiss& miss : report.misses) missed.insert(miss.phrase);
  EXPECT_EQ(report.missed, missed.size());
  for (const std::string& phrase : known) {
    EXPECT_EQ(missed.contains(phrase), stands.contains(phrase) && !inventory.contains(phrase))
        << phrase;
  }
}

std::map<std::string, std::string> Reasons(const GradeReport& report) {
  std::map<std::string, std::string> reasons;
  for (const GradeMiss& miss : report.misses) {
    reasons[miss.phrase] = Concat(miss.reason, ": ", miss.why);
  }
  return reasons;
}

TEST_F(GradeTest, EveryKindOfMissIsExplained) {
  Job job = LinesJob();
  job.words.bridge = 1;
  job.phrases.longest = 3;
  job.phrases.ruling_list = {{false, "deep keel", "", "", 1}, {true, "slip way gate", "", "", 2}};
  job.passes[0].accept = {{Quantity::kOccurrences, 3}, {Quantity::kDocuments, 3}};
  job.passes[0].rank_by = Quantity::kT;  // so that the more frequent of two wins
  Put(job, Times(4, "deep keel") + Times(2, "chain locker") + "fog horn fog horn fog horn\n" +
               Times(5, "left bank light") + Times(4, "left bank") + Times(3, "the mole") +
               Times(3, "head of the pier") + Times(3, "40 fathoms") + Times(3, "anchor, buoy") +
               "anchor, buoy. anchor buoy\n" + Times(2, "red sector beam") +
               Times(3, "slip way gate") + Times(3, "one two three four five") +
               Times(4, "dry dock") + Times(4, "dock gate") + "dry dock gate\n");
  const auto reasons = Reasons(GradeBy(
      "deep keel\nchain locker\nfog horn\nbank light\nthe mole\nhead of the pier\n40 fathoms\n"
      "buoy anchor\nanchor buoy\nred sector beam\nslip way\ntwo three four five\nwet dock\n"));
  EXPECT_EQ(reasons.at("deep keel"), "never: ruled never");
  EXPECT_EQ(reasons.at("chain locker"),
            "gate: occurrences 2 < 3, documents 2 < 3 in pass 1 (recounted)");
  EXPECT_EQ(reasons.at("fog horn"), "gate: documents 1 < 3 in pass 1");
  EXPECT_THAT(reasons.at("bank light"), HasSubstr("yielded: accepted in pass 1, but all its 5"));
  EXPECT_EQ(reasons.at("the mole"),
            "function_word: 'the' is a function word, and no phrase begins or ends with one");
  EXPECT_EQ(reasons.at("two three four five"),
            "longest: its 4 words are more than phrases.longest: 3");
  EXPECT_EQ(reasons.at("40 fathoms"),
            "number: it begins with the number '40', and words.numbers is not_first");
  EXPECT_EQ(reasons.at("buoy anchor"), "break: crosses a break 1 of 1 times");
  EXPECT_EQ(reasons.at("red sector beam"),
            "part_missing: never proposed: no pass made 'sector beam', nor 'red sector'");
  EXPECT_EQ(reasons.at("slip way"), "rulings: the rulings of pass 0 took its words in");
  EXPECT_FALSE(reasons.contains("wet dock"));

  job.phrases.longest = 6;
  job.phrases.ruling_list.clear();
  job.words.numbers = Numbers::kNowhere;
  job.passes[0].take = 5;
  job.passes.push_back(PassOptions{});
  job.passes[1].accept = {{Quantity::kOccurrences, 4}, {Quantity::kDocuments, 4}};
  Put(job, Times(9, "dry dock") + Times(8, "left bank") + Times(3, "head of the pier") +
               Times(3, "sea 40 marks") + Times(3, "dry dock gate") + Times(3, "aa bb") +
               Times(3, "cc dd") + Times(3, "ee ff"));
  const auto others =
      Reasons(GradeBy("head of the pier\nsea 40\ndry dock gate\naa bb\ncc dd\nee ff\n"));
  EXPECT_EQ(others.at("head of the pier"),
            "bridge: it has more function words in a row than words.bridge: 1");
  EXPECT_EQ(others.at("sea 40"), "number: '40' is a number, and words.numbers is nowhere");
  EXPECT_THAT(others.at("dry dock gate"),
              HasSubstr("not_logged: its parts 'dry dock' and 'gate' were made"));
}

TEST_F(GradeTest, WhatTakeLeftIsSaid) {
  Job job = LinesJob();
  job.passes[0].take = 1;
  Put(job, Times(9, "dry dock") + Times(3, "aa bb"));
  EXPECT_EQ(Reasons(GradeBy("aa bb\ndry dock")).size(), 1u);
  Put(job, Times(3, "dry dock") + Times(9, "aa bb"));
  EXPECT_EQ(Reasons(GradeBy("aa bb\ndry dock")).begin()->second,
            "take: it meets the gates of pass 1, which took its best alone (take)");
}

TEST_F(GradeTest, ASourceThatIsNoLongerThereOrTheSameIsAnError) {
  Job job = LinesJob();
  job.deliver.corpus = CorpusForm::kWords;  // nothing to restore the source from
  Put(job, Times(3, "dry dock"));
  folder_.Put("run.source/notes", Times(3, "dry dork"));
  const auto changed = TryGrade("dry dock");
  EXPECT_EQ(changed.status().code(), absl::StatusCode::kFailedPrecondition);
  EXPECT_THAT(std::string(changed.status().message()),
              AllOf(HasSubstr("run.source/notes"), HasSubstr("put the old input back")));
  std::filesystem::remove(folder_.Path("run.source/notes"));
  const auto gone = TryGrade("dry dock");
  EXPECT_EQ(gone.status().code(), absl::StatusCode::kFailedPrecondition);
  EXPECT_THAT(std::string(gone.status().message()), HasSubstr("run.source/notes"));
}

TEST_F(GradeTest, TextFitsTheTerminalAndJsonSaysTheSame) {
  const std::string text = RandomLines(13, 500);
  Put(LinesJob(), text);
  GradeOptions options;
  for (int i = static_cast<int>(Quantity::kPmi); i < kQuantities; ++i) {
    options.measures.push_back(static_cast<Quantity>(i));
  }
  GradeReport report = GradeBy("tide gauge\nbank light\nthe tide\n", options);
  report.run = "runs/harbour";
  report.list = "known.txt";
  const std::string table = GradeText(report, 5);
  for (const std::string_view line : Split(table, '\n')) {
    EXPECT_LE(DisplayWidth(line), 80u) << line;
  }
  const std::string json = GradeJson(report);
  simdjson::dom::parser parser;
  simdjson::dom::element read;
  ASSERT_EQ(parser.parse(json).get(read), simdjson::SUCCESS) << json;
  EXPECT_EQ(uint64_t(read.at_pointer("/found")), report.found);
  EXPECT_NEAR(double(read.at_pointer("/recall")), report.Recall(), 1e-9);
  EXPECT_EQ(std::string_view(read.at_pointer("/best_gates/1/phrases_of")), "pass 1");
  EXPECT_EQ(std::string_view(read.at_pointer("/misses/0/reason")), "function_word");
  EXPECT_EQ(simdjson::dom::array(read.at_pointer("/best_gates/0/gates")).size(), 12u);
}

}  // namespace
}  // namespace phraseweld
