#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include <atomic>
#include <filesystem>
#include <memory>
#include <string>
#include <utility>

#include "run/verify_fixture.h"

namespace phraseweld {
namespace {

using ::testing::AllOf;
using ::testing::HasSubstr;
using ::testing::IsEmpty;

TEST_F(VerifyTest, ARunOfEveryLayoutAndFormIsProved) {
  for (const char* layout : {"text", "lines", "paragraphs", "json_lines"}) {
    for (const char* corpus : {"source", "words", "none"}) {
      for (const char* compress : {"none", "zstd"}) {
        SCOPED_TRACE(Concat(layout, " ", corpus, " ", compress));
        Run({layout, corpus, compress[0] == 'n' ? "_" : "\\\"+", compress});
        EXPECT_THAT(Faults(), IsEmpty());
      }
    }
  }
}

TEST_F(VerifyTest, TheReportTellsWhatWasProved) {
  Run({});
  const auto report = VerifyRun(FileSystem::Posix(), folder_.Path("run"), Observer{});
  ASSERT_TRUE(report.ok()) << report.status();
  const RunData run = *ReadRunFolder(FileSystem::Posix(), folder_.Path("run"));
  EXPECT_EQ(report->files, run.manifest.outputs.size());
  EXPECT_EQ(report->inputs, 2u);
  EXPECT_EQ(report->restored, 2u);
  EXPECT_EQ(report->documents, 48u);
  EXPECT_EQ(report->words, run.manifest.totals.words);
  EXPECT_EQ(report->passes, run.manifest.totals.passes);
  EXPECT_EQ(report->phrases, run.phrases.size());
  uint64_t accepted = 0, near_misses = 0, merges = 0;
  for (const RunPass& pass : run.passes) {
    accepted += pass.accepted.size();
    near_misses += pass.near_misses.size();
    merges += pass.balance.joined;
  }
  EXPECT_EQ(report->accepted, accepted);
  EXPECT_EQ(report->near_misses, near_misses);
  EXPECT_EQ(report->merges, merges);
  // The sample has something of everything.
  EXPECT_GT(accepted, 5u);
  EXPECT_GT(near_misses, 2u);
  EXPECT_GE(report->passes, 3u);
}

TEST_F(VerifyTest, AnyFlippedByteOfTheRunFolderIsFoundAndItsFileNamed) {
  Run({"json_lines", "source", "_", "none", "true"});
  const std::string manifest = folder_.Get("run/manifest.json");
  const size_t version = manifest.find("\"version\":\"") + 11;
  const size_t timings = manifest.find("\"timings\":{") + 11;
  for (const std::string& file : RunFiles()) {
    const std::string bytes = folder_.Get("run/" + file);
    // About forty places a file, at its very ends as well.
    const size_t step = bytes.size() / 40 + 1;
    for (size_t at = 0; at < bytes.size(); at += at + step < bytes.size() ? step : 1) {
      if (at + step >= bytes.size() && at + 1 < bytes.size()) at = bytes.size() - 1;
      if (file == "manifest.json") {
        // How long it took, and by which version, is told and not proved.
        if (at >= timings && at + 3 < bytes.size()) continue;
        if (at >= version && bytes[at] != '"' && at < version + 5) continue;
      }
      std::string flipped = bytes;
      flipped[at] = static_cast<char>(flipped[at] ^ 1);
      folder_.Put("run/" + file, flipped);
      const auto report = VerifyRun(FileSystem::Posix(), folder_.Path("run"), Observer{});
      EXPECT_THAT(std::string(report.status().message()), HasSubstr(folder_.Path("run/" + file)))
          << "byte " << at;
    }
    folder_.Put("run/" + file, bytes);
  }
  EXPECT_THAT(Faults(), IsEmpty());
}

// The audit, the inventory and the texts hold nothing that the recount could not tell but the
// number of slot types.
TEST_F(VerifyTest, AnyFlippedByteIsFoundWithTheHashesMended) {
  Run({});
  for (const std::string& file : RunFiles()) {
    if (file == "manifest.json" || file == "job.yaml" || file.ends_with(".joints.zst")) continue;
    const std::string bytes = folder_.Get("run/" + file);
    const size_t slot_types = bytes.find("\"slot_types\":");
    const size_t step = bytes.size() / 30 + 1;
    for (size_t at = step / 2; at < bytes.size(); at += step) {
      if (at > slot_types && at < slot_types + 16) continue;
      const std::string faults = FaultsAfter(file, [at](std::string text) {
        text[at] = static_cast<char>(text[at] ^ 1);
        return text;
      });
      EXPECT_THAT(faults, HasSubstr(folder_.Path("run/" + file))) << "byte " << at;
    }
  }
}

TEST_F(VerifyTest, AChangedByteOfTheSourceIsFoundWithItsPlace) {
  Run({});
  const std::string text = folder_.Get("in/a.txt");
  std::string changed = text;
  const size_t at = text.find("left bank light seen");
  changed[at] = 'L';
  folder_.Put("in/a.txt", changed);
  EXPECT_THAT(Faults(),
              AllOf(HasSubstr(Concat(folder_.Path("in/a.txt"), ": XXH3-128: found ")),
                    HasSubstr(Concat("corpus/a.txt: undone, it is not ", folder_.Path("in/a.txt"),
                                     " from byte ", at, " (line 1): found \"left"))));
  folder_.Put("in/a.txt", text + "x");
  EXPECT_THAT(Faults(), HasSubstr(Concat(folder_.Path("in/a.txt"), ": size: found ",
                                         text.size() + 1, " bytes, expected ", text.size())));
  std::filesystem::remove(folder_.Path("in/a.txt"));
  EXPECT_THAT(Faults(), HasSubstr(Concat(folder_.Path("in/a.txt"), ": nothing stands where")));
}

TEST_F(VerifyTest, AFileTooFewOrTooManyIsNamed) {
  Run({});
  for (const char* file : {"inventory.tsv", "audit/pass-02.jsonl", "corpus/a.txt", "spans.jsonl",
                           "corpus/below/b.txt.joints.zst", "job.yaml", "audit/pass-00.jsonl"}) {
    const std::string bytes = folder_.Get(Concat("run/", file));
    std::filesystem::remove(folder_.Path(Concat("run/", file)));
    EXPECT_THAT(Faults(), HasSubstr(folder_.Path(Concat("run/", file))));
    folder_.Put(Concat("run/", file), bytes);
  }
  folder_.Put("run/corpus/c.txt", "");
  EXPECT_THAT(Faults(), HasSubstr(Concat(folder_.Path("run/corpus/c.txt"),
                                         ": the manifest does not list this file")));
  std::filesystem::remove(folder_.Path("run/corpus/c.txt"));
  folder_.Put("run/report.html", "made later");
  EXPECT_THAT(Faults(), IsEmpty());
}

TEST_F(VerifyTest, ALogTakenFromFolderAndManifestIsMissed) {
  Run({});
  const std::string log = "audit/pass-02.jsonl";
  std::string manifest = folder_.Get("run/manifest.json");
  for (const char* name : {"audit/pass-02.jsonl", "audit/pass-03.jsonl", "audit/pass-04.jsonl"}) {
    const size_t entry = manifest.find(Concat("{\"path\":\"", name));
    if (entry == std::string::npos) continue;
    manifest.erase(entry, manifest.find('\n', entry) + 1 - entry);
    std::filesystem::remove(folder_.Path(Concat("run/", name)));
  }
  folder_.Put("run/manifest.json", manifest);
  EXPECT_THAT(Faults(), HasSubstr("/audit: the log of pass 2 (longer) is missing"));
}

// Has a file for standard input.
class WithStandardInput : public ForwardingFileSystem {
 public:
  explicit WithStandardInput(std::string path)
      : ForwardingFileSystem(FileSystem::Posix()), path_(std::move(path)) {}
  absl::StatusOr<std::unique_ptr<ReadFile>> OpenRead(const std::string& path) override {
    return target_.OpenRead(path == "-" ? path_ : path);
  }

 private:
  std::string path_;
};

TEST_F(VerifyTest, StandardInputIsProvedFromTheRewrittenFile) {
  WithStandardInput files(folder_.Put("typed", SourceText("lines")));
  Job job;
  job.job = "typed";
  job.run_folder = folder_.Path("run");
  job.corpus.files = {"-"};
  job.corpus.layout = Layout::kLines;
  job.passes[0].accept = {{Quantity::kOccurrences, 3}};
  ASSERT_TRUE(RunJob(job, RunControls{}, files, Observer{}).ok());
  std::filesystem::remove(folder_.Path("typed"));
  EXPECT_THAT(Faults(), IsEmpty());
  EXPECT_THAT(FaultsAfter("audit/pass-01.jsonl", Bumped(2, "n")), HasSubstr(":2: n: found "));
  EXPECT_THAT(FaultsAfter("corpus/stdin", Replaced("light", "night")),
              HasSubstr("corpus/stdin: the restored text is not the source: "));
  folder_.Put("typed", SourceText("lines"));
  job.deliver.corpus = CorpusForm::kWords;
  RunControls fresh;
  fresh.fresh = true;
  ASSERT_TRUE(RunJob(job, fresh, files, Observer{}).ok());
  EXPECT_THAT(Faults(), HasSubstr("standard input: it is gone"));
}

TEST_F(VerifyTest, AFolderWithoutAManifestIsNoFinishedRun) {
  const auto report = VerifyRun(FileSystem::Posix(), folder_.Path("run"), Observer{});
  EXPECT_TRUE(absl::IsNotFound(report.status())) << report.status();
}

TEST_F(VerifyTest, ItStopsWhenItIsToldTo) {
  Run({});
  std::atomic<bool> stop{false};
  Observer observer;
  observer.stop = &stop;
  for (const char* stage : {"hash the results", "hash the sources", "restore", "recount"}) {
    stop = false;
    observer.stage = [&](const Stage& at) { stop = stop || at.name == stage; };
    const auto report = VerifyRun(FileSystem::Posix(), folder_.Path("run"), observer);
    EXPECT_TRUE(absl::IsCancelled(report.status())) << stage << ": " << report.status();
  }
}

}  // namespace
}  // namespace phraseweld
