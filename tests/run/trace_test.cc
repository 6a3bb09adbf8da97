#include "run/trace.h"

#include <gmock/gmock.h>
#include <gtest/gtest.h>
#include <simdjson.h>

#include <filesystem>
#include <map>
#include <string>
#include <vector>

#include "agreement/random_job.h"
#include "base/strings.h"
#include "run/finished_run.h"
#include "run/lanes.h"
#include "run/passes.h"
#include "run/replay.h"
#include "run/run.h"
#include "run/trace_reasons.h"
#include "run/trace_splits.h"
#include "support/finished_run.h"
#include "support/temp_folder.h"

namespace phraseweld {
namespace {

using ::testing::AllOf;
using ::testing::ElementsAre;
using ::testing::HasSubstr;
using ::testing::IsEmpty;
using ::testing::Not;
using ::testing::Pair;
using ::testing::StartsWith;

std::string Times(int times, const std::string& line) {
  std::string lines;
  for (int i = 0; i < times; ++i) lines += line + "\n";
  return lines;
}

Job LinesJob() {
  Job job;
  job.corpus.layout = Layout::kLines;
  job.passes.resize(2);
  job.passes[0].name = "pairs";
  job.passes[0].accept = {{Quantity::kOccurrences, 3}};
  job.passes[1] = job.passes[0];
  job.passes[1].name = "longer";
  job.words.function_word_list = {"of", "the", "and"};
  return job;
}

// One without lists that only the reference run's helper writes.
Job FileJob() {
  Job job = LinesJob();
  job.job = "run";
  job.words.function_word_list.clear();
  return job;
}

// A job whose rulings PutFinishedRun() can write.
Job NextJob(RandomJobs* random) {
  Job job = random->NextJob();
  for (Ruling& ruling : job.phrases.ruling_list) {
    std::erase_if(ruling.phrase, [](char c) { return c == '"' || c == '\\'; });
    std::erase_if(ruling.reason, [](char c) { return c == '"' || c == '\\'; });
  }
  return job;
}

class TraceOf {
 public:
  TraceOf(const Job& job, const std::string& text)
      : run_(PutFinishedRun(folder_, "run", job, {{"notes.txt", text}})) {}

  Trace Of(const std::string& phrase) const {
    auto trace = TracePhrase(FileSystem::Posix(), run_, phrase, Observer{});
    EXPECT_TRUE(trace.ok()) << trace.status();
    return trace.ok() ? *std::move(trace) : Trace{};
  }
  const TempFolder& folder() const { return folder_; }
  const std::string& run() const { return run_; }

 private:
  TempFolder folder_;
  std::string run_;
};

TEST(Trace, APhraseThatWasMadeIsATreeDownToItsWords) {
  const TraceOf traced(LinesJob(), Times(6, "tide gauge board") + Times(9, "old board"));
  const Trace trace = traced.Of("Tide-gauge BOARD");
  EXPECT_TRUE(trace.made);
  EXPECT_EQ(trace.phrase, "tide gauge board");
  EXPECT_EQ(trace.words, 3);
  EXPECT_THAT(trace.verdict, StartsWith("made in pass 2, 6 times in 6 documents"));
  ASSERT_EQ(trace.tree.steps.size(), 1u);
  const TraceNode::Step& step = trace.tree.steps[0];
  EXPECT_EQ(step.slot.pass, 2);
  EXPECT_EQ(step.slot.pass_name, "longer");
  EXPECT_EQ(step.slot.table.n, 6u);
  EXPECT_EQ(step.slot.joined, 6u);
  ASSERT_EQ(step.slot.gates.size(), 1u);
  EXPECT_TRUE(step.slot.gates[0].met());
  ASSERT_EQ(step.sides.size(), 2u);
  EXPECT_EQ(step.sides[0].text, "tide gauge");
  ASSERT_EQ(step.sides[0].steps.size(), 1u);
  EXPECT_EQ(step.sides[0].steps[0].slot.pass, 1);
  EXPECT_EQ(step.sides[0].steps[0].sides[0].text, "tide");
  EXPECT_FALSE(step.sides[0].steps[0].sides[0].made);
  EXPECT_EQ(step.sides[1].text, "board");
  ASSERT_EQ(trace.found.contexts.size(), 3u);
  EXPECT_EQ(trace.found.contexts[2].document, "3");
  EXPECT_EQ(trace.found.contexts[2].match, "tide gauge board");
  EXPECT_THAT(trace.notes, IsEmpty());
}

TEST(Trace, AScoreBelowAGateIsNamedWithThePass) {
  Job job = LinesJob();
  for (PassOptions& pass : job.passes) pass.accept.push_back({Quantity::kPmi, 5});
  // n 4, left 8, right 8, slots 32: pmi 1.
  const TraceOf traced(job, Times(4, "buoy light") + Times(4, "buoy bell") + Times(4, "red light") +
                                Times(20, "tide gauge"));
  const Trace trace = traced.Of("buoy light");
  EXPECT_FALSE(trace.made);
  ASSERT_EQ(trace.splits.size(), 1u);
  ASSERT_EQ(trace.splits[0].passes.size(), 2u);
  const TraceSlot& slot = trace.splits[0].passes[0];
  EXPECT_EQ(slot.origin, TraceOrigin::kNearMiss);
  EXPECT_EQ(slot.table.n, 4u);
  EXPECT_EQ(trace.verdict, "pmi 1.00 < 5.0 in pass 1");
  EXPECT_EQ(trace.remedy, "lower pass 1 to pmi: 1.0, or rule it always");
}

TEST(Trace, WhatTheLogHasNoLineOfIsRecounted) {
  Job job = LinesJob();
  for (PassOptions& pass : job.passes) {
    pass.accept = {{Quantity::kOccurrences, 5}, {Quantity::kDocuments, 4}, {Quantity::kPmi, 2.5}};
  }
  const TraceOf traced(job, Times(3, "buoy light") + Times(5, "buoy bell") + Times(5, "red light") +
                                Times(7, "tide gauge"));
  const Trace trace = traced.Of("buoy light");
  ASSERT_EQ(trace.splits.size(), 1u);
  const TraceSlot& slot = trace.splits[0].passes[0];
  EXPECT_EQ(slot.origin, TraceOrigin::kRecounted);
  EXPECT_EQ(slot.table.n, 3u);
  EXPECT_EQ(slot.table.left, 8u);
  EXPECT_EQ(slot.table.right, 8u);
  EXPECT_EQ(slot.table.total, 20u);
  EXPECT_EQ(slot.table.documents, 3u);
  // log2(3 * 20 / (8 * 8)) = -0.0931...
  EXPECT_EQ(trace.verdict, "occurrences 3 < 5 in pass 1; also documents 3 < 4, pmi -0.09 < 2.5");
  EXPECT_EQ(trace.remedy,
            "lower pass 1 to occurrences: 3, documents: 3, pmi: -0.1, or rule it always");
}

TEST(Trace, WhatYieldedEverywhereNamesWhatItYieldedTo) {
  Job job = LinesJob();
  job.passes.resize(1);
  // "gauge board" ranks behind "tide gauge", which takes its left word each time but one, and
  // "board nail" takes its right word there.
  const TraceOf traced(job, Times(5, "tide gauge board") + "gauge board nail\n" +
                                Times(9, "board nail") + Times(6, "gauge red") +
                                Times(6, "old board"));
  const Trace trace = traced.Of("gauge board");
  ASSERT_EQ(trace.splits.size(), 1u);
  const TraceSlot& slot = trace.splits[0].passes[0];
  EXPECT_EQ(slot.origin, TraceOrigin::kAccepted);
  EXPECT_EQ(slot.joined, 0u);
  EXPECT_EQ(slot.yielded, 6u);
  EXPECT_THAT(slot.yielded_to, ElementsAre(Pair("tide gauge", 5), Pair("board nail", 1)));
  EXPECT_EQ(trace.verdict, "yielded 6 of 6 times to 'tide gauge' (5), 'board nail' (1) in pass 1");
  EXPECT_EQ(trace.remedy, "rule 'tide gauge' never, or rule it always");
  EXPECT_THAT(trace.ends,
              ElementsAre(Pair("tide gauge | board", 5), Pair("gauge | board nail", 1)));
}

TEST(Trace, WhatAMadePhraseYieldedIsToldToo) {
  Job job = LinesJob();
  job.passes.resize(1);
  const TraceOf traced(job, Times(5, "tide gauge board") + Times(4, "gauge board"));
  const Trace trace = traced.Of("gauge board");
  EXPECT_TRUE(trace.made);
  ASSERT_EQ(trace.tree.steps.size(), 1u);
  EXPECT_EQ(YieldWords(trace.tree.steps[0].slot), "yielded 5 of 9 times to 'tide gauge'");
  EXPECT_THAT(TraceText(trace), HasSubstr("joined 4 times, yielded 5 of 9 times to 'tide gauge'"));
}

TEST(Trace, WordsWithABreakBetweenCrossIt) {
  const TraceOf traced(LinesJob(), Times(9, "the tide, gauge") + Times(3, "red buoy"));
  const Trace trace = traced.Of("tide gauge");
  EXPECT_EQ(trace.verdict, "crosses a comma 9 of 9 times");
  EXPECT_EQ(trace.remedy, "");
  EXPECT_EQ(trace.found.occurrences, 0u);
  EXPECT_EQ(trace.found.across_breaks, 9u);
  EXPECT_THAT(TraceText(trace), HasSubstr("the [tide, gauge]"));
}

TEST(Trace, WordsThatMostlyCrossABreakSaySoBesideTheGate) {
  const TraceOf traced(LinesJob(), Times(7, "the tide, gauge") + Times(2, "tide gauge"));
  EXPECT_EQ(traced.Of("tide gauge").verdict,
            "occurrences 2 < 3 in pass 1; crosses a comma 7 of 9 times");
}

TEST(Trace, AHyphenThatBreaksIsCuredByASetting) {
  Job job = LinesJob();
  job.words.hyphens = Hyphens::kSeparate;
  const TraceOf traced(job, Times(9, "the tide-gauge"));
  const Trace trace = traced.Of("tide gauge");
  EXPECT_EQ(trace.verdict, "crosses a hyphen 9 of 9 times");
  EXPECT_EQ(trace.remedy, "set words.hyphens: join");
}

TEST(Trace, APhraseThatIsTooLongNamesTheKey) {
  Job job = LinesJob();
  job.phrases.longest = 2;
  const TraceOf traced(job, Times(6, "tide gauge board") + Times(6, "tide gauge"));
  const Trace trace = traced.Of("tide gauge board");
  EXPECT_THAT(trace.verdict, StartsWith("longer than phrases.longest: 2"));
  EXPECT_EQ(trace.remedy, "set phrases.longest: 3, or rule it always");
}

TEST(Trace, ANeverRulingGivesItsReason) {
  Job job = LinesJob();
  job.phrases.ruling_list = {{false, "Tide Gauge", "that is a brand", "", 1}};
  const TraceOf traced(job, Times(6, "tide gauge"));
  const Trace trace = traced.Of("tide gauge");
  EXPECT_EQ(trace.verdict, "ruled never: that is a brand");
  EXPECT_THAT(trace.remedy,
              AllOf(StartsWith("take the ruling in line 1 of "), HasSubstr("rulings.yaml")));
}

TEST(Trace, AnAlwaysRulingIsADerivationWithItsReason) {
  Job job = LinesJob();
  job.phrases.ruling_list = {{true, "of the sea", "a book's title", "", 1}};
  const TraceOf traced(job, Times(2, "a book, of the sea, here"));
  const Trace trace = traced.Of("of the sea");
  EXPECT_TRUE(trace.made);
  EXPECT_EQ(trace.tree.ruled, 2u);
  EXPECT_THAT(TraceText(trace), HasSubstr("ruled always, joined 2 times: a book's title"));
}

TEST(Trace, ANumberMayNotStandFirst) {
  const TraceOf traced(LinesJob(), Times(9, "40 buoy"));
  EXPECT_EQ(traced.Of("40 buoy").verdict,
            "a number may not stand first: '40' (words.numbers: not_first)");
  EXPECT_EQ(traced.Of("40 buoy").remedy, "set words.numbers: anywhere, or rule it always");
}

TEST(Trace, ANumberMayStandNowhere) {
  Job job = LinesJob();
  job.words.numbers = Numbers::kNowhere;
  const TraceOf traced(job, Times(9, "buoy 40"));
  EXPECT_EQ(traced.Of("buoy 40").verdict,
            "a number may stand nowhere: '40' (words.numbers: nowhere)");
}

TEST(Trace, AFunctionWordAtAnEndIsNamed) {
  const TraceOf traced(LinesJob(), Times(9, "height of tide"));
  EXPECT_EQ(traced.Of("of tide").verdict,
            "a phrase may not begin or end with a function word: 'of'");
  EXPECT_EQ(traced.Of("height of").verdict,
            "a phrase may not begin or end with a function word: 'of'");
}

TEST(Trace, TooManyFunctionWordsInARowNameTheKey) {
  Job job = LinesJob();
  job.words.bridge = 1;
  const TraceOf traced(job, Times(9, "height of the tide"));
  EXPECT_EQ(traced.Of("height of the tide").verdict,
            "more function words in a row than words.bridge: 1");
}

TEST(Trace, APartThatNoPassMadeIsNamed) {
  Job job = LinesJob();
  for (PassOptions& pass : job.passes) pass.accept = {{Quantity::kOccurrences, 5}};
  const TraceOf traced(job, Times(4, "tide gauge board") + Times(9, "red buoy"));
  const Trace trace = traced.Of("tide gauge board");
  EXPECT_EQ(trace.verdict, "no pass made 'gauge board'; no pass made 'tide gauge'");
  ASSERT_EQ(trace.parts.size(), 5u);
  EXPECT_EQ(trace.parts[0].text, "tide");
  EXPECT_EQ(trace.parts[0].times, 4u);
  EXPECT_EQ(trace.parts[3].text, "tide gauge");
  EXPECT_FALSE(trace.parts[3].pass.has_value());
}

TEST(Trace, APhraseThatOnlyStandsInsideALongerOneSaysSo) {
  const TraceOf traced(LinesJob(), Times(6, "tide gauge board nail") + Times(20, "tide gauge") +
                                       Times(20, "board nail") + Times(20, "gauge red") +
                                       Times(20, "old board"));
  const Trace trace = traced.Of("gauge board");
  EXPECT_FALSE(trace.made);
  EXPECT_THAT(trace.ends, ElementsAre(Pair("tide gauge board nail", 6)));
  EXPECT_THAT(TraceText(trace), HasSubstr("ended up as 'tide gauge board nail' 6 times"));
  EXPECT_EQ(traced.Of("tide gauge board").verdict,
            "stands inside 'tide gauge board nail' 6 of 6 times");
}

TEST(Trace, WhatIsBeyondTheBestIsTakenByTake) {
  Job job = LinesJob();
  job.passes.resize(1);
  job.passes[0].take = 1;
  const TraceOf traced(job, Times(3, "tide gauge") + Times(9, "red buoy"));
  const Trace trace = traced.Of("red buoy");
  EXPECT_EQ(trace.verdict, "met the gates of pass 1, but is not among its best 1 (take)");
  EXPECT_EQ(trace.remedy, "let the pass take more, or rule it always");
}

TEST(Trace, AWordThatTheCorpusLacksIsNamed) {
  const TraceOf traced(LinesJob(), Times(3, "tide gauge"));
  EXPECT_EQ(traced.Of("tide zebra").verdict, "the corpus has no word 'zebra'");
  EXPECT_EQ(traced.Of("gauge tide").verdict, "its words never follow each other in the corpus");
}

TEST(Trace, OneWordIsNoPhrase) {
  const TraceOf traced(LinesJob(), Times(3, "tide gauge"));
  const auto trace = TracePhrase(FileSystem::Posix(), traced.run(), "Tide!", Observer{});
  EXPECT_TRUE(absl::IsInvalidArgument(trace.status()));
  EXPECT_THAT(std::string(trace.status().message()),
              HasSubstr("'Tide!' is one word by the rules of this run"));
}

TEST(Trace, ARunThatIsNotThereIsNamed) {
  const auto trace = TracePhrase(FileSystem::Posix(), "/no/such/run", "tide gauge", Observer{});
  EXPECT_TRUE(absl::IsNotFound(trace.status())) << trace.status();
}

TEST(Trace, GateWordsShowWhichOfTwoNearNumbersIsLess) {
  EXPECT_EQ(GateWords({Quantity::kPmi, 4.7123, 5}), "pmi 4.71 < 5.0");
  EXPECT_EQ(GateWords({Quantity::kPmi, 4.99999, 5}), "pmi 4.99999 < 5.0");
  EXPECT_EQ(GateWords({Quantity::kPmi, 5, 5}), "pmi 5.00 >= 5.0");
  EXPECT_EQ(GateWords({Quantity::kNpmi, 0.25, 0.2501}), "npmi 0.25 < 0.2501");
  EXPECT_EQ(GateWords({Quantity::kDocuments, 2, 3}), "documents 2 < 3");
}

// A source that is gone comes back out of the run's own corpus.
TEST(Trace, ASourceThatIsGoneIsRestored) {
  TempFolder folder;
  Job job = FileJob();
  job.corpus.files = {folder.Put("in.txt", Times(5, "the tide gauge, a buoy"))};
  job.run_folder = folder.Path("run");
  const auto summary = RunJob(job, RunControls{}, FileSystem::Posix(), Observer{});
  ASSERT_TRUE(summary.ok()) << summary.status();
  std::filesystem::remove(folder.Path("in.txt"));
  const auto trace = TracePhrase(FileSystem::Posix(), folder.Path("run"), "gauge buoy", Observer{});
  ASSERT_TRUE(trace.ok()) << trace.status();
  EXPECT_THAT(trace->notes, ElementsAre(AllOf(HasSubstr("in.txt is not there"),
                                              HasSubstr("restored from the run's own corpus"))));
  EXPECT_TRUE(trace->counted);
  EXPECT_EQ(trace->found.occurrences, 0u);
  const auto tide = TracePhrase(FileSystem::Posix(), folder.Path("run"), "tide gauge", Observer{});
  ASSERT_TRUE(tide.ok());
  ASSERT_FALSE(tide->found.contexts.empty());
  EXPECT_EQ(tide->found.contexts[0].match, "tide gauge");
  // What it was restored to is gone.
  for (const auto& entry : std::filesystem::directory_iterator(folder.path())) {
    EXPECT_EQ(entry.path().filename(), "run");
  }
}

TEST(Trace, WithoutAnySourceTheAuditStillSpeaks) {
  TempFolder folder;
  Job job = FileJob();
  job.passes[0].accept = {{Quantity::kOccurrences, 3}, {Quantity::kDocuments, 9}};
  job.deliver.corpus = CorpusForm::kNone;
  job.corpus.files = {folder.Put("in.txt", Times(5, "tide gauge, red"))};
  job.run_folder = folder.Path("run");
  const auto summary = RunJob(job, RunControls{}, FileSystem::Posix(), Observer{});
  ASSERT_TRUE(summary.ok()) << summary.status();
  std::filesystem::remove(folder.Path("in.txt"));
  const auto trace = TracePhrase(FileSystem::Posix(), folder.Path("run"), "tide gauge", Observer{});
  ASSERT_TRUE(trace.ok()) << trace.status();
  ASSERT_EQ(trace->notes.size(), 1u);
  EXPECT_THAT(trace->notes[0], HasSubstr("the source cannot be read"));
  EXPECT_THAT(trace->found.contexts, IsEmpty());
}

TEST(Trace, AChangedSourceIsNoted) {
  const TraceOf traced(LinesJob(), Times(3, "buoy light, tide gauge"));
  std::string source = traced.folder().Get("run.source/notes.txt");
  source.replace(0, 4, "Bell");
  traced.folder().Put("run.source/notes.txt", source);
  const Trace trace = traced.Of("light bell");
  ASSERT_EQ(trace.notes.size(), 1u);
  EXPECT_THAT(trace.notes[0], HasSubstr("has changed since the run"));
}

TEST(Trace, TheJsonHasWhatTheTextSays) {
  Job job = LinesJob();
  job.passes.resize(1);
  const TraceOf traced(job, Times(5, "tide gauge \"board\"") + Times(4, "gauge board nail") +
                                Times(2, "tide, gauge"));
  for (const std::string phrase : {"tide gauge", "gauge board", "board nail tide"}) {
    const Trace trace = traced.Of(phrase);
    simdjson::dom::parser parser;
    simdjson::dom::element json;
    const std::string text = TraceJson(trace);
    ASSERT_EQ(text.back(), '\n');
    ASSERT_EQ(parser.parse(text).get(json), simdjson::SUCCESS) << text;
    EXPECT_EQ(std::string_view(json["phrase"]), phrase);
    EXPECT_EQ(bool(json["made"]), trace.made);
    EXPECT_EQ(std::string_view(json["verdict"]), trace.verdict);
    EXPECT_EQ(json["contexts"].get_array().size(), trace.found.contexts.size());
    if (trace.made) {
      EXPECT_EQ(json["derivation"]["made_of"].get_array().size(), trace.tree.steps.size());
    } else {
      EXPECT_EQ(json["splits"].get_array().size(), trace.splits.size());
      EXPECT_EQ(uint64_t(json["source_occurrences"]), trace.found.occurrences);
    }
  }
}

TEST(Trace, TextThatWouldDriveATerminalIsShownHarmless) {
  const TraceOf traced(LinesJob(), Times(3, "\x1B[31m tide gauge \x07"));
  const std::string text = TraceText(traced.Of("tide gauge"));
  EXPECT_EQ(text.find('\x1B'), std::string::npos);
  EXPECT_EQ(text.find('\x07'), std::string::npos);
  EXPECT_THAT(text, HasSubstr("[31m [tide gauge]"));
}

// Of every line of the audits of random runs, a replay of the source finds the same counts.
TEST(Replay, CountsWhatTheAuditSays) {
  uint64_t lines = 0, yielded = 0, near = 0;
  for (uint64_t seed = 1; seed <= 200; ++seed) {
    RandomJobs random(seed);
    const Job job = NextJob(&random);
    const std::vector<RefInput> inputs = random.NextInputs(job);
    TempFolder folder;
    std::string folder_of_run;
    try {
      folder_of_run = PutFinishedRun(folder, "run", job, inputs);
    } catch (const std::runtime_error&) {
      continue;  // a line stops the job
    }
    const auto run = LoadFinishedRun(FileSystem::Posix(), folder_of_run);
    ASSERT_TRUE(run.ok()) << run.status();
    std::vector<WatchedSlot> watched;
    std::vector<std::pair<size_t, const RunSlot*>> expected;  // pass, line
    for (size_t i = 0; i < run->data.passes.size(); ++i) {
      for (const auto* slots : {&run->data.passes[i].accepted, &run->data.passes[i].near_misses}) {
        for (const RunSlot& slot : *slots) {
          watched.push_back({slot.left, slot.bridge, slot.right});
          expected.emplace_back(i, &slot);
        }
      }
    }
    std::vector<InputFile> files;
    for (const RunInput& input : run->data.manifest.inputs)
      files.push_back({input.path, input.name});
    ThreadLanes lanes(2, nullptr);
    FindOptions options;
    options.keep_all = true;
    auto found = FindPhrases(run->job, files, {}, options, lanes, Observer{}, 50);
    ASSERT_TRUE(found.ok()) << found.status();
    const auto replay = ReplayRun(*run, found->runs.get(), watched, {"a"});
    ASSERT_TRUE(replay.ok()) << replay.status();
    const size_t rulings = run->data.passes.size() - replay->passes.size();
    for (size_t i = 0; i < expected.size(); ++i) {
      const auto& [pass, line] = expected[i];
      const ReplayedSlot& slot = replay->passes[pass - rulings].slots[i];
      const std::string what = Concat("seed ", seed, " pass ", pass, " ", line->phrase);
      ASSERT_EQ(slot.table.n, line->table.n) << what;
      ASSERT_EQ(slot.table.left, line->table.left) << what;
      ASSERT_EQ(slot.table.right, line->table.right) << what;
      ASSERT_EQ(slot.table.documents, line->table.documents) << what;
      const bool word_margins = run->options[pass].margins == Margins::kWords;
      if (!word_margins || !line->bridge.empty()) {
        ASSERT_EQ(slot.table.total, line->table.total) << what;
      }
      ++lines;
      uint64_t named = 0;
      for (const auto& [to, times] : slot.yielded_to) named += times;
      ASSERT_EQ(named, slot.yielded) << what;
      if (line->failed) {
        ++near;
        continue;
      }
      ASSERT_EQ(slot.joined, line->joined) << what;
      ASSERT_EQ(slot.yielded, line->yielded) << what;
      yielded += slot.yielded;
    }
  }
  EXPECT_GT(lines, 3000u);
  EXPECT_GT(near, 300u);
  EXPECT_GT(yielded, 300u);
}

// What a trace recounts of a near miss, from the runs that it keeps, is what the log says.
TEST(Replay, ARecountOfALoggedLineIsThatLine) {
  uint64_t lines = 0;
  for (uint64_t seed = 1; seed <= 100; ++seed) {
    RandomJobs random(seed);
    const Job job = NextJob(&random);
    const std::vector<RefInput> inputs = random.NextInputs(job);
    TempFolder folder;
    std::string folder_of_run;
    try {
      folder_of_run = PutFinishedRun(folder, "run", job, inputs);
    } catch (const std::runtime_error&) {
      continue;
    }
    const auto loaded = LoadFinishedRun(FileSystem::Posix(), folder_of_run);
    ASSERT_TRUE(loaded.ok()) << loaded.status();
    // A near miss of each pass, and the run as if its log had no near misses.
    for (size_t pass = 0; pass < loaded->data.passes.size(); ++pass) {
      if (loaded->data.passes[pass].near_misses.empty()) continue;
      const RunSlot line = loaded->data.passes[pass].near_misses.back();
      const std::vector<std::string> forms = FormsOf(loaded->job, line.phrase);
      if (Join(forms, " ") != line.phrase) continue;
      FinishedRun run = *loaded;
      for (RunPass& stripped : run.data.passes) stripped.near_misses.clear();
      const PartTrails trails(run, forms);
      if (trails.Find(line.phrase).made != nullptr) continue;
      SplitTracer splits(run, forms, trails);
      std::vector<InputFile> files;
      for (const RunInput& input : run.data.manifest.inputs) {
        files.push_back({input.path, input.name});
      }
      ThreadLanes lanes(2, nullptr);
      FindOptions options;
      options.keep = splits.Sides();
      options.keep_all = splits.WantsAll();
      auto found = FindPhrases(run.job, files, {forms}, options, lanes, Observer{}, 50);
      ASSERT_TRUE(found.ok()) << found.status();
      if (found->runs == nullptr) continue;
      splits.UseNumbers(found->runs->vocabulary);
      const auto replay = ReplayRun(run, found->runs.get(), splits.Watched(), forms);
      ASSERT_TRUE(replay.ok()) << replay.status();
      for (const TraceSplit& split : splits.Splits(&*replay)) {
        if (split.left != line.left || split.bridge != line.bridge || split.right != line.right) {
          continue;
        }
        for (const TraceSlot& slot : split.passes) {
          if (slot.pass != run.data.passes[pass].head.number) continue;
          const std::string what = Concat("seed ", seed, " ", line.phrase, " pass ", slot.pass);
          ASSERT_EQ(slot.origin, TraceOrigin::kRecounted) << what;
          ASSERT_EQ(slot.table.n, line.table.n) << what;
          ASSERT_EQ(slot.table.left, line.table.left) << what;
          ASSERT_EQ(slot.table.right, line.table.right) << what;
          ASSERT_EQ(slot.table.total, line.table.total) << what;
          ASSERT_EQ(slot.table.documents, line.table.documents) << what;
          ASSERT_EQ(slot.scores, line.scores) << what;
          ASSERT_EQ(slot.expected, line.expected) << what;
          ASSERT_THAT(slot.why, HasSubstr(std::string(QuantityName(*line.failed)))) << what;
          ++lines;
        }
      }
    }
  }
  EXPECT_GT(lines, 50u);
}

}  // namespace
}  // namespace phraseweld
