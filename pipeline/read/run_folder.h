#ifndef PHRASEWELD_READ_RUN_FOLDER_H_
#define PHRASEWELD_READ_RUN_FOLDER_H_

#include <functional>
#include <string>
#include <vector>

#include "absl/status/statusor.h"
#include "base/parallel.h"
#include "base/run_data.h"
#include "files/file_system.h"

namespace phraseweld {

// Reads the files of a finished run folder. The readers hold one line in memory, and what they pass
// on is good until the function returns; unknown keys mean nothing to them. Any thread.
//
// Errors: NotFound for a file or folder that is not there; DataLoss, "FILE:LINE: what is wrong",
// for a line that is no JSON object, lacks a field or has one of the wrong kind, or stands where it
// may not, and for a file that ends early. An error that a function returns ends the reading.

// What is to be done with the lines of an audit log; a function may be empty.
struct PassLogReader {
  std::function<absl::Status(const RunPassHead&)> on_head;
  std::function<absl::Status(RunRuled&)> on_ruled;
  std::function<absl::Status(RunSlot&)> on_accepted;  // the line may be moved from
  std::function<absl::Status(RunSlot&)> on_near_miss;
  std::function<absl::Status(const RunBalance&)> on_balance;
};

// The audit logs of a run by pass, from audit/pass-00.jsonl or audit/pass-01.jsonl on: their paths.
absl::StatusOr<std::vector<std::string>> ListPassLogs(FileSystem& files, const std::string& run);

absl::Status ReadPassLog(FileSystem& files, const std::string& path, const PassLogReader& reader);

absl::Status ReadInventory(FileSystem& files, const std::string& path,
                           const std::function<absl::Status(RunPhrase&)>& on_phrase);

absl::StatusOr<RunManifest> ReadManifest(FileSystem& files, const std::string& path);

// All of it, file beside file on `lanes`. Takes memory of about twice the files' size.
absl::StatusOr<RunData> ReadRunFolder(FileSystem& files, const std::string& run, Lanes& lanes);
absl::StatusOr<RunData> ReadRunFolder(FileSystem& files, const std::string& run);

}  // namespace phraseweld

#endif  // PHRASEWELD_READ_RUN_FOLDER_H_
