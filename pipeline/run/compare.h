#ifndef PHRASEWELD_RUN_COMPARE_H_
#define PHRASEWELD_RUN_COMPARE_H_

#include <cstddef>
#include <string>

#include "absl/status/statusor.h"
#include "base/comparison.h"
#include "files/file_system.h"
#include "run/finished_run.h"

namespace phraseweld {

// Reads both run folders and compares them. Memory: both runs' audits and inventories. Any thread.
absl::StatusOr<RunComparison> CompareRuns(FileSystem& files, const std::string& left,
                                          const std::string& right);

// Phrases are the same where their texts are.
RunComparison CompareFinishedRuns(const FinishedRun& left, const FinishedRun& right);

// For a terminal of 80 columns; each list has at most `most` rows and says how many were left out.
std::string ComparisonText(const RunComparison& comparison, size_t most);

// One JSON object with everything, ended by a line feed.
std::string ComparisonJson(const RunComparison& comparison);

// The page of deliver/compare_page.h, written to `path`.
absl::Status WriteComparisonPage(FileSystem& files, const RunComparison& comparison,
                                 const std::string& path);

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_COMPARE_H_
