#include "files/compressed_input.h"

#include <zlib.h>
#include <zstd.h>
#include <zstd_errors.h>

#include <algorithm>
#include <limits>
#include <string_view>
#include <utility>
#include <vector>

#include "absl/strings/str_cat.h"
#include "base/status.h"
#include "files/stored_input.h"

namespace phraseweld {
namespace {

constexpr size_t kStoredBufferBytes = size_t{256} << 10;

// What one step of a decompressor did.
struct Step {
  size_t consumed = 0;
  size_t produced = 0;
  bool part_ended = false;  // a frame or member came to its end
};

// What zstd and gzip have in common: parts (frames, members) one after another, of which the last
// must be whole.
class DecompressingInput : public InputStream {
 public:
  // `part` is the format's own word for its parts.
  DecompressingInput(const std::string& path, std::unique_ptr<ReadFile> file, const char* part)
      : stored_(path, std::move(file)), part_(part), buffer_(kStoredBufferBytes) {}

  absl::StatusOr<size_t> Read(char* buffer, size_t size) override {
    while (true) {
      // The decompressor may hold back bytes that did not fit before: it is asked for these first.
      if (pending_.empty() && !output_was_full_) {
        PW_ASSIGN_OR_RETURN(const size_t got, stored_.Read(buffer_.data(), buffer_.size()));
        if (got == 0) {
          PW_RETURN_IF_ERROR(CheckEnd());
          return size_t{0};
        }
        pending_ = {buffer_.data(), got};
      }
      PW_ASSIGN_OR_RETURN(const Step step, Decompress(pending_, buffer, size));
      pending_.remove_prefix(step.consumed);
      output_was_full_ = step.produced == size && !step.part_ended;
      if (step.part_ended) {
        inside_part_ = false;
        part_seen_ = true;
      } else if (step.consumed > 0) {
        inside_part_ = true;
      }
      if (step.produced > 0) return step.produced;
    }
  }

  uint64_t stored_bytes() const override { return stored_.bytes(); }
  Hash128 stored_hash() const override { return stored_.hash(); }

 protected:
  virtual absl::StatusOr<Step> Decompress(std::string_view from, char* buffer, size_t size) = 0;

  absl::Status Damaged(const char* reason, size_t consumed) const {
    return absl::DataLossError(absl::StrCat(stored_.path(), " is damaged: ", reason, " at byte ",
                                            stored_.bytes() - pending_.size() + consumed,
                                            " of the compressed file; make it anew"));
  }

 private:
  absl::Status CheckEnd() const {
    if (inside_part_) {
      return absl::DataLossError(absl::StrCat(stored_.path(), " is cut: it ends at byte ",
                                              stored_.bytes(), ", inside a ", part_,
                                              " of the compressed file; fetch or make it anew"));
    }
    if (!part_seen_) {
      return absl::DataLossError(absl::StrCat(stored_.path(), " is cut: it is empty, with no ",
                                              part_, " in it; fetch or make it anew"));
    }
    return absl::OkStatus();
  }

  StoredInput stored_;
  const char* part_;
  std::vector<char> buffer_;
  std::string_view pending_;  // of buffer_, not decompressed yet
  bool output_was_full_ = false;
  bool inside_part_ = false;
  bool part_seen_ = false;
};

class ZstdInput : public DecompressingInput {
 public:
  ZstdInput(const std::string& path, std::unique_ptr<ReadFile> file)
      : DecompressingInput(path, std::move(file), "frame"), context_(ZSTD_createDCtx()) {}
  ~ZstdInput() override { ZSTD_freeDCtx(context_); }

 protected:
  absl::StatusOr<Step> Decompress(std::string_view from, char* buffer, size_t size) override {
    ZSTD_inBuffer input{from.data(), from.size(), 0};
    ZSTD_outBuffer output{buffer, size, 0};
    const size_t result = ZSTD_decompressStream(context_, &output, &input);
    if (ZSTD_isError(result)) {
      if (ZSTD_getErrorCode(result) == ZSTD_error_frameParameter_windowTooLarge) {
        return Damaged("a frame wants a window of more than 128 MiB (compress without --long)",
                       input.pos);
      }
      return Damaged(ZSTD_getErrorName(result), input.pos);
    }
    return Step{.consumed = input.pos, .produced = output.pos, .part_ended = result == 0};
  }

 private:
  ZSTD_DCtx* context_;
};

class GzipInput : public DecompressingInput {
 public:
  GzipInput(const std::string& path, std::unique_ptr<ReadFile> file)
      : DecompressingInput(path, std::move(file), "member") {}
  ~GzipInput() override { inflateEnd(&stream_); }

  absl::Status Init() {
    constexpr int kGzipOnly = 16;  // added to the window's bits: a gzip header and no other
    if (inflateInit2(&stream_, MAX_WBITS + kGzipOnly) != Z_OK) {
      return absl::ResourceExhaustedError("no memory to decompress with");
    }
    return absl::OkStatus();
  }

 protected:
  absl::StatusOr<Step> Decompress(std::string_view from, char* buffer, size_t size) override {
    if (member_ended_) {
      member_ended_ = false;
      inflateReset(&stream_);
    }
    // zlib counts in 32 bits.
    const uInt room = static_cast<uInt>(std::min<size_t>(size, std::numeric_limits<uInt>::max()));
    stream_.next_in = reinterpret_cast<Bytef*>(const_cast<char*>(from.data()));
    stream_.avail_in = static_cast<uInt>(from.size());
    stream_.next_out = reinterpret_cast<Bytef*>(buffer);
    stream_.avail_out = room;
    const int result = inflate(&stream_, Z_NO_FLUSH);
    const size_t consumed = from.size() - stream_.avail_in;
    // Z_BUF_ERROR only says that there was nothing to do.
    if (result != Z_OK && result != Z_STREAM_END && result != Z_BUF_ERROR) {
      return Damaged(stream_.msg != nullptr ? stream_.msg : zError(result), consumed);
    }
    member_ended_ = result == Z_STREAM_END;
    return Step{
        .consumed = consumed, .produced = room - stream_.avail_out, .part_ended = member_ended_};
  }

 private:
  z_stream stream_{};
  bool member_ended_ = false;
};

}  // namespace

absl::StatusOr<std::unique_ptr<InputStream>> OpenZstdInput(const std::string& path,
                                                           std::unique_ptr<ReadFile> file) {
  return std::make_unique<ZstdInput>(path, std::move(file));
}

absl::StatusOr<std::unique_ptr<InputStream>> OpenGzipInput(const std::string& path,
                                                           std::unique_ptr<ReadFile> file) {
  auto input = std::make_unique<GzipInput>(path, std::move(file));
  PW_RETURN_IF_ERROR(input->Init());
  return input;
}

}  // namespace phraseweld
