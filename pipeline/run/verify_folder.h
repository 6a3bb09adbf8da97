#ifndef PHRASEWELD_RUN_VERIFY_FOLDER_H_
#define PHRASEWELD_RUN_VERIFY_FOLDER_H_

#include <string>
#include <vector>

#include "absl/status/status.h"
#include "base/job.h"
#include "base/run_data.h"
#include "files/file_system.h"
#include "read/corpus.h"
#include "run/observer.h"
#include "run/passing_folder.h"
#include "run/verify.h"
#include "run/verify_faults.h"

namespace phraseweld {

// The part of a verification that looks at whole files.
struct FolderCheck {
  FileSystem& files;
  const std::string& folder;
  const Observer& observer;
  const RunManifest& manifest;
  VerifyReport* report;
  VerifyFaults* faults;
};

// Cancelled where the observer wants to stop.
absl::Status Stopped(const Observer& observer);

// "FOLDER/PATH".
std::string InFolder(const FolderCheck& check, std::string_view path);

// Where an input was rewritten to, in the run folder.
std::string RewrittenPath(const Job& job, const RunInput& input);

// manifest.json is written as a run writes it, whatever its values.
void CheckManifestText(const FolderCheck& check);

// Every output of the manifest is there, with its size and hash, and nothing else is. Sets
// *job_intact to whether that is so of job.yaml. Errors: Cancelled.
absl::Status CheckOutputs(const FolderCheck& check, bool* job_intact);

// Every input of the manifest but standard input is there with its size and hash. Sets *intact.
absl::Status CheckInputs(const FolderCheck& check, bool* intact);

// The manifest lists the files that a run of this job with these audit logs (paths) has.
void CheckOutputNames(const FolderCheck& check, const Job& job,
                      const std::vector<std::string>& audit_logs);

// Undoes each rewritten file and compares it with its source. Gives where to read each input from:
// for standard input that is a file below `passing`, made of the rewritten file. Sets *readable to
// whether there is something to read for every input.
absl::Status CheckRestored(const FolderCheck& check, const Job& job, PassingFolder* passing,
                           std::vector<InputFile>* inputs, bool* readable);

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_VERIFY_FOLDER_H_
