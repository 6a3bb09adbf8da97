#ifndef PHRASEWELD_FILES_FILE_SYSTEM_H_
#define PHRASEWELD_FILES_FILE_SYSTEM_H_

#include <cstdint>
#include <memory>
#include <string>
#include <string_view>
#include <vector>

#include "absl/status/statusor.h"

namespace phraseweld {

// The one virtual seam to the operating system, so that tests can make the N-th operation fail.
// Errors carry the path, what was tried and the system's words ("No space left on device").

class ReadFile {
 public:
  virtual ~ReadFile() = default;
  // Up to `size` bytes into `buffer`; 0 at the end.
  virtual absl::StatusOr<size_t> Read(char* buffer, size_t size) = 0;
  // Goes on reading at this byte, which must be a file's.
  virtual absl::Status Seek(uint64_t offset) = 0;
};

class WriteFile {
 public:
  virtual ~WriteFile() = default;
  virtual absl::Status Append(std::string_view bytes) = 0;
  virtual absl::Status Sync() = 0;   // to the disk; a failed sync is final
  virtual void BeginSync() = 0;      // lets the disk begin; promises nothing
  virtual absl::Status Close() = 0;  // without a sync; the destructor closes, ignoring errors
};

// A file of fixed place addressing for scratch data; thread-safe.
class ScratchFile {
 public:
  virtual ~ScratchFile() = default;
  virtual absl::Status WriteAt(uint64_t offset, std::string_view bytes) = 0;
  virtual absl::Status ReadAt(uint64_t offset, char* buffer, size_t size) = 0;  // all of it
  virtual int descriptor() const = 0;                                           // for mapping
};

struct FileInfo {
  bool exists = false;
  bool is_directory = false;
  uint64_t size = 0;
  bool is_regular = false;  // a plain file: neither a directory nor a device, pipe or socket
};

class FileSystem {
 public:
  virtual ~FileSystem() = default;
  // "-" is standard input, which stays open; a file of that name is "./-".
  virtual absl::StatusOr<std::unique_ptr<ReadFile>> OpenRead(const std::string& path) = 0;
  virtual absl::StatusOr<std::unique_ptr<WriteFile>> CreateWrite(const std::string& path) = 0;
  virtual absl::StatusOr<std::unique_ptr<ScratchFile>> CreateScratch(const std::string& path) = 0;
  virtual absl::StatusOr<FileInfo> Stat(const std::string& path) = 0;
  virtual absl::Status MakeDirectories(const std::string& path) = 0;
  virtual absl::Status Rename(const std::string& from, const std::string& to) = 0;
  virtual absl::Status RemoveAll(const std::string& path) = 0;  // absent is no error
  virtual absl::Status SyncFile(const std::string& path) = 0;   // what was written and closed
  virtual absl::Status SyncDirectory(const std::string& path) = 0;
  virtual absl::StatusOr<uint64_t> FreeBytes(const std::string& path) = 0;
  // Names of the regular files below `path`, relative to it, in byte order, "/" between parts.
  virtual absl::StatusOr<std::vector<std::string>> ListFiles(const std::string& path) = 0;

  // The real one; never destroyed.
  static FileSystem& Posix();
};

// Forwards everything; for tests to override a part.
class ForwardingFileSystem : public FileSystem {
 public:
  explicit ForwardingFileSystem(FileSystem& target) : target_(target) {}
  absl::StatusOr<std::unique_ptr<ReadFile>> OpenRead(const std::string& path) override {
    return target_.OpenRead(path);
  }
  absl::StatusOr<std::unique_ptr<WriteFile>> CreateWrite(const std::string& path) override {
    return target_.CreateWrite(path);
  }
  absl::StatusOr<std::unique_ptr<ScratchFile>> CreateScratch(const std::string& path) override {
    return target_.CreateScratch(path);
  }
  absl::StatusOr<FileInfo> Stat(const std::string& path) override { return target_.Stat(path); }
  absl::Status MakeDirectories(const std::string& path) override {
    return target_.MakeDirectories(path);
  }
  absl::Status Rename(const std::string& from, const std::string& to) override {
    return target_.Rename(from, to);
  }
  absl::Status RemoveAll(const std::string& path) override { return target_.RemoveAll(path); }
  absl::Status SyncFile(const std::string& path) override { return target_.SyncFile(path); }
  absl::Status SyncDirectory(const std::string& path) override {
    return target_.SyncDirectory(path);
  }
  absl::StatusOr<uint64_t> FreeBytes(const std::string& path) override {
    return target_.FreeBytes(path);
  }
  absl::StatusOr<std::vector<std::string>> ListFiles(const std::string& path) override {
    return target_.ListFiles(path);
  }

 protected:
  FileSystem& target_;
};

// Whole file in memory.
absl::StatusOr<std::string> ReadWhole(FileSystem& files, const std::string& path);

// `prefix` and two numbers: a path that nothing else that runs now, here or in another process of
// the machine, is given. Thread-safe.
std::string PassingPath(std::string_view prefix);

}  // namespace phraseweld

#endif  // PHRASEWELD_FILES_FILE_SYSTEM_H_
