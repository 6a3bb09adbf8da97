// What `check` says a run will take, against what the run takes.

#include "run/forecast.h"

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include <filesystem>
#include <random>
#include <string>

#include "base/strings.h"
#include "config/job_file.h"
#include "run/check.h"
#include "run/run.h"
#include "support/compress.h"
#include "support/temp_folder.h"

namespace phraseweld {
namespace {

// Lines of words of which the first are the commonest; pairs of them come together again and again.
std::string Text(size_t lines) {
  std::mt19937_64 random(7);
  std::string text;
  for (size_t line = 0; line < lines; ++line) {
    for (int word = 0; word < 9; ++word) {
      const double rare = static_cast<double>(random() % 1000003) / 1000003;
      const auto number = static_cast<uint64_t>(40000 * rare * rare * rare);
      AppendTo(&text, word == 0 ? "" : " ", "w", number);
      if (number % 7 == 3) AppendTo(&text, " p", number);
    }
    text += '\n';
  }
  return text;
}

class ForecastTest : public ::testing::Test {
 protected:
  Job JobOn(const std::string& corpus, const std::string& more = "") {
    const std::string path = folder_.Put(
        "job.yaml",
        Concat("job: notes\nrun_folder: ", folder_.Path("run"), "\ncorpus: {files: [", corpus,
               "], layout: lines}\npasses: [{repeat: 3, accept: {occurrences: 5}}]\n", more));
    auto job = LoadJob(files_, path, {});
    EXPECT_TRUE(job.ok()) << job.status();
    return *std::move(job);
  }
  uint64_t Foreseen(const Job& job) {
    const auto report = CheckJob(job, files_, Observer{});
    EXPECT_TRUE(report.ok()) << report.status();
    EXPECT_GT(report->sampled_bytes, 0u);
    return report->plan.output_bytes;
  }
  uint64_t Taken(const Job& job) {
    const auto run = RunJob(job, RunControls{.fresh = true}, files_, Observer{});
    EXPECT_TRUE(run.ok()) << run.status();
    uint64_t bytes = 0;
    for (const auto& [path, size] : run->outputs) bytes += path == "job.yaml" ? 0 : size;
    return bytes;
  }

  FileSystem& files_ = FileSystem::Posix();
  TempFolder folder_;
};

// Paths stand in job.yaml and on the page; all else is the same.
constexpr double kPaths = 2000;

TEST_F(ForecastTest, WhatIsTriedWholeIsForeseenToTheByte) {
  const Job job = JobOn(folder_.Put("a.txt", Text(6000)), "deliver: {spans: true}\n");
  const uint64_t taken = Taken(job);
  EXPECT_GT(taken, 500000u);
  EXPECT_NEAR(static_cast<double>(Foreseen(job)), static_cast<double>(taken), kPaths);
}

TEST_F(ForecastTest, CompressedInputsCountAsTheirText) {
  const std::string text = Text(6000);
  const Job job = JobOn(folder_.Put("a.txt.gz", GzipMember(text)));
  EXPECT_NEAR(static_cast<double>(Foreseen(job)), static_cast<double>(Taken(job)), kPaths);
}

TEST_F(ForecastTest, MoreThanTheSampleIsForeseenWithinAFifth) {
  // 24 MB; the trial sees 16 MiB of it.
  const Job job = JobOn(folder_.Put("a.txt", Text(370000)), "deliver: {report: false}\n");
  const auto taken = static_cast<double>(Taken(job));
  EXPECT_NEAR(static_cast<double>(Foreseen(job)), taken, 0.2 * taken);
}

TEST_F(ForecastTest, ATrialLeavesNothing) {
  namespace fs = std::filesystem;
  const auto count = [] {
    size_t folders = 0;
    for (const auto& entry : fs::directory_iterator(fs::temp_directory_path())) {
      folders += entry.path().filename().string().starts_with("phraseweld-") ? 1 : 0;
    }
    return folders;
  };
  const Job job = JobOn(folder_.Put("a.txt", Text(50)));
  const size_t before = count();
  EXPECT_GT(Foreseen(job), 0u);
  EXPECT_EQ(count(), before);
  EXPECT_FALSE(fs::exists(folder_.Path("run")));
}

TEST_F(ForecastTest, AReportLargerThanTheLimitIsLeftOutAndSaidSo) {
  std::string text;
  for (int i = 0; i < 40000; ++i) AppendTo(&text, "l", i, "x r", i, "\nl", i, "x r", i, "\n");
  const std::string path =
      folder_.Put("job.yaml", Concat("job: pairs\nrun_folder: ", folder_.Path("run"),
                                     "\ncorpus: {files: [", folder_.Put("pairs.txt", text),
                                     "], layout: lines}\npasses: [{accept: {occurrences: 2}}]\n"
                                     "limits: {memory: 64 MiB, threads: 2}\n"));
  const auto job = LoadJob(files_, path, {});
  ASSERT_TRUE(job.ok()) << job.status();
  const auto run = RunJob(*job, RunControls{}, files_, Observer{});
  ASSERT_TRUE(run.ok()) << run.status();
  EXPECT_EQ(run->totals.phrases, 40000u);
  EXPECT_THAT(run->warnings,
              ::testing::ElementsAre(::testing::HasSubstr("report.html was left out")));
  EXPECT_FALSE(folder_.Has("run/report.html"));
  EXPECT_TRUE(folder_.Has("run/manifest.json"));
}

}  // namespace
}  // namespace phraseweld
