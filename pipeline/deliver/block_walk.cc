#include "deliver/block_walk.h"

#include <algorithm>

#include "absl/strings/str_cat.h"
#include "base/json.h"
#include "base/status.h"

namespace phraseweld {
namespace {

absl::Status Changed() {
  return absl::AbortedError(
      "an input changed while the run was reading it (its words are not those of the first "
      "reading); run again when the inputs are still");
}

std::string_view WordOf(const WalkPiece& piece, size_t i) {
  return piece.text.substr(piece.words[i].begin, piece.words[i].end - piece.words[i].begin);
}

std::string_view GapBefore(const WalkPiece& piece, size_t i) {
  const uint32_t begin = piece.words[i - 1].end;
  return piece.text.substr(begin, piece.words[i].begin - begin);
}

}  // namespace

std::string_view SurfaceGap(std::string_view gap) {
  if (gap.empty() || gap == "-" || gap == "\xE2\x80\x90" || gap == "\xE2\x80\x91") return gap;
  return " ";
}

BlockWalk::BlockWalk(const WalkOptions& options, const Entry* stream, uint64_t size, uint64_t begin,
                     uint64_t end, std::string_view bytes, BlockOutput* output)
    : options_(options),
      stream_(stream),
      size_(size),
      end_(end),
      at_(begin),
      bytes_(bytes),
      output_(output) {
  if (options_.wanted != nullptr) {
    wanted_ = static_cast<size_t>(
        std::lower_bound(options_.wanted->begin(), options_.wanted->end(), begin) -
        options_.wanted->begin());
  }
}

bool BlockWalk::DocumentHasWordsBefore() const {
  for (uint64_t at = at_; at > 0 && stream_[at - 1] != kDocumentEnd; --at) {
    if (!IsMark(stream_[at - 1])) return true;
  }
  return false;
}

absl::Status BlockWalk::Piece(const WalkPiece& piece) {
  if (options_.words) document_has_words_ = !piece.begins_document && DocumentHasWordsBefore();
  if (options_.spans) {
    output_->spans.push_back(
        {"", piece.document, piece.field, piece.begins_passage, piece.ends_passage});
  }
  for (size_t i = 0; i < piece.words.size(); ++i) {
    if (!in_token_ && !options_.words) {
      i = PassWords(i, piece.words.size());
      if (i == piece.words.size()) break;
    }
    while (at_ < end_ && stream_[at_] == kBreak) ++at_;
    if (at_ >= end_ || IsMark(stream_[at_])) return Changed();
    const Entry entry = stream_[at_];
    if (IsToken(entry)) {
      if (in_token_) EndToken(piece, i - 1, false);
      BeginToken(entry, at_, piece, i);
    } else if (i == 0) {
      if (piece.begins_passage) return Changed();
      BeginToken(entry, at_, piece, i);
    } else {
      Join(piece, piece.words[i - 1].end, piece.words[i].begin);
      token_is_plain_ = token_is_plain_ && SurfaceGap(GapBefore(piece, i)) == " " &&
                        Surfaces::IsPlain(WordOf(piece, i));
    }
    if (options_.wanted != nullptr && wanted_ < options_.wanted->size() &&
        (*options_.wanted)[wanted_] == at_) {
      Find(piece, piece.words[i]);
    }
    ++at_;
  }
  if (in_token_) {
    const size_t last = piece.words.size() - 1;
    const bool goes_on = !piece.ends_passage && at_ < size_ && IsInside(stream_[at_]);
    if (goes_on) Join(piece, piece.words[last].end, piece.text.size());
    EndToken(piece, last, goes_on);
  }
  while (at_ < end_ && stream_[at_] == kBreak) ++at_;
  if (!piece.ends_passage) return absl::OkStatus();
  return Expect(piece.ends_document ? kDocumentEnd : kPassageEnd);
}

size_t BlockWalk::PassWords(size_t word, size_t words) {
  uint64_t end = end_;
  if (options_.wanted != nullptr && wanted_ < options_.wanted->size()) {
    end = std::min(end, (*options_.wanted)[wanted_]);
  }
  const uint32_t word_types = options_.types->word_types();
  // Breaks are as common as they are hard to foretell, hence no branch for them.
  for (; word < words && at_ < end; ++at_) {
    const Entry entry = stream_[at_];
    const bool is_word = entry < word_types;
    if (!is_word && entry != kBreak) break;
    word += is_word;
  }
  return word;
}

absl::Status BlockWalk::EmptyDocument(bool ends) {
  document_has_words_ = false;
  return ends ? Expect(kDocumentEnd) : absl::OkStatus();
}

absl::Status BlockWalk::Expect(Entry mark) {
  if (at_ >= end_ || stream_[at_] != mark) return Changed();
  ++at_;
  if (mark == kDocumentEnd && options_.words) output_->words += '\n';
  return absl::OkStatus();
}

void BlockWalk::BeginToken(Entry entry, uint64_t at, const WalkPiece& piece, size_t word) {
  token_is_carried_ = IsInside(entry);
  while (IsInside(stream_[at])) --at;
  token_type_ = stream_[at];
  if (options_.words && !token_is_carried_) {
    if (document_has_words_) output_->words += ' ';
    document_has_words_ = true;
    output_->words += options_.types->Text(token_type_, options_.joiner);
  }
  in_token_ = options_.types->is_phrase(token_type_);
  if (!in_token_) return;
  token_first_word_ = word;
  token_is_plain_ = Surfaces::IsPlain(WordOf(piece, word));
  if (options_.spans && !token_is_carried_) {
    absl::StrAppend(&output_->spans.back().items, "[", piece.text_offset + piece.words[word].begin,
                    ",");
  }
}

void BlockWalk::EndToken(const WalkPiece& piece, size_t last_word, bool goes_on) {
  in_token_ = false;
  if (options_.spans && !goes_on) {
    std::string& items = output_->spans.back().items;
    absl::StrAppend(&items, piece.text_offset + piece.words[last_word].end, ",");
    AppendJsonString(&items, options_.types->Text(token_type_));
    items += "],";
  }
  if (token_is_carried_ || goes_on) {
    std::string spelling = Spelling(piece, last_word);
    if (goes_on) spelling += SurfaceGap(piece.text.substr(piece.words[last_word].end));
    if (token_is_carried_) {
      output_->has_carried_in = true;
      output_->carried_in = std::move(spelling);
      output_->carried_in_type = token_type_;
      output_->carries_on = goes_on;
    } else {
      output_->has_carried_out = true;
      output_->carried_out = std::move(spelling);
    }
  } else if (options_.surfaces != nullptr && !token_is_plain_) {
    options_.surfaces->Count(token_type_, Spelling(piece, last_word));
  }
}

std::string BlockWalk::Spelling(const WalkPiece& piece, size_t last_word) const {
  std::string spelling;
  for (size_t i = token_first_word_; i <= last_word; ++i) {
    if (i > token_first_word_) spelling += SurfaceGap(GapBefore(piece, i));
    spelling += WordOf(piece, i);
  }
  return spelling;
}

void BlockWalk::Join(const WalkPiece& piece, uint64_t gap_begin, uint64_t gap_end) {
  if (!options_.source) return;
  const uint64_t from = piece.to_source(gap_begin), to = piece.to_source(gap_end);
  output_->joints.push_back({0, from, to});
}

void BlockWalk::Find(const WalkPiece& piece, const WordSpan& word) {
  output_->found.push_back(
      {wanted_++, piece.document, piece.field, piece.text_offset + word.begin});
}

void BlockWalk::WriteSource() {
  std::vector<BlockOutput::Joint>& joints = output_->joints;
  // The passages of a JSON object come in the order of the job's fields, whatever their order
  // there.
  const auto before = [](const BlockOutput::Joint& a, const BlockOutput::Joint& b) {
    return a.gap_begin < b.gap_begin;
  };
  if (!std::is_sorted(joints.begin(), joints.end(), before)) {
    std::sort(joints.begin(), joints.end(), before);
  }
  std::string& text = output_->text;
  text.reserve(bytes_.size() + joints.size() * options_.source_joiner.size());
  uint64_t copied = 0;
  for (BlockOutput::Joint& joint : joints) {
    text += bytes_.substr(copied, joint.gap_begin - copied);
    joint.at = text.size();
    text += options_.source_joiner;
    copied = joint.gap_end;
  }
  text += bytes_.substr(copied);
}

absl::Status BlockWalk::Finish() {
  if (at_ != end_) return Changed();
  if (options_.source) WriteSource();
  return absl::OkStatus();
}

}  // namespace phraseweld
