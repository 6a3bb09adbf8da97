#include "files/file_system.h"

#include <fcntl.h>
#include <sys/stat.h>
#include <sys/statvfs.h>
#include <unistd.h>

#include <algorithm>
#include <atomic>
#include <cerrno>
#include <filesystem>
#include <system_error>
#include <utility>

#include "absl/strings/str_cat.h"
#include "base/status.h"

namespace phraseweld {
namespace {

const char* Advice(int error) {
  switch (error) {
    case ENOSPC:
    case EDQUOT:
      return "; free some space there or choose another place";
    case EMFILE:
    case ENFILE:
      return "; raise the limit on open files (ulimit -n)";
    case EACCES:
    case EPERM:
      return "; check the permissions of the file and of the folders above it";
    default:
      return "";
  }
}

// `what` completes "cannot ... PATH".
absl::Status SystemError(const std::string& what, const std::string& path, int error) {
  return absl::Status(absl::ErrnoToStatusCode(error),
                      absl::StrCat("cannot ", what, " ", path, ": ",
                                   std::generic_category().message(error), Advice(error)));
}

// Calls until a signal did not interrupt the call.
template <typename Call>
auto Retry(Call call) {
  decltype(call()) result;
  do {
    result = call();
  } while (result < 0 && errno == EINTR);
  return result;
}

// An open descriptor, closed in the end.
class Descriptor {
 public:
  explicit Descriptor(int value) : value_(value) {}
  ~Descriptor() {
    if (value_ >= 0) close(value_);
  }
  Descriptor(Descriptor&& other) noexcept : value_(std::exchange(other.value_, -1)) {}
  Descriptor(const Descriptor&) = delete;
  Descriptor& operator=(const Descriptor&) = delete;
  int get() const { return value_; }
  int release() { return std::exchange(value_, -1); }

 private:
  int value_;
};

class PosixReadFile : public ReadFile {
 public:
  PosixReadFile(std::string path, Descriptor descriptor)
      : path_(std::move(path)), descriptor_(std::move(descriptor)) {}
  ~PosixReadFile() override {
    // Standard input belongs to the process.
    if (descriptor_.get() == STDIN_FILENO) descriptor_.release();
  }

  absl::StatusOr<size_t> Read(char* buffer, size_t size) override {
    const ssize_t got = Retry([&] { return read(descriptor_.get(), buffer, size); });
    if (got < 0) return SystemError("read", path_, errno);
    return static_cast<size_t>(got);
  }

  absl::Status Seek(uint64_t offset) override {
    if (lseek(descriptor_.get(), static_cast<off_t>(offset), SEEK_SET) < 0) {
      return SystemError("seek in", path_, errno);
    }
    return absl::OkStatus();
  }

 private:
  std::string path_;
  Descriptor descriptor_;
};

class PosixWriteFile : public WriteFile {
 public:
  PosixWriteFile(std::string path, Descriptor descriptor)
      : path_(std::move(path)), descriptor_(std::move(descriptor)) {}

  absl::Status Append(std::string_view bytes) override {
    PW_RETURN_IF_ERROR(sync_failure_);
    while (!bytes.empty()) {
      const ssize_t put =
          Retry([&] { return write(descriptor_.get(), bytes.data(), bytes.size()); });
      if (put < 0) return SystemError("write to", path_, errno);
      bytes.remove_prefix(static_cast<size_t>(put));
      unsynced_ += static_cast<uint64_t>(put);
    }
    if (unsynced_ >= kSyncBytes) BeginSync();
    return absl::OkStatus();
  }

  void BeginSync() override {
    unsynced_ = 0;
    // Advice only: an error shows up in Sync().
    (void)sync_file_range(descriptor_.get(), 0, 0, SYNC_FILE_RANGE_WRITE);
  }

  absl::Status Sync() override {
    PW_RETURN_IF_ERROR(sync_failure_);
    // EINVAL: a device or pipe, which has nothing to sync.
    if (Retry([&] { return fsync(descriptor_.get()); }) != 0 && errno != EINVAL) {
      // The kernel may have dropped the unwritten pages: a second fsync would falsely succeed.
      sync_failure_ = SystemError("sync", path_, errno);
    }
    return sync_failure_;
  }

  absl::Status Close() override {
    // On Linux the descriptor is gone even where close() was interrupted.
    if (close(descriptor_.release()) != 0 && errno != EINTR) {
      return SystemError("close", path_, errno);
    }
    return sync_failure_;
  }

 private:
  // So much is written before the disk is told to begin with it.
  static constexpr uint64_t kSyncBytes = uint64_t{32} << 20;

  std::string path_;
  Descriptor descriptor_;
  uint64_t unsynced_ = 0;
  absl::Status sync_failure_;
};

class PosixScratchFile : public ScratchFile {
 public:
  PosixScratchFile(std::string path, Descriptor descriptor)
      : path_(std::move(path)), descriptor_(std::move(descriptor)) {}

  absl::Status WriteAt(uint64_t offset, std::string_view bytes) override {
    while (!bytes.empty()) {
      const ssize_t put = Retry([&] {
        return pwrite(descriptor_.get(), bytes.data(), bytes.size(), static_cast<off_t>(offset));
      });
      if (put < 0) return SystemError("write to", path_, errno);
      bytes.remove_prefix(static_cast<size_t>(put));
      offset += static_cast<uint64_t>(put);
    }
    return absl::OkStatus();
  }

  absl::Status ReadAt(uint64_t offset, char* buffer, size_t size) override {
    while (size > 0) {
      const ssize_t got =
          Retry([&] { return pread(descriptor_.get(), buffer, size, static_cast<off_t>(offset)); });
      if (got < 0) return SystemError("read", path_, errno);
      if (got == 0) {
        return absl::DataLossError(absl::StrCat("cannot read ", path_, ": it ends at byte ", offset,
                                                ", ", size, " bytes too early"));
      }
      buffer += got;
      size -= static_cast<size_t>(got);
      offset += static_cast<uint64_t>(got);
    }
    return absl::OkStatus();
  }

  int descriptor() const override { return descriptor_.get(); }

 private:
  std::string path_;
  Descriptor descriptor_;
};

constexpr mode_t kNewFileMode = 0666;  // less the umask

class PosixFileSystem : public FileSystem {
 public:
  absl::StatusOr<std::unique_ptr<ReadFile>> OpenRead(const std::string& path) override {
    if (path == "-") {
      return std::make_unique<PosixReadFile>("standard input", Descriptor(STDIN_FILENO));
    }
    Descriptor descriptor(Retry([&] { return open(path.c_str(), O_RDONLY | O_CLOEXEC); }));
    if (descriptor.get() < 0) return SystemError("open", path, errno);
    struct stat info {};
    if (fstat(descriptor.get(), &info) != 0) return SystemError("examine", path, errno);
    // open() takes a directory; only read() would tell.
    if (S_ISDIR(info.st_mode)) return SystemError("read", path, EISDIR);
    // Advice only: a failure changes nothing but speed.
    (void)posix_fadvise(descriptor.get(), 0, 0, POSIX_FADV_SEQUENTIAL);
    return std::make_unique<PosixReadFile>(path, std::move(descriptor));
  }

  absl::StatusOr<std::unique_ptr<WriteFile>> CreateWrite(const std::string& path) override {
    Descriptor descriptor(Retry([&] {
      return open(path.c_str(), O_WRONLY | O_CREAT | O_TRUNC | O_CLOEXEC, kNewFileMode);
    }));
    if (descriptor.get() < 0) return SystemError("create", path, errno);
    return std::make_unique<PosixWriteFile>(path, std::move(descriptor));
  }

  absl::StatusOr<std::unique_ptr<ScratchFile>> CreateScratch(const std::string& path) override {
    Descriptor descriptor(Retry(
        [&] { return open(path.c_str(), O_RDWR | O_CREAT | O_TRUNC | O_CLOEXEC, kNewFileMode); }));
    if (descriptor.get() < 0) return SystemError("create", path, errno);
    return std::make_unique<PosixScratchFile>(path, std::move(descriptor));
  }

  absl::StatusOr<FileInfo> Stat(const std::string& path) override {
    struct stat info {};
    if (stat(path.c_str(), &info) != 0) {
      if (errno == ENOENT || errno == ENOTDIR) return FileInfo{};
      return SystemError("examine", path, errno);
    }
    return FileInfo{.exists = true,
                    .is_directory = S_ISDIR(info.st_mode),
                    .size = static_cast<uint64_t>(info.st_size),
                    .is_regular = S_ISREG(info.st_mode)};
  }

  absl::Status MakeDirectories(const std::string& path) override {
    std::error_code error;
    std::filesystem::create_directories(path, error);
    if (error) return SystemError("make the folder", path, error.value());
    return absl::OkStatus();
  }

  absl::Status Rename(const std::string& from, const std::string& to) override {
    if (rename(from.c_str(), to.c_str()) != 0) {
      return SystemError(absl::StrCat("rename ", from, " to"), to, errno);
    }
    return absl::OkStatus();
  }

  absl::Status RemoveAll(const std::string& path) override {
    std::error_code error;
    std::filesystem::remove_all(path, error);
    if (error) return SystemError("remove", path, error.value());
    return absl::OkStatus();
  }

  absl::Status SyncFile(const std::string& path) override {
    const Descriptor descriptor(Retry([&] { return open(path.c_str(), O_RDONLY | O_CLOEXEC); }));
    if (descriptor.get() < 0) return SystemError("open", path, errno);
    if (Retry([&] { return fsync(descriptor.get()); }) != 0 && errno != EINVAL) {
      return SystemError("sync", path, errno);
    }
    return absl::OkStatus();
  }

  absl::Status SyncDirectory(const std::string& path) override {
    const Descriptor descriptor(
        Retry([&] { return open(path.c_str(), O_RDONLY | O_DIRECTORY | O_CLOEXEC); }));
    if (descriptor.get() < 0) return SystemError("open the folder", path, errno);
    // EINVAL: the file system keeps nothing of a folder to sync.
    if (Retry([&] { return fsync(descriptor.get()); }) != 0 && errno != EINVAL) {
      return SystemError("sync the folder", path, errno);
    }
    return absl::OkStatus();
  }

  absl::StatusOr<uint64_t> FreeBytes(const std::string& path) override {
    struct statvfs info {};
    if (Retry([&] { return statvfs(path.c_str(), &info); }) != 0) {
      return SystemError("ask for the free space at", path, errno);
    }
    return static_cast<uint64_t>(info.f_bavail) * info.f_frsize;
  }

  absl::StatusOr<std::vector<std::string>> ListFiles(const std::string& path) override {
    std::vector<std::string> names;
    std::error_code error;
    std::filesystem::recursive_directory_iterator entries(path, error);
    for (const std::filesystem::recursive_directory_iterator end; !error && entries != end;
         entries.increment(error)) {
      const auto status = entries->symlink_status(error);
      if (error) break;
      if (std::filesystem::is_regular_file(status)) {
        names.push_back(entries->path().lexically_relative(path).generic_string());
      }
    }
    if (error) return SystemError("list the folder", path, error.value());
    std::sort(names.begin(), names.end());
    return names;
  }
};

}  // namespace

FileSystem& FileSystem::Posix() {
  static PosixFileSystem* const kPosix = new PosixFileSystem;
  return *kPosix;
}

absl::StatusOr<std::string> ReadWhole(FileSystem& files, const std::string& path) {
  // What a file that is no regular one, or has grown since, is read in at a time.
  constexpr size_t kStep = size_t{64} << 10;
  PW_ASSIGN_OR_RETURN(const FileInfo info, files.Stat(path));
  PW_ASSIGN_OR_RETURN(const std::unique_ptr<ReadFile> file, files.OpenRead(path));
  std::string whole(static_cast<size_t>(info.size) + 1, '\0');
  size_t filled = 0;
  while (true) {
    if (filled == whole.size()) whole.resize(filled + std::max(kStep, filled));
    PW_ASSIGN_OR_RETURN(const size_t got, file->Read(whole.data() + filled, whole.size() - filled));
    if (got == 0) break;
    filled += got;
  }
  whole.resize(filled);
  return whole;
}

std::string PassingPath(std::string_view prefix) {
  static std::atomic<uint64_t> calls{0};
  return absl::StrCat(absl::string_view(prefix.data(), prefix.size()), "-", getpid(), "-", ++calls);
}

}  // namespace phraseweld
