#ifndef PHRASEWELD_TESTS_CONFIG_JOB_FIXTURE_H_
#define PHRASEWELD_TESTS_CONFIG_JOB_FIXTURE_H_

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include <string>
#include <string_view>
#include <vector>

#include "config/job_file.h"
#include "support/temp_folder.h"

namespace phraseweld {

// Job files in a fresh folder; in messages the folder's path is left out.
class JobFixture : public testing::Test {
 protected:
  absl::StatusOr<Job> Load(std::string_view yaml, const std::vector<std::string>& overrides = {}) {
    return LoadJob(FileSystem::Posix(), folder_.Put("demo.yaml", yaml), overrides);
  }

  // The job of a file that must be right.
  Job Good(std::string_view yaml, const std::vector<std::string>& overrides = {}) {
    const auto job = Load(yaml, overrides);
    EXPECT_TRUE(job.ok()) << job.status();
    return job.value_or(Job{});
  }

  // The message for a file that must be wrong.
  std::string Fault(std::string_view yaml, const std::vector<std::string>& overrides = {}) {
    const auto job = Load(yaml, overrides);
    EXPECT_EQ(job.status().code(), absl::StatusCode::kInvalidArgument);
    return WithoutFolder(std::string(job.status().message()));
  }

  // The message for one wrong line behind a right start, which is three lines long.
  std::string FaultOf(std::string_view lines) {
    return Fault("job: demo\ncorpus:\n  files: [notes.txt]\n" + std::string(lines));
  }

  std::string WithoutFolder(std::string text) const {
    const std::string prefix = folder_.path() + "/";
    for (size_t at = text.find(prefix); at != std::string::npos; at = text.find(prefix)) {
      text.erase(at, prefix.size());
    }
    return text;
  }

  TempFolder folder_;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_TESTS_CONFIG_JOB_FIXTURE_H_
