#ifndef PHRASEWELD_TESTS_SUPPORT_FAULTY_FILE_SYSTEM_H_
#define PHRASEWELD_TESTS_SUPPORT_FAULTY_FILE_SYSTEM_H_

#include <memory>
#include <string>
#include <utility>

#include "base/status.h"
#include "files/file_system.h"

namespace phraseweld {

// Fails one operation, the one numbered `failing` from 0, and forwards all others. RemoveAll is
// never failed or counted: what cleans up after a failure must not be the failure.
class FaultyFileSystem : public ForwardingFileSystem {
 public:
  explicit FaultyFileSystem(int failing, FileSystem& target = FileSystem::Posix())
      : ForwardingFileSystem(target), failing_(failing) {}

  // Whether the operation to fail has come.
  bool failed() const { return operations_ > failing_; }

  absl::Status Count(const std::string& what) {
    if (operations_++ == failing_) return absl::UnavailableError("injected: " + what);
    return absl::OkStatus();
  }

  absl::StatusOr<std::unique_ptr<ReadFile>> OpenRead(const std::string& path) override {
    PW_RETURN_IF_ERROR(Count("open " + path));
    PW_ASSIGN_OR_RETURN(std::unique_ptr<ReadFile> file, target_.OpenRead(path));
    return std::make_unique<FaultyReadFile>(*this, std::move(file));
  }
  absl::StatusOr<std::unique_ptr<WriteFile>> CreateWrite(const std::string& path) override {
    PW_RETURN_IF_ERROR(Count("create " + path));
    PW_ASSIGN_OR_RETURN(std::unique_ptr<WriteFile> file, target_.CreateWrite(path));
    return std::make_unique<FaultyWriteFile>(*this, std::move(file));
  }
  absl::StatusOr<std::unique_ptr<ScratchFile>> CreateScratch(const std::string& path) override {
    PW_RETURN_IF_ERROR(Count("create " + path));
    return target_.CreateScratch(path);
  }
  absl::StatusOr<FileInfo> Stat(const std::string& path) override {
    PW_RETURN_IF_ERROR(Count("examine " + path));
    return target_.Stat(path);
  }
  absl::Status MakeDirectories(const std::string& path) override {
    PW_RETURN_IF_ERROR(Count("make " + path));
    return target_.MakeDirectories(path);
  }
  absl::Status Rename(const std::string& from, const std::string& to) override {
    PW_RETURN_IF_ERROR(Count("rename " + from));
    return target_.Rename(from, to);
  }
  absl::Status SyncFile(const std::string& path) override {
    PW_RETURN_IF_ERROR(Count("sync " + path));
    return target_.SyncFile(path);
  }
  absl::Status SyncDirectory(const std::string& path) override {
    PW_RETURN_IF_ERROR(Count("sync folder " + path));
    return target_.SyncDirectory(path);
  }

 private:
  class FaultyReadFile : public ReadFile {
   public:
    FaultyReadFile(FaultyFileSystem& faults, std::unique_ptr<ReadFile> file)
        : faults_(faults), file_(std::move(file)) {}
    absl::StatusOr<size_t> Read(char* buffer, size_t size) override {
      PW_RETURN_IF_ERROR(faults_.Count("read"));
      return file_->Read(buffer, size);
    }

    absl::Status Seek(uint64_t offset) override { return file_->Seek(offset); }

   private:
    FaultyFileSystem& faults_;
    std::unique_ptr<ReadFile> file_;
  };

  class FaultyWriteFile : public WriteFile {
   public:
    FaultyWriteFile(FaultyFileSystem& faults, std::unique_ptr<WriteFile> file)
        : faults_(faults), file_(std::move(file)) {}
    absl::Status Append(std::string_view bytes) override {
      PW_RETURN_IF_ERROR(faults_.Count("append"));
      return file_->Append(bytes);
    }
    absl::Status Sync() override {
      PW_RETURN_IF_ERROR(faults_.Count("sync"));
      return file_->Sync();
    }
    void BeginSync() override { file_->BeginSync(); }
    absl::Status Close() override {
      PW_RETURN_IF_ERROR(faults_.Count("close"));
      return file_->Close();
    }

   private:
    FaultyFileSystem& faults_;
    std::unique_ptr<WriteFile> file_;
  };

  const int failing_;
  int operations_ = 0;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_TESTS_SUPPORT_FAULTY_FILE_SYSTEM_H_
