#include "deliver/joints.h"

#include <algorithm>
#include <vector>

#include "absl/strings/str_cat.h"
#include "base/status.h"

namespace phraseweld {
namespace {

constexpr std::string_view kMagic = "PWJ1";
constexpr uint64_t kSpace = 0, kOther = 1, kEnd = 2;
constexpr size_t kFlushBytes = size_t{1} << 18;
constexpr size_t kReadBytes = size_t{1} << 18;
constexpr uint64_t kMostGap = uint64_t{1} << 31;  // a longer one is a damaged file

void AppendVarint(std::string* out, uint64_t value) {
  for (; value >= 0x80; value >>= 7) *out += static_cast<char>(value | 0x80);
  *out += static_cast<char>(value);
}

void AppendHash(std::string* out, const Hash128& hash) {
  for (uint64_t half : {hash.high, hash.low}) {
    for (int shift = 56; shift >= 0; shift -= 8) *out += static_cast<char>(half >> shift);
  }
}

// Pulls bytes out of an input stream through a buffer.
class Puller {
 public:
  explicit Puller(InputStream* stream) : stream_(stream), buffer_(kReadBytes) {}

  // What is buffered next, at least a byte; empty at the end.
  absl::StatusOr<std::string_view> Peek() {
    if (at_ == end_) {
      at_ = 0;
      PW_ASSIGN_OR_RETURN(end_, stream_->Read(buffer_.data(), buffer_.size()));
    }
    return std::string_view(buffer_.data() + at_, end_ - at_);
  }
  void Take(size_t bytes) { at_ += bytes; }

  absl::StatusOr<uint64_t> Varint() {
    uint64_t value = 0;
    for (int shift = 0; shift < 64; shift += 7) {
      PW_ASSIGN_OR_RETURN(std::string_view next, Peek());
      if (next.empty()) return absl::DataLossError("it ends in the middle of a record");
      const auto byte = static_cast<unsigned char>(next[0]);
      Take(1);
      value |= uint64_t{byte & 0x7Fu} << shift;
      if (byte < 0x80) return value;
    }
    return absl::DataLossError("it holds a number of more than 64 bits");
  }

  // Hands exactly `bytes` bytes on.
  absl::Status Pass(uint64_t bytes, const std::function<absl::Status(std::string_view)>& take) {
    while (bytes > 0) {
      PW_ASSIGN_OR_RETURN(std::string_view next, Peek());
      if (next.empty()) return absl::DataLossError("it ends too early");
      next = next.substr(0, static_cast<size_t>(std::min<uint64_t>(bytes, next.size())));
      PW_RETURN_IF_ERROR(take(next));
      Take(next.size());
      bytes -= next.size();
    }
    return absl::OkStatus();
  }

  absl::StatusOr<std::string> Bytes(uint64_t bytes) {
    std::string out;
    PW_RETURN_IF_ERROR(Pass(bytes, [&](std::string_view piece) {
      out += piece;
      return absl::OkStatus();
    }));
    return out;
  }

 private:
  InputStream* stream_;
  std::vector<char> buffer_;
  size_t at_ = 0, end_ = 0;
};

absl::Status InFile(const std::string& path, const absl::Status& status) {
  if (status.ok()) return status;
  return absl::Status(status.code(), absl::StrCat(path, ": ", status.message()));
}

// The work of RestoreFile with both files open; errors do not name them yet.
absl::StatusOr<OutputDigest> Undo(const std::string& path, const std::string& joints_path,
                                  Puller* rewritten, Puller* joints,
                                  const std::function<absl::Status(std::string_view)>& append) {
  Hasher hasher;
  uint64_t size = 0;
  const auto emit = [&](std::string_view bytes) {
    hasher.Update(bytes);
    size += bytes.size();
    return append(bytes);
  };
  const auto joint_error = [&](const absl::Status& status) { return InFile(joints_path, status); };
  auto magic = joints->Bytes(kMagic.size());
  if (!magic.ok()) return joint_error(magic.status());
  if (*magic != kMagic) {
    return joint_error(absl::DataLossError("this is no file of joints (it does not begin PWJ1)"));
  }
  auto joiner_size = joints->Varint();
  if (!joiner_size.ok()) return joint_error(joiner_size.status());
  if (*joiner_size > kMostGap) return joint_error(absl::DataLossError("the joiner is too long"));
  auto joiner = joints->Bytes(*joiner_size);
  if (!joiner.ok()) return joint_error(joiner.status());
  for (uint64_t kind = kSpace; kind != kEnd;) {
    auto record = joints->Varint();
    if (!record.ok()) return joint_error(record.status());
    kind = *record & 3;
    PW_RETURN_IF_ERROR(InFile(path, rewritten->Pass(*record >> 2, emit)));
    if (kind == kEnd) break;
    auto found = rewritten->Bytes(joiner->size());
    if (!found.ok()) return InFile(path, found.status());
    if (*found != *joiner) {
      return absl::DataLossError(absl::StrCat(path, ": no joiner where ", joints_path,
                                              " has one, at byte ", size, " of the source"));
    }
    if (kind == kSpace) {
      PW_RETURN_IF_ERROR(emit(" "));
    } else if (kind == kOther) {
      auto length = joints->Varint();
      if (!length.ok()) return joint_error(length.status());
      if (*length > kMostGap) return joint_error(absl::DataLossError("a gap is too long"));
      PW_RETURN_IF_ERROR(joint_error(joints->Pass(*length, emit)));
    } else {
      return joint_error(absl::DataLossError("it holds a record of no known kind"));
    }
  }
  PW_ASSIGN_OR_RETURN(std::string_view rest, rewritten->Peek());
  if (!rest.empty()) {
    return absl::DataLossError(
        absl::StrCat(path, ": it goes on after the end that ", joints_path, " knows of"));
  }
  auto source_size = joints->Varint();
  if (!source_size.ok()) return joint_error(source_size.status());
  auto source_hash = joints->Bytes(16);
  if (!source_hash.ok()) return joint_error(source_hash.status());
  std::string hash;
  AppendHash(&hash, hasher.Value());
  if (*source_size != size || *source_hash != hash) {
    return absl::DataLossError(
        absl::StrCat(path, ": the restored text is not the source: ", size, " bytes with XXH3-128 ",
                     ToHex(hasher.Value()), ", expected ", *source_size,
                     " bytes; the rewritten file was changed after the run"));
  }
  return OutputDigest{size, hasher.Value()};
}

}  // namespace

std::string JointsPath(std::string_view rewritten_path) {
  if (rewritten_path.size() > 4 && rewritten_path.substr(rewritten_path.size() - 4) == ".zst") {
    rewritten_path.remove_suffix(4);
  }
  return std::string(rewritten_path) + ".joints.zst";
}

absl::StatusOr<std::unique_ptr<JointsWriter>> JointsWriter::Create(FileSystem& files,
                                                                   const std::string& path,
                                                                   std::string_view joiner) {
  PW_ASSIGN_OR_RETURN(std::unique_ptr<OutputStream> out,
                      OutputStream::Create(files, path, true, OnDisk::kWhenCommitted));
  std::unique_ptr<JointsWriter> writer(new JointsWriter(std::move(out)));
  writer->buffer_ = kMagic;
  AppendVarint(&writer->buffer_, joiner.size());
  writer->buffer_ += joiner;
  return writer;
}

void JointsWriter::FlushIfLarge() {
  if (buffer_.size() < kFlushBytes) return;
  if (failure_.ok()) failure_ = out_->Append(buffer_);
  buffer_.clear();
}

void JointsWriter::Joint(std::string_view gap) {
  if (gap == " ") {
    AppendVarint(&buffer_, distance_ << 2 | kSpace);
  } else {
    AppendVarint(&buffer_, distance_ << 2 | kOther);
    AppendVarint(&buffer_, gap.size());
    buffer_ += gap;
  }
  distance_ = 0;
  FlushIfLarge();
}

void JointsWriter::Source(std::string_view bytes) {
  source_hash_.Update(bytes);
  source_bytes_ += bytes.size();
}

absl::StatusOr<OutputDigest> JointsWriter::Finish() {
  AppendVarint(&buffer_, distance_ << 2 | kEnd);
  AppendVarint(&buffer_, source_bytes_);
  AppendHash(&buffer_, source_hash_.Value());
  if (failure_.ok()) failure_ = out_->Append(buffer_);
  PW_RETURN_IF_ERROR(failure_);
  return out_->Finish();
}

absl::StatusOr<OutputDigest> RestoreFile(
    FileSystem& files, const std::string& path,
    const std::function<absl::Status(std::string_view)>& append) {
  const std::string joints_path = JointsPath(path);
  PW_ASSIGN_OR_RETURN(std::unique_ptr<InputStream> rewritten, InputStream::Open(files, path));
  PW_ASSIGN_OR_RETURN(std::unique_ptr<InputStream> joints, InputStream::Open(files, joints_path));
  Puller from(rewritten.get()), from_joints(joints.get());
  return Undo(path, joints_path, &from, &from_joints, append);
}

}  // namespace phraseweld
