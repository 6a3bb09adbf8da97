#ifndef PHRASEWELD_RUN_RUN_SOURCE_H_
#define PHRASEWELD_RUN_RUN_SOURCE_H_

#include <memory>
#include <string>
#include <vector>

#include "absl/status/statusor.h"
#include "base/parallel.h"
#include "files/file_system.h"
#include "read/corpus.h"
#include "run/finished_run.h"

namespace phraseweld {

// The source of a finished run, to be read again: the inputs where they are still there, and else
// what the rewritten corpus of the run gives back, which is the same bytes.
class RunSource {
 public:
  // What must be restored comes to lie in `scratch_folder`, which is removed in the end.
  // FailedPrecondition where an input can be had in neither way.
  static absl::StatusOr<std::unique_ptr<RunSource>> Open(FileSystem& files, const FinishedRun& run,
                                                         const std::string& scratch_folder,
                                                         Lanes& lanes);
  ~RunSource();
  RunSource(const RunSource&) = delete;
  RunSource& operator=(const RunSource&) = delete;

  // In the order of the manifest.
  const std::vector<InputFile>& inputs() const { return inputs_; }
  // Remarks for the user, a sentence each without a full stop.
  const std::vector<std::string>& notes() const { return notes_; }
  // A remark where an input, read to its end, is not what the run read; else "".
  std::string CheckDigests(const std::vector<InputDigest>& digests) const;

 private:
  RunSource(FileSystem& files, const FinishedRun& run, std::string scratch_folder)
      : files_(files), run_(run), scratch_folder_(std::move(scratch_folder)) {}
  absl::Status Restore(const std::vector<size_t>& lost, Lanes& lanes);

  FileSystem& files_;
  const FinishedRun& run_;
  const std::string scratch_folder_;
  bool has_scratch_ = false;
  std::vector<InputFile> inputs_;
  std::vector<std::string> notes_;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_RUN_SOURCE_H_
