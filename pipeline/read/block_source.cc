#include <algorithm>
#include <utility>

#include "base/status.h"
#include "files/file_system.h"
#include "files/streams.h"
#include "read/corpus.h"
#include "read/cutter.h"
#include "read/lines.h"

namespace phraseweld {

// A block is filled by large reads straight into its own bytes, up to what it aims at and some look
// ahead. Then the place to cut it is looked for, backwards from what it aims at; where there is
// none, the block grows step by step and the place is looked for forwards. What follows the cut, a
// small part, is copied to the next block. The cut depends on the bytes alone: before a place is
// judged, all that the judgement looks at has been read.
class BlockSource::Impl {
 public:
  Impl(std::vector<InputFile> inputs, const ReadOptions& options)
      : inputs_(std::move(inputs)),
        block_bytes_(std::max<size_t>(options.block_bytes, 1)),
        cutter_(options),
        digests_(inputs_.size()) {}

  absl::StatusOr<bool> Next(Block* block) {
    PW_RETURN_IF_ERROR(failure_);
    absl::StatusOr<bool> more = Advance(block);
    failure_ = more.status();
    return more;
  }

  const std::vector<InputDigest>& digests() const { return digests_; }

 private:
  absl::StatusOr<bool> Advance(Block* block) {
    block->decoded.clear();
    block->pieces.clear();
    block->documents.clear();
    block->bad_lines = 0;
    if (stream_ == nullptr) {
      if (file_ == inputs_.size()) {
        block->bytes.clear();
        return false;
      }
      PW_ASSIGN_OR_RETURN(stream_, InputStream::Open(FileSystem::Posix(), inputs_[file_].path));
      offset_ = 0;
      line_ = 1;
      passage_begin_ = 0;
      inside_passage_ = false;
      input_ended_ = false;
    }
    std::string& bytes = block->bytes;
    PW_ASSIGN_OR_RETURN(const Cut cut, FillAndCut(&bytes));

    block->index = index_++;
    block->file = static_cast<uint32_t>(file_);
    block->file_offset = offset_;
    block->first_line = line_;
    block->ends_file = cut.at == 0;
    block->continues_document = inside_passage_;
    block->document_goes_on = cut.inside_passage;
    block->passage_offset = inside_passage_ ? offset_ - passage_begin_ : 0;

    if (cut.at == 0) {
      digests_[file_] = {.stored_bytes = stream_->stored_bytes(),
                         .text_bytes = offset_ + bytes.size(),
                         .stored_hash = stream_->stored_hash()};
      stream_.reset();
      ++file_;
      return true;
    }
    if (cut.inside_passage) {
      bool earlier = false;
      const size_t begin = cutter_.PassageBegin(bytes, cut.at, &earlier);
      if (!(earlier && inside_passage_)) passage_begin_ = offset_ + begin;
    }
    inside_passage_ = cut.inside_passage;
    tail_.assign(bytes, cut.at, std::string::npos);
    bytes.resize(cut.at);
    offset_ += bytes.size();
    line_ += CountLineFeeds(bytes);
    return true;
  }

  // Fills *bytes with the tail and more, and finds where to cut them; Cut::at is 0 where they are
  // all that is left of the input.
  absl::StatusOr<Cut> FillAndCut(std::string* bytes) {
    const size_t aim = block_bytes_ + kLookAhead;
    bytes->reserve(std::max(aim, tail_.size()));
    size_t filled = tail_.size();
    if (bytes->size() < filled) bytes->resize(filled);
    std::copy(tail_.begin(), tail_.end(), bytes->begin());
    tail_.clear();
    PW_RETURN_IF_ERROR(Fill(bytes, filled, aim));
    if (input_ended_ && bytes->size() <= block_bytes_) return Cut{};
    Cut cut = cutter_.FindLast(*bytes, block_bytes_);
    size_t next = block_bytes_ + 1;
    while (cut.at == 0) {
      const bool input_ends = input_ended_;
      cut = cutter_.FindFirst(*bytes, next, input_ends, &next);
      if (cut.at > 0 || input_ends) break;
      PW_RETURN_IF_ERROR(Fill(bytes, bytes->size(), bytes->size() + aim));
    }
    return cut;
  }

  // Reads until *bytes, of which `filled` are filled, has `wanted`, or the input ends.
  absl::Status Fill(std::string* bytes, size_t filled, size_t wanted) {
    // A string's new bytes are zeroed first. So that many small inputs do not pay for large blocks,
    // only what the string has, or this much, is filled before more is asked for.
    constexpr size_t kFirstRead = size_t{64} << 10;
    size_t room = std::min(wanted, std::max(bytes->size(), filled + kFirstRead));
    while (filled < wanted && !input_ended_) {
      if (filled == room) room = wanted;
      bytes->resize(std::max(room, filled));
      PW_ASSIGN_OR_RETURN(const size_t got, stream_->Read(bytes->data() + filled, room - filled));
      if (got == 0) input_ended_ = true;
      filled += got;
    }
    bytes->resize(filled);
    return absl::OkStatus();
  }

  const std::vector<InputFile> inputs_;
  const size_t block_bytes_;
  const Cutter cutter_;
  std::vector<InputDigest> digests_;
  absl::Status failure_;
  uint64_t index_ = 0;
  size_t file_ = 0;
  std::unique_ptr<InputStream> stream_;  // of inputs_[file_], once it is open

  // Of the input that is open.
  bool input_ended_ = false;
  uint64_t offset_ = 0;  // of the next block
  uint64_t line_ = 1;
  bool inside_passage_ = false;
  uint64_t passage_begin_ = 0;  // offset of the passage that the next block goes on with
  std::string tail_;            // read already
};

BlockSource::BlockSource(std::vector<InputFile> inputs, const ReadOptions& options)
    : impl_(std::make_unique<Impl>(std::move(inputs), options)) {}

BlockSource::~BlockSource() = default;

absl::StatusOr<bool> BlockSource::Next(Block* block) { return impl_->Next(block); }

const std::vector<InputDigest>& BlockSource::digests() const { return impl_->digests(); }

}  // namespace phraseweld
