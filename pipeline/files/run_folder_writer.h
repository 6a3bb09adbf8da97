#ifndef PHRASEWELD_FILES_RUN_FOLDER_WRITER_H_
#define PHRASEWELD_FILES_RUN_FOLDER_WRITER_H_

#include <memory>
#include <string>

#include "absl/status/statusor.h"
#include "files/file_system.h"

namespace phraseweld {

// Makes a run folder that appears whole or not at all. Everything is written below
// "FOLDER.partial", which one process at a time may hold; Commit() syncs it and renames it to
// FOLDER. What an interrupted run left there is cleared by the next.
class RunFolderWriter {
 public:
  // InvalidArgument (FailedPrecondition for a held folder) where FOLDER is a finished run and
  // `fresh` is not set, or is something else than a run; or where another process is at it.
  static absl::StatusOr<std::unique_ptr<RunFolderWriter>> Open(FileSystem& files,
                                                               const std::string& folder,
                                                               bool fresh);
  ~RunFolderWriter();
  RunFolderWriter(const RunFolderWriter&) = delete;
  RunFolderWriter& operator=(const RunFolderWriter&) = delete;

  const std::string& folder() const { return building_; }  // files go here
  const std::string& scratch() const { return scratch_; }  // gone after Commit() or failure
  absl::Status Commit();

 private:
  RunFolderWriter(FileSystem& files, const std::string& folder);

  FileSystem& files_;
  std::string final_, partial_, building_, scratch_;
  int lock_ = -1;
  bool committed_ = false;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_FILES_RUN_FOLDER_WRITER_H_
