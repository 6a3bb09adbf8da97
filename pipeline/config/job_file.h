#ifndef PHRASEWELD_CONFIG_JOB_FILE_H_
#define PHRASEWELD_CONFIG_JOB_FILE_H_

#include <string>
#include <utility>
#include <vector>

#include "absl/status/statusor.h"
#include "base/job.h"
#include "files/file_system.h"

namespace phraseweld {

// Reads the job file at `path`, lays `overrides` ("key=value", as after --set) over it, and
// resolves it: defaults filled in, the function words and the rulings read from their files.
// Everything that is wrong comes back at once, as one InvalidArgument whose message has for each
// fault "file:line:column: what is wrong", the line, and a caret below the column (for an
// override "--set key=value: what is wrong"). A job file that does not exist is InvalidArgument
// too; one that cannot be read is the file system's own error. May be called from any thread.
absl::StatusOr<Job> LoadJob(FileSystem& files, const std::string& path,
                            const std::vector<std::string>& overrides);

// `job` as a job file with every key, in the order of the reference. LoadJob() makes the same job
// of it, given the same files of function words and rulings.
std::string WriteJobYaml(const Job& job);

// Every key of `job` with its value as WriteJobYaml() writes it, in that order. Keys below a pass
// and gates are written as settings name them: "passes.0.accept.pmi".
std::vector<std::pair<std::string, std::string>> JobSettings(const Job& job);

// The keys of a job file with their values, defaults and meanings, as a Markdown table.
std::string JobReferenceMarkdown();

}  // namespace phraseweld

#endif  // PHRASEWELD_CONFIG_JOB_FILE_H_
