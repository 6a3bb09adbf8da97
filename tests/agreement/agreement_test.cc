// The program against the slow reference: random small corpora, whole run folders, to the byte.

#include <gtest/gtest.h>

#include <cstdlib>
#include <filesystem>
#include <fstream>
#include <map>
#include <stdexcept>

#include "absl/strings/str_cat.h"
#include "agreement/random_job.h"
#include "deliver/joints.h"
#include "files/file_system.h"
#include "run/run.h"

namespace phraseweld {
namespace {

namespace fs = std::filesystem;

// Seconds of syncing would drown the test; a folder in memory has nothing to sync.
fs::path WorkFolder() {
  const fs::path base = fs::exists("/dev/shm") ? fs::path("/dev/shm") : fs::temp_directory_path();
  return base / absl::StrCat("phraseweld-agreement-", getpid());
}

std::string ReadBytes(const fs::path& path) {
  std::ifstream in(path, std::ios::binary);
  return std::string(std::istreambuf_iterator<char>(in), {});
}

class Agreement : public ::testing::Test {
 protected:
  void SetUp() override { fs::remove_all(folder_); }
  void TearDown() override { fs::remove_all(folder_); }

  // Runs the program; the run folder's files by their path, less those that the reference lacks.
  absl::StatusOr<std::map<std::string, std::string>> Run(Job job,
                                                         const std::vector<RefInput>& inputs,
                                                         const RunControls& controls) {
    fs::remove_all(folder_);
    fs::create_directories(folder_ / "in");
    job.corpus.files.clear();
    for (const RefInput& input : inputs) {
      std::ofstream(folder_ / "in" / input.name, std::ios::binary) << input.bytes;
      job.corpus.files.push_back((folder_ / "in" / input.name).string());
    }
    job.run_folder = (folder_ / "run").string();
    absl::StatusOr<RunSummary> summary = RunJob(job, controls, FileSystem::Posix(), Observer{});
    if (!summary.ok()) return summary.status();
    std::map<std::string, std::string> files;
    for (const auto& entry : fs::recursive_directory_iterator(folder_ / "run")) {
      if (!entry.is_regular_file()) continue;
      const std::string name = fs::relative(entry.path(), folder_ / "run").string();
      if (name == "manifest.json" || name == "job.yaml" || name.ends_with(".joints.zst")) continue;
      files[name] = ReadBytes(entry.path());
    }
    return files;
  }

  // Undoing the rewritten corpus gives the inputs.
  void ExpectRestores(const std::vector<RefInput>& inputs) {
    for (const RefInput& input : inputs) {
      std::string restored;
      const auto status =
          RestoreFile(FileSystem::Posix(), (folder_ / "run" / "corpus" / input.name).string(),
                      [&](std::string_view bytes) {
                        restored += bytes;
                        return absl::OkStatus();
                      });
      ASSERT_TRUE(status.ok()) << status.status();
      ASSERT_EQ(restored, input.bytes);
    }
  }

  const fs::path folder_ = WorkFolder();
};

// The first lines that differ.
std::string FirstDifference(const std::string& expected, const std::string& actual) {
  size_t at = 0;
  while (at < expected.size() && at < actual.size() && expected[at] == actual[at]) ++at;
  const size_t line = at == 0 ? 0 : expected.rfind('\n', at - 1) + 1;
  const auto row = [&](const std::string& text) {
    return text.substr(std::min(line, text.size()), text.find('\n', at) - line);
  };
  return absl::StrCat(" differs at byte ", at, "\nexpected ", row(expected), "\nactual   ",
                      row(actual));
}

void ExpectSameFiles(const std::map<std::string, std::string>& expected,
                     const std::map<std::string, std::string>& actual) {
  for (const auto& [name, bytes] : expected) {
    auto found = actual.find(name);
    ASSERT_NE(found, actual.end()) << name << " is missing";
    ASSERT_TRUE(found->second == bytes) << name << FirstDifference(bytes, found->second);
  }
  for (const auto& [name, bytes] : actual) {
    ASSERT_TRUE(expected.count(name)) << name << " is more than the reference writes";
  }
}

std::string Describe(const Job& job, const std::vector<RefInput>& inputs,
                     const RunControls& controls) {
  std::string out =
      absl::StrCat("threads ", job.limits.threads, ", block ", controls.block_bytes, ", chunk ",
                   controls.chunk_entries, ", disk ", controls.force_disk, ", scans ",
                   controls.force_scans, ", layout ", static_cast<int>(job.corpus.layout));
  for (const RefInput& input : inputs) absl::StrAppend(&out, "\n", input.name, ": ", input.bytes);
  return out;
}

// PHRASEWELD_AGREEMENT_ROUNDS and _SEED make the test longer, or repeat one case.
uint64_t FromEnvironment(const char* name, uint64_t otherwise) {
  const char* value = std::getenv(name);
  return value != nullptr ? std::strtoull(value, nullptr, 10) : otherwise;
}

TEST_F(Agreement, RandomCorporaGiveTheReferenceRunFolder) {
  const uint64_t rounds = FromEnvironment("PHRASEWELD_AGREEMENT_ROUNDS", 3000);
  const uint64_t first = FromEnvironment("PHRASEWELD_AGREEMENT_SEED", 1);
  uint64_t with_phrases = 0, stopped = 0;
  for (uint64_t seed = first; seed < first + rounds; ++seed) {
    RandomJobs random(seed);
    Job job = random.NextJob();
    const std::vector<RefInput> inputs = random.NextInputs(job);
    job.debug.recount = random.Below(4) == 0;
    job.limits.threads = std::vector<int>{1, 2, 3, 8}[random.Below(4)];
    RunControls controls;
    controls.block_bytes = 1 + random.Below(200);
    controls.chunk_entries = 1 + random.Below(60);
    controls.force_disk = random.Below(3) == 0;
    controls.force_scans = random.Below(3) == 0;
    const std::string what = absl::StrCat("seed ", seed, ": ", Describe(job, inputs, controls));
    std::map<std::string, std::string> expected;
    bool stops = false;
    try {
      expected = ReferenceRun(job, inputs);
    } catch (const std::runtime_error&) {
      stops = true;
    }
    auto actual = Run(job, inputs, controls);
    if (stops) {
      ++stopped;
      ASSERT_FALSE(actual.ok()) << what;
      continue;
    }
    ASSERT_TRUE(actual.ok()) << what << "\n" << actual.status();
    ExpectSameFiles(expected, *actual);
    if (HasFatalFailure()) {
      FAIL() << what;
    }
    if (job.deliver.corpus == CorpusForm::kSource) ExpectRestores(inputs);
    if (HasFatalFailure()) {
      FAIL() << what;
    }
    with_phrases += expected.at("inventory.jsonl").empty() ? 0 : 1;
  }
  std::printf("%d corpora: %d with phrases, %d stopped on a bad line\n", static_cast<int>(rounds),
              static_cast<int>(with_phrases), static_cast<int>(stopped));
  if (rounds >= 100) {
    EXPECT_GT(with_phrases, rounds / 3);
  }
}

}  // namespace
}  // namespace phraseweld
