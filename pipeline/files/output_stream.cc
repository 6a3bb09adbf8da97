#include <zstd.h>

#include <algorithm>
#include <utility>
#include <vector>

#include "absl/strings/str_cat.h"
#include "base/status.h"
#include "files/streams.h"

namespace phraseweld {
namespace {

// Bytes gathered before they go on. Compressed bytes must not depend on how the caller cut its
// calls, so zstd always gets them in pieces of this size.
constexpr size_t kPieceBytes = size_t{256} << 10;
constexpr int kCompressionLevel = 3;

std::string FolderOf(const std::string& path) {
  const size_t slash = path.rfind('/');
  if (slash == std::string::npos) return ".";
  return slash == 0 ? "/" : path.substr(0, slash);
}

// Where the stored bytes go: PATH.part, which becomes PATH, or PATH itself.
class Target {
 public:
  Target(FileSystem& files, std::string path, bool in_place, OnDisk on_disk)
      : files_(files),
        sync_(on_disk == OnDisk::kWhenFinished),
        path_(std::move(path)),
        written_path_(in_place ? path_ : path_ + ".part"),
        named_(in_place) {}

  ~Target() {
    file_.reset();
    // Best effort: the error that left the file unfinished has been told.
    if (created_ && !named_) files_.RemoveAll(written_path_).IgnoreError();
  }

  absl::Status Open() {
    PW_ASSIGN_OR_RETURN(file_, files_.CreateWrite(written_path_));
    created_ = true;
    return absl::OkStatus();
  }

  absl::Status Append(std::string_view bytes) {
    if (bytes.empty()) return absl::OkStatus();
    hasher_.Update(bytes);
    digest_.bytes += bytes.size();
    return file_->Append(bytes);
  }

  absl::StatusOr<OutputDigest> Finish() {
    if (sync_) PW_RETURN_IF_ERROR(file_->Sync());
    if (!sync_) file_->BeginSync();
    PW_RETURN_IF_ERROR(file_->Close());
    file_.reset();
    if (!named_) {
      PW_RETURN_IF_ERROR(files_.Rename(written_path_, path_));
      named_ = true;
      if (sync_) PW_RETURN_IF_ERROR(files_.SyncDirectory(FolderOf(path_)));
    }
    digest_.hash = hasher_.Value();
    return digest_;
  }

  const std::string& path() const { return path_; }

 private:
  FileSystem& files_;
  const bool sync_;
  std::string path_;
  std::string written_path_;
  bool named_;
  bool created_ = false;
  std::unique_ptr<WriteFile> file_;
  Hasher hasher_;
  OutputDigest digest_;
};

// Gathers what is appended into pieces and keeps the first error.
class GatheringOutput : public OutputStream {
 public:
  explicit GatheringOutput(std::unique_ptr<Target> target) : target_(std::move(target)) {
    gathered_.reserve(kPieceBytes);
  }

  absl::Status Append(std::string_view bytes) final {
    PW_RETURN_IF_ERROR(failure_);
    while (gathered_.size() + bytes.size() >= kPieceBytes) {
      if (gathered_.empty()) {
        failure_ = PutPiece(bytes.substr(0, kPieceBytes));
        bytes.remove_prefix(kPieceBytes);
      } else {
        const size_t missing = kPieceBytes - gathered_.size();
        gathered_.append(bytes.substr(0, missing));
        bytes.remove_prefix(missing);
        failure_ = PutPiece(gathered_);
        gathered_.clear();
      }
      PW_RETURN_IF_ERROR(failure_);
    }
    gathered_.append(bytes);
    return absl::OkStatus();
  }

  absl::StatusOr<OutputDigest> Finish() final {
    PW_RETURN_IF_ERROR(failure_);
    failure_ = PutLast(gathered_);
    PW_RETURN_IF_ERROR(failure_);
    absl::StatusOr<OutputDigest> digest = target_->Finish();
    failure_ =
        digest.ok()
            ? absl::FailedPreconditionError(absl::StrCat(target_->path(), " is finished already"))
            : digest.status();
    return digest;
  }

 protected:
  // A piece of kPieceBytes.
  virtual absl::Status PutPiece(std::string_view piece) = 0;
  // What is left, maybe nothing; and the end of the stream.
  virtual absl::Status PutLast(std::string_view piece) = 0;
  Target& target() { return *target_; }

 private:
  std::unique_ptr<Target> target_;
  std::string gathered_;
  absl::Status failure_;
};

class PlainOutput : public GatheringOutput {
 public:
  using GatheringOutput::GatheringOutput;

 protected:
  absl::Status PutPiece(std::string_view piece) override { return target().Append(piece); }
  absl::Status PutLast(std::string_view piece) override { return target().Append(piece); }
};

class ZstdOutput : public GatheringOutput {
 public:
  explicit ZstdOutput(std::unique_ptr<Target> target)
      : GatheringOutput(std::move(target)),
        context_(ZSTD_createCCtx()),
        buffer_(ZSTD_CStreamOutSize()) {
    ZSTD_CCtx_setParameter(context_, ZSTD_c_compressionLevel, kCompressionLevel);
    ZSTD_CCtx_setParameter(context_, ZSTD_c_checksumFlag, 1);
  }
  ~ZstdOutput() override { ZSTD_freeCCtx(context_); }

 protected:
  absl::Status PutPiece(std::string_view piece) override {
    return Compress(piece, ZSTD_e_continue);
  }
  absl::Status PutLast(std::string_view piece) override {
    PW_RETURN_IF_ERROR(Compress(piece, ZSTD_e_continue));
    return Compress({}, ZSTD_e_end);
  }

 private:
  absl::Status Compress(std::string_view piece, ZSTD_EndDirective directive) {
    ZSTD_inBuffer input{piece.data(), piece.size(), 0};
    size_t remaining = 0;
    do {
      ZSTD_outBuffer output{buffer_.data(), buffer_.size(), 0};
      remaining = ZSTD_compressStream2(context_, &output, &input, directive);
      if (ZSTD_isError(remaining)) {
        return absl::InternalError(
            absl::StrCat("cannot compress ", target().path(), ": ", ZSTD_getErrorName(remaining)));
      }
      PW_RETURN_IF_ERROR(target().Append({buffer_.data(), output.pos}));
    } while (input.pos < input.size || (directive == ZSTD_e_end && remaining > 0));
    return absl::OkStatus();
  }

  ZSTD_CCtx* context_;
  std::vector<char> buffer_;
};

}  // namespace

absl::StatusOr<std::unique_ptr<OutputStream>> OutputStream::Create(FileSystem& files,
                                                                   const std::string& path,
                                                                   bool compress_zstd,
                                                                   OnDisk on_disk) {
  PW_ASSIGN_OR_RETURN(const FileInfo info, files.Stat(path));
  if (info.is_directory) {
    return absl::FailedPreconditionError(
        absl::StrCat("cannot write ", path, ": it is a folder; choose another name"));
  }
  auto target = std::make_unique<Target>(files, path, info.exists && !info.is_regular, on_disk);
  PW_RETURN_IF_ERROR(target->Open());
  if (compress_zstd) return std::make_unique<ZstdOutput>(std::move(target));
  return std::make_unique<PlainOutput>(std::move(target));
}

}  // namespace phraseweld
