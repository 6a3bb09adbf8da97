#include "files/run_folder_writer.h"

#include <fcntl.h>
#include <sys/file.h>
#include <unistd.h>

#include <cerrno>
#include <cstring>
#include <set>

#include "absl/strings/str_cat.h"
#include "base/status.h"

namespace phraseweld {
namespace {

std::string ParentOf(const std::string& path) {
  const size_t slash = path.rfind('/');
  if (slash == std::string::npos) return ".";
  return slash == 0 ? "/" : path.substr(0, slash);
}

}  // namespace

RunFolderWriter::RunFolderWriter(FileSystem& files, const std::string& folder)
    : files_(files), final_(folder) {
  while (final_.size() > 1 && final_.back() == '/') final_.pop_back();
  partial_ = final_ + ".partial";
  building_ = partial_ + "/run";
  scratch_ = partial_ + "/scratch";
}

absl::StatusOr<std::unique_ptr<RunFolderWriter>> RunFolderWriter::Open(FileSystem& files,
                                                                       const std::string& folder,
                                                                       bool fresh) {
  std::unique_ptr<RunFolderWriter> writer(new RunFolderWriter(files, folder));
  PW_ASSIGN_OR_RETURN(FileInfo info, files.Stat(writer->final_));
  if (info.exists) {
    PW_ASSIGN_OR_RETURN(FileInfo manifest, files.Stat(writer->final_ + "/manifest.json"));
    if (!manifest.exists) {
      return absl::InvalidArgumentError(
          absl::StrCat(writer->final_,
                       ": exists and is no run folder (it has no manifest.json); "
                       "choose another run_folder or move it away"));
    }
    if (!fresh) {
      return absl::InvalidArgumentError(
          absl::StrCat(writer->final_,
                       ": holds a finished run; `--fresh` replaces it, another "
                       "run_folder keeps it"));
    }
  }
  PW_RETURN_IF_ERROR(files.MakeDirectories(writer->partial_));
  writer->lock_ = open(writer->partial_.c_str(), O_RDONLY | O_DIRECTORY | O_CLOEXEC);
  if (writer->lock_ < 0 || flock(writer->lock_, LOCK_EX | LOCK_NB) != 0) {
    return absl::FailedPreconditionError(absl::StrCat(
        writer->partial_, ": ",
        errno == EWOULDBLOCK ? "another run is at work in it; wait for it or choose another "
                               "run_folder"
                             : strerror(errno)));
  }
  PW_RETURN_IF_ERROR(files.RemoveAll(writer->building_));
  PW_RETURN_IF_ERROR(files.RemoveAll(writer->scratch_));
  PW_RETURN_IF_ERROR(files.MakeDirectories(writer->building_));
  PW_RETURN_IF_ERROR(files.MakeDirectories(writer->scratch_));
  return writer;
}

RunFolderWriter::~RunFolderWriter() {
  if (lock_ < 0) return;
  // Best effort: what stays behind is cleared by the next run.
  if (!committed_) files_.RemoveAll(partial_).IgnoreError();
  close(lock_);
}

absl::Status RunFolderWriter::Commit() {
  PW_RETURN_IF_ERROR(files_.RemoveAll(scratch_));
  PW_ASSIGN_OR_RETURN(std::vector<std::string> names, files_.ListFiles(building_));
  std::set<std::string> folders = {building_};
  for (const std::string& name : names) {
    PW_RETURN_IF_ERROR(files_.SyncFile(building_ + "/" + name));
    for (size_t slash = name.find('/'); slash != std::string::npos;
         slash = name.find('/', slash + 1)) {
      folders.insert(building_ + "/" + name.substr(0, slash));
    }
  }
  for (const std::string& folder : folders) PW_RETURN_IF_ERROR(files_.SyncDirectory(folder));
  PW_ASSIGN_OR_RETURN(FileInfo info, files_.Stat(final_));
  if (info.exists) PW_RETURN_IF_ERROR(files_.Rename(final_, partial_ + "/replaced"));
  PW_RETURN_IF_ERROR(files_.Rename(building_, final_));
  PW_RETURN_IF_ERROR(files_.SyncDirectory(ParentOf(final_)));
  committed_ = true;
  return files_.RemoveAll(partial_);
}

}  // namespace phraseweld
