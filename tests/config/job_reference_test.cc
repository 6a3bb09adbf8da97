// Holds the README's list of keys to the program's. With PHRASEWELD_UPDATE_README set in the
// environment, the test brings the README up to date instead.

#include <gtest/gtest.h>

#include <cstdlib>
#include <fstream>
#include <sstream>

#include "config/job_file.h"

namespace phraseweld {
namespace {

constexpr std::string_view kStart = "<!-- job-file-reference -->\n";
constexpr std::string_view kEnd = "<!-- /job-file-reference -->\n";

TEST(JobReference, IsInTheReadme) {
  const std::string path = PHRASEWELD_SOURCE_DIR "/README.md";
  std::ostringstream bytes;
  bytes << std::ifstream(path).rdbuf();
  std::string readme = bytes.str();
  const size_t start = readme.find(kStart);
  const size_t end = readme.find(kEnd);
  ASSERT_NE(start, std::string::npos);
  ASSERT_NE(end, std::string::npos);
  const size_t table = start + kStart.size();
  if (std::getenv("PHRASEWELD_UPDATE_README") != nullptr) {
    readme.replace(table, end - table, JobReferenceMarkdown());
    ASSERT_TRUE(std::ofstream(path) << readme);
    return;
  }
  EXPECT_EQ(readme.substr(table, end - table), JobReferenceMarkdown())
      << "set PHRASEWELD_UPDATE_README=1 and run this test to bring the README up to date";
}

}  // namespace
}  // namespace phraseweld
