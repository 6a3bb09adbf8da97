// Rulings from their file through a run to its audit, its inventory and its warnings.

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include <string>
#include <vector>

#include "base/strings.h"
#include "config/job_file.h"
#include "read/run_folder.h"
#include "run/run.h"
#include "support/temp_folder.h"

namespace phraseweld {
namespace {

using ::testing::AllOf;
using ::testing::ElementsAre;
using ::testing::HasSubstr;
using ::testing::IsEmpty;
using ::testing::Not;

class RulingsOfARun : public ::testing::Test {
 protected:
  // A job file beside a rulings file.
  std::string PutJob(std::string_view rulings) {
    std::string text;
    for (int i = 0; i < 6; ++i) text += "The tide gauge, an old chart and a Left-Bank light.\n";
    folder_.Put("notes.txt", text);
    folder_.Put("rulings.yaml", rulings);
    return folder_.Put(
        "job.yaml", Concat("job: notes\nrun_folder: ", folder_.Path("run"), "\ncorpus: {files: [",
                           folder_.Path("notes.txt"),
                           "], layout: lines}\nwords: {function_words: english}\n"
                           "passes: [{accept: {occurrences: 5}}]\nphrases: {rulings: ",
                           folder_.Path("rulings.yaml"), "}\n"));
  }
  absl::StatusOr<RunSummary> RunWith(std::string_view rulings) {
    auto job = LoadJob(FileSystem::Posix(), PutJob(rulings), {});
    if (!job.ok()) return job.status();
    return RunJob(*job, RunControls{}, FileSystem::Posix(), Observer{});
  }
  // After a run.
  RunData Data() {
    auto data = ReadRunFolder(FileSystem::Posix(), folder_.Path("run"));
    EXPECT_TRUE(data.ok()) << data.status();
    return *std::move(data);
  }
  std::vector<std::string> Phrases() {
    std::vector<std::string> phrases;
    for (const RunPhrase& phrase : Data().phrases) phrases.push_back(phrase.phrase);
    return phrases;
  }

  TempFolder folder_;
};

TEST_F(RulingsOfARun, AReasonComesIntoAuditAndInventory) {
  const auto summary =
      RunWith("- {always: \"left bank light\", reason: \"name of a \\\"light\\\"\"}\n");
  ASSERT_TRUE(summary.ok()) << summary.status();
  EXPECT_THAT(summary->warnings, IsEmpty());
  const RunData data = Data();
  ASSERT_EQ(data.passes[0].head.number, 0);
  ASSERT_EQ(data.passes[0].ruled.size(), 1u);
  EXPECT_EQ(data.passes[0].ruled[0].phrase, "left bank light");
  EXPECT_EQ(data.passes[0].ruled[0].joined, 6u);
  EXPECT_EQ(data.passes[0].ruled[0].reason, "name of a \"light\"");
  bool listed = false;
  for (const RunPhrase& phrase : data.phrases) {
    if (phrase.phrase != "left bank light") continue;
    listed = true;
    EXPECT_EQ(phrase.reason, "name of a \"light\"");
    EXPECT_EQ(phrase.pass, 0);
  }
  EXPECT_TRUE(listed);
}

TEST_F(RulingsOfARun, WithoutARulingThePhraseIsMade) {
  ASSERT_TRUE(RunWith("[]\n").ok());
  EXPECT_THAT(Phrases(), testing::Contains("tide gauge"));
  EXPECT_THAT(Phrases(), testing::Contains("old chart"));
}

TEST_F(RulingsOfARun, ARulingThatTurnedSomethingAwayIsNoWarning) {
  const auto summary = RunWith("- {never: \"Tide Gauge\", reason: \"a brand\"}\n");
  ASSERT_TRUE(summary.ok()) << summary.status();
  EXPECT_THAT(summary->warnings, IsEmpty());
  EXPECT_THAT(Phrases(), Not(testing::Contains("tide gauge")));
}

TEST_F(RulingsOfARun, ARulingThatNeverMatchedIsReportedWithItsLine) {
  const auto summary = RunWith(
      "- {never: \"tide gauge\"}\n"
      "- {never: \"green lamp\"}\n"
      "- {always: \"harbour wall\", reason: \"to come\"}\n"
      "- {always: \"chart gauge\"}\n");
  ASSERT_TRUE(summary.ok()) << summary.status();
  EXPECT_THAT(summary->warnings,
              ElementsAre(HasSubstr("rulings.yaml:2: 'green lamp' is ruled never, and would not "
                                    "have been made anyway"),
                          HasSubstr("rulings.yaml:3: 'harbour wall' is ruled always, and occurs "
                                    "nowhere"),
                          HasSubstr("rulings.yaml:4: 'chart gauge' is ruled always, and occurs "
                                    "nowhere")));
}

TEST_F(RulingsOfARun, AContradictionInTheSameTextIsRefusedWithBothLines) {
  const auto summary = RunWith(
      "- {never: \"tide gauge\"}\n"
      "- {always: \"old chart\"}\n"
      "- {always: \"tide gauge\"}\n");
  ASSERT_TRUE(absl::IsInvalidArgument(summary.status()));
  EXPECT_THAT(std::string(summary.status().message()),
              AllOf(HasSubstr("rulings.yaml:3:"), HasSubstr("on line 3 and 'never' on line 1")));
  EXPECT_FALSE(folder_.Has("run"));
}

TEST_F(RulingsOfARun, AContradictionThatOnlyTheWordsShowIsRefusedToo) {
  const auto summary = RunWith(
      "- {never: \"tide gauge\"}\n"
      "- {always: \"\xEF\xBC\xB4ide, gauge!\"}\n");  // a full-width T
  ASSERT_TRUE(absl::IsInvalidArgument(summary.status()));
  EXPECT_THAT(std::string(summary.status().message()),
              AllOf(HasSubstr("rulings.yaml:2:"), HasSubstr("never in line 1")));
}

// What the report page saves: double-quoted scalars on one line, with its escapes.
TEST_F(RulingsOfARun, TheFileThatThePageSavesIsTaken) {
  const auto summary = RunWith(
      "- {always: \"left bank light\", reason: \"says \\\"so\\\", C:\\\\x\\n\\tand \\x07 "
      "\\u2028 \xF0\x9F\x8C\x8A # not: a comment\"}\n"
      "- {never: \"old chart\"}\n");
  ASSERT_TRUE(summary.ok()) << summary.status();
  EXPECT_THAT(summary->warnings, IsEmpty());
  EXPECT_EQ(Data().passes[0].ruled[0].reason,
            "says \"so\", C:\\x\n\tand \x07 \xE2\x80\xA8 \xF0\x9F\x8C\x8A # not: a comment");
  EXPECT_THAT(Phrases(), Not(testing::Contains("old chart")));
}

TEST_F(RulingsOfARun, ThePagesFileWithoutARulingIsTaken) {
  const auto summary = RunWith("[]\n");
  ASSERT_TRUE(summary.ok()) << summary.status();
  EXPECT_THAT(summary->warnings, IsEmpty());
}

}  // namespace
}  // namespace phraseweld
