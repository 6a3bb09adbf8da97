#include "run/passage_seam.h"

namespace phraseweld {
namespace {

// Pieces up to this many bytes are put behind the kept text as they are.
constexpr size_t kShortPiece = 4096;

// Whether the words of both sides of text[at] split as those of the whole do.
bool MayCut(std::string_view text, size_t at) {
  return (text[at - 1] == ' ' || text[at - 1] == '\n') && StartsWord(text.substr(at));
}

}  // namespace

void PassageSeam::Clear() {
  text_.clear();
  exact_from_ = 0;
  offset_ = 0;
}

size_t PassageSeam::Words(std::string_view text) {
  splitter_.Split(text, &spans_);
  return spans_.size();
}

size_t PassageSeam::HeadEnd(std::string_view piece) {
  for (size_t want = kAround + 16 * longest_;; want *= 2) {
    size_t end = want;
    while (end < piece.size() && !MayCut(piece, end)) ++end;
    if (end >= piece.size()) return piece.size();
    if (Words(piece.substr(0, end)) >= longest_ && end - spans_[longest_ - 1].end >= kAround) {
      return end;
    }
  }
}

size_t PassageSeam::TailBegin(std::string_view text) {
  for (size_t want = 16 * longest_;; want *= 2) {
    if (want >= text.size()) return 0;
    size_t begin = text.size() - want;
    while (begin > 0 && !MayCut(text, begin)) --begin;
    if (begin == 0 || Words(text.substr(begin)) >= longest_) return begin;
  }
}

void PassageSeam::Keep(std::string_view piece, uint64_t offset) {
  if (piece.size() > kShortPiece) {
    const size_t begin = TailBegin(piece);
    if (begin >= kAround) {
      exact_from_ = kAround;
      offset_ = offset + begin - kAround;
      text_ = piece.substr(begin - kAround);
      return;
    }
  }
  if (text_.empty()) offset_ = offset;
  text_ += piece;
  exact_from_ += TailBegin(std::string_view(text_).substr(exact_from_));
  if (exact_from_ > kAround) {
    const size_t drop = exact_from_ - kAround;
    text_.erase(0, drop);
    exact_from_ -= drop;
    offset_ += drop;
  }
}

PassageSeam::Joined PassageSeam::Join(std::string_view piece) {
  Joined joined;
  joined.text = text_;
  joined.text += piece.substr(0, HeadEnd(piece));
  joined.exact_from = exact_from_;
  joined.cut = text_.size();
  joined.offset = offset_;
  return joined;
}

}  // namespace phraseweld
