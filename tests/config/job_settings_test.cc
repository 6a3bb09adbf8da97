#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include <string>
#include <utility>
#include <vector>

#include "base/strings.h"
#include "config/job_file.h"
#include "support/temp_folder.h"

namespace phraseweld {
namespace {

using ::testing::Contains;
using ::testing::Pair;

Job Sample() {
  Job job;
  job.job = "tides";
  job.run_folder = "runs/tides";
  job.corpus.files = {"a.txt", "b c.txt"};
  job.passes.resize(2);
  job.passes[1].take = 50;
  job.passes[1].accept = {{Quantity::kDocuments, 3}, {Quantity::kPmi, 4.25}};
  return job;
}

TEST(JobSettings, GatesAndPassesHaveKeysOfTheirOwn) {
  const auto settings = JobSettings(Sample());
  EXPECT_THAT(settings, Contains(Pair("passes.0.take", "all")));
  EXPECT_THAT(settings, Contains(Pair("passes.1.take", "50")));
  EXPECT_THAT(settings, Contains(Pair("passes.0.accept.occurrences", "5")));
  EXPECT_THAT(settings, Contains(Pair("passes.1.accept.pmi", "4.25")));
  EXPECT_THAT(settings, Contains(Pair("corpus.files", "[a.txt, \"b c.txt\"]")));
}

// The keys are those of --set, so laid over another job they make this one.
TEST(JobSettings, AreSettings) {
  const TempFolder folder;
  const Job job = Sample();
  Job plain;
  plain.job = "other";
  plain.corpus.files = {"c.txt"};
  plain.passes.resize(2);
  for (PassOptions& pass : plain.passes) pass.accept.clear();
  std::vector<std::string> overrides;
  for (const auto& [key, value] : JobSettings(job)) overrides.push_back(Concat(key, "=", value));
  const auto made =
      LoadJob(FileSystem::Posix(), folder.Put("job.yaml", WriteJobYaml(plain)), overrides);
  ASSERT_TRUE(made.ok()) << made.status();
  EXPECT_EQ(WriteJobYaml(*made), WriteJobYaml(job));
}

}  // namespace
}  // namespace phraseweld
