#include "run/report.h"

#include <gmock/gmock.h>
#include <gtest/gtest.h>
#include <simdjson.h>

#include <filesystem>
#include <string>
#include <vector>

#include "agreement/random_job.h"
#include "base/strings.h"
#include "read/run_folder.h"
#include "run/run.h"
#include "support/finished_run.h"
#include "support/temp_folder.h"

namespace phraseweld {
namespace {

using ::testing::HasSubstr;
using ::testing::IsEmpty;
using ::testing::Not;
using ::testing::Pair;

std::string Times(int times, const std::string& line) {
  std::string lines;
  for (int i = 0; i < times; ++i) lines += line + "\n";
  return lines;
}

Job SmallJob(const TempFolder& folder) {
  Job job;
  job.job = "harbour";
  job.corpus.layout = Layout::kLines;
  job.corpus.files = {
      folder.Put("in/notes.txt", Times(6, "the tide gauge board") + Times(9, "old board, red") +
                                     Times(4, "buoy light") + Times(2, "</script> red buoy"))};
  job.passes.resize(2);
  job.passes[0].name = "pairs";
  job.passes[0].accept = {{Quantity::kOccurrences, 3}, {Quantity::kDocuments, 5}};
  job.passes[1] = job.passes[0];
  job.passes[1].name = "longer";
  job.run_folder = folder.Path("run");
  return job;
}

void MakeRun(const Job& job, const RunControls& controls = {}) {
  const auto summary = RunJob(job, controls, FileSystem::Posix(), Observer{});
  ASSERT_TRUE(summary.ok()) << summary.status();
}

absl::StatusOr<WrittenReport> Write(const std::string& run, const std::string& output,
                                    int threads = 2) {
  ThreadLanes lanes(threads, nullptr);
  return WriteReport(FileSystem::Posix(), run, {}, output, lanes, Observer{});
}

// The JSON that the page holds.
simdjson::dom::element DataOf(const std::string& page, simdjson::dom::parser* parser) {
  constexpr std::string_view kStart = "{\"program\":";
  const size_t begin = page.find(kStart);
  EXPECT_NE(begin, std::string::npos);
  const size_t end = page.find("</script>", begin);
  simdjson::dom::element data;
  EXPECT_EQ(parser->parse(page.substr(begin, end - begin)).get(data), simdjson::SUCCESS);
  return data;
}

TEST(Report, StandsInTheRunFolderAndInTheManifest) {
  TempFolder folder;
  MakeRun(SmallJob(folder));
  const auto manifest = ReadManifest(FileSystem::Posix(), folder.Path("run/manifest.json"));
  ASSERT_TRUE(manifest.ok());
  const auto digest = DigestFile(FileSystem::Posix(), folder.Path("run/report.html"));
  ASSERT_TRUE(digest.ok()) << digest.status();
  bool listed = false;
  for (const RunOutput& output : manifest->outputs) {
    if (output.path != "report.html") continue;
    listed = true;
    EXPECT_EQ(output.bytes, digest->bytes);
    EXPECT_EQ(output.xxh3_128, ToHex(digest->hash));
  }
  EXPECT_TRUE(listed);
}

TEST(Report, IsLeftOutWhereTheJobSaysSo) {
  TempFolder folder;
  Job job = SmallJob(folder);
  job.deliver.report = false;
  MakeRun(job);
  EXPECT_FALSE(folder.Has("run/report.html"));
}

TEST(Report, TheCommandMakesTheBytesOfTheRun) {
  TempFolder folder;
  MakeRun(SmallJob(folder));
  for (const int threads : {1, 3}) {
    const auto report = Write(folder.Path("run"), folder.Path("page.html"), threads);
    ASSERT_TRUE(report.ok()) << report.status();
    EXPECT_THAT(report->notes, IsEmpty());
    EXPECT_EQ(folder.Get("page.html"), folder.Get("run/report.html"));
  }
}

TEST(Report, ThreadsMemoryAndBlocksDoNotShow) {
  TempFolder folder;
  Job job = SmallJob(folder);
  MakeRun(job);
  const std::string page = folder.Get("run/report.html");
  job.limits.threads = 3;
  job.limits.memory = uint64_t{300} << 20;
  RunControls controls;
  controls.fresh = true;
  controls.block_bytes = 7;
  controls.force_disk = true;
  MakeRun(job, controls);
  EXPECT_EQ(folder.Get("run/report.html"), page);
}

TEST(Report, HasTheContextsOfPhrasesAndNearMisses) {
  TempFolder folder;
  MakeRun(SmallJob(folder));
  simdjson::dom::parser parser;
  const simdjson::dom::element data = DataOf(folder.Get("run/report.html"), &parser);
  ASSERT_GT(data["phrases"]["text"].get_array().size(), 0u);
  for (const char* kind : {"phrases", "near_misses"}) {
    size_t row = 0;
    for (const auto contexts : data[kind]["contexts"].get_array()) {
      EXPECT_EQ(uint64_t(contexts), 3u) << kind << " " << row;
      ++row;
    }
  }
  bool near_miss = false;
  for (const auto text : data["near_misses"]["text"].get_array()) {
    near_miss = near_miss || std::string_view(text) == "buoy light";
  }
  EXPECT_TRUE(near_miss);
}

TEST(Report, TextOfTheCorpusCannotEndTheData) {
  TempFolder folder;
  Job job = SmallJob(folder);
  job.corpus.files = {folder.Put("in/hostile.txt", Times(6, "</script><b> tide gauge <!-- x"))};
  MakeRun(job);
  const std::string page = folder.Get("run/report.html");
  EXPECT_THAT(page, HasSubstr("\\u003c/script>\\u003cb> "));
  EXPECT_THAT(page, Not(HasSubstr("<b> tide")));
}

TEST(Report, ASourceThatIsGoneIsRestoredForIt) {
  TempFolder folder;
  MakeRun(SmallJob(folder));
  std::filesystem::remove_all(folder.Path("in"));
  const auto report = Write(folder.Path("run"), folder.Path("page.html"));
  ASSERT_TRUE(report.ok()) << report.status();
  ASSERT_EQ(report->notes.size(), 1u);
  EXPECT_THAT(report->notes[0], HasSubstr("restored from the run's own corpus"));
  EXPECT_EQ(folder.Get("page.html"), folder.Get("run/report.html"));
}

TEST(Report, WithoutAnySourceItHasNoContextsAndSaysSo) {
  TempFolder folder;
  Job job = SmallJob(folder);
  job.deliver.corpus = CorpusForm::kWords;
  MakeRun(job);
  std::filesystem::remove_all(folder.Path("in"));
  const auto report = Write(folder.Path("run"), folder.Path("page.html"));
  ASSERT_TRUE(report.ok()) << report.status();
  ASSERT_EQ(report->notes.size(), 1u);
  EXPECT_THAT(report->notes[0], HasSubstr("the page has no contexts: "));
  simdjson::dom::parser parser;
  const simdjson::dom::element data = DataOf(folder.Get("page.html"), &parser);
  for (const auto contexts : data["phrases"]["contexts"].get_array()) {
    EXPECT_EQ(uint64_t(contexts), 0u);
  }
}

TEST(Report, DataIsThatOfTheRunFolder) {
  TempFolder folder;
  Job job = SmallJob(folder);
  job.phrases.ruling_list = {{true, "Red Buoy", "a mark", "", 1}, {false, "old board", "", "", 2}};
  const std::string text = folder.Get("in/notes.txt");
  const std::string run = PutFinishedRun(folder, "ruled", job, {{"notes.txt", text}});
  const auto loaded = LoadFinishedRun(FileSystem::Posix(), run);
  ASSERT_TRUE(loaded.ok()) << loaded.status();
  const PageData page = ReportData(*loaded);
  EXPECT_EQ(page.job, "harbour");
  EXPECT_EQ(page.files, 1u);
  EXPECT_EQ(page.bytes, text.size());
  ASSERT_EQ(page.passes.size(), loaded->data.passes.size());
  EXPECT_EQ(page.passes[0].pass, 0);
  ASSERT_EQ(page.rulings.size(), 2u);
  EXPECT_EQ(page.rulings[0].form, "red buoy");
  EXPECT_EQ(page.rulings[0].phrase, "Red Buoy");
  EXPECT_EQ(page.rulings[0].reason, "a mark");
  EXPECT_FALSE(page.rulings[1].always);
  ASSERT_EQ(page.phrases.size(), loaded->data.phrases.size());
  for (size_t i = 0; i < page.phrases.size(); ++i) {
    const PagePhrase& phrase = page.phrases[i];
    EXPECT_EQ(phrase.phrase, loaded->data.phrases[i].phrase);
    // Every derivation of the inventory and no other.
    ASSERT_EQ(phrase.made_of.size(), loaded->data.phrases[i].made_of.size()) << phrase.phrase;
    for (size_t k = 0; k < phrase.made_of.size(); ++k) {
      EXPECT_EQ(phrase.made_of[k].pass, loaded->data.phrases[i].made_of[k].pass);
      EXPECT_EQ(phrase.made_of[k].left, loaded->data.phrases[i].made_of[k].left);
      EXPECT_EQ(phrase.made_of[k].joined, loaded->data.phrases[i].made_of[k].joined);
    }
  }
  for (const auto& [key, value] : page.settings) {
    EXPECT_FALSE(key.starts_with("limits.")) << key;
  }
  EXPECT_THAT(page.settings, testing::Contains(Pair("passes.1.name", "longer")));
}

TEST(Report, DerivationsOfRandomRunsAreThoseOfTheInventory) {
  uint64_t phrases = 0;
  for (uint64_t seed = 1; seed <= 100; ++seed) {
    RandomJobs random(seed);
    Job job = random.NextJob();
    job.phrases.ruling_list.clear();
    const std::vector<RefInput> inputs = random.NextInputs(job);
    TempFolder folder;
    std::string run;
    try {
      run = PutFinishedRun(folder, "run", job, inputs);
    } catch (const std::runtime_error&) {
      continue;  // a line stops the job
    }
    const auto loaded = LoadFinishedRun(FileSystem::Posix(), run);
    ASSERT_TRUE(loaded.ok()) << loaded.status();
    const PageData page = ReportData(*loaded);
    for (size_t i = 0; i < page.phrases.size(); ++i) {
      ASSERT_EQ(page.phrases[i].made_of.size(), loaded->data.phrases[i].made_of.size())
          << "seed " << seed << " " << page.phrases[i].phrase;
      ++phrases;
    }
    for (const PageNearMiss& miss : page.near_misses) {
      ASSERT_GE(miss.words, 2) << "seed " << seed << " " << miss.phrase;
    }
  }
  EXPECT_GT(phrases, 300u);
}

}  // namespace
}  // namespace phraseweld
