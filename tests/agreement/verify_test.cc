// Verification against the program: whatever a random job on a random corpus gives is proved.

#include "run/verify.h"

#include <gtest/gtest.h>

#include <cstdlib>
#include <filesystem>
#include <string>
#include <vector>

#include "agreement/random_job.h"
#include "base/json.h"
#include "base/strings.h"
#include "config/job_file.h"
#include "run/run.h"
#include "support/temp_folder.h"

namespace phraseweld {
namespace {

constexpr int kJobs = 400;

// Puts the job's lists into files, where a later reader of its job.yaml finds them.
void PutLists(const TempFolder& folder, Job* job) {
  if (!job->words.function_word_list.empty()) {
    job->words.function_words =
        folder.Put("words.txt", Join(job->words.function_word_list, "\n") + "\n");
  }
  if (job->phrases.ruling_list.empty()) return;
  std::string rulings;
  for (const Ruling& ruling : job->phrases.ruling_list) {
    AppendTo(&rulings, "- {", ruling.always ? "always: " : "never: ");
    AppendJsonString(&rulings, ruling.phrase);
    rulings += ", reason: ";
    AppendJsonString(&rulings, ruling.reason);
    rulings += "}\n";
  }
  job->phrases.rulings = folder.Put("rulings.yaml", rulings);
}

TEST(VerifyAgreement, EveryRandomRunIsProved) {
  // Seconds of syncing would drown the test; a folder in memory has nothing to sync.
  if (std::filesystem::exists("/dev/shm")) setenv("TMPDIR", "/dev/shm", 1);
  RandomJobs random(20);
  int proved = 0;
  uint64_t merges = 0;
  for (int i = 0; i < kJobs; ++i) {
    const TempFolder folder;
    Job job = random.NextJob();
    job.run_folder = folder.Path("run");
    job.corpus.files.clear();
    for (const RefInput& input : random.NextInputs(job)) {
      job.corpus.files.push_back(folder.Put("in/" + input.name, input.bytes));
    }
    PutLists(folder, &job);
    const auto summary = RunJob(job, RunControls{}, FileSystem::Posix(), Observer{});
    const bool may_stop =
        job.corpus.layout == Layout::kJsonLines && job.corpus.bad_lines == BadLines::kStop;
    if (!summary.ok() && may_stop) continue;  // at a line that is no object
    ASSERT_TRUE(summary.ok()) << summary.status();
    const auto report = VerifyRun(FileSystem::Posix(), job.run_folder, Observer{});
    ASSERT_TRUE(report.ok()) << "job " << i << ":\n"
                             << report.status() << "\n"
                             << WriteJobYaml(job);
    merges += report->merges;
    ++proved;
  }
  EXPECT_GT(proved, kJobs / 2);
  EXPECT_GT(merges, uint64_t{kJobs} * 10);
}

}  // namespace
}  // namespace phraseweld
