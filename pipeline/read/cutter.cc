#include "read/cutter.h"

#include <algorithm>

#include "read/lines.h"

namespace phraseweld {

Cutter::Cutter(const ReadOptions& options)
    : layout_(options.layout), may_cut_before_(options.may_cut_before) {
  if (!may_cut_before_) may_cut_before_ = [](std::string_view) { return false; };
}

// A passage never goes on with a blank, whatever may_cut_before says: the line could turn out to be
// a blank one, which is in no passage.
bool Cutter::MayCutInside(std::string_view rest) const {
  return !IsBlankByte(rest.front()) && rest.front() != '\n' && may_cut_before_(rest);
}

Cut Cutter::AfterLineFeed(std::string_view bytes, size_t at) const {
  if (layout_ == ReadLayout::kLines || layout_ == ReadLayout::kJsonLines) return {.at = at};
  const std::string_view rest = bytes.substr(at, kLookAhead);
  if (layout_ == ReadLayout::kParagraphs) {
    // The line before: a stretch that begins inside a line begins with a byte that is not blank, so
    // what stands before bytes[0] does not matter.
    size_t last = at - 1;
    while (last > 0 && IsBlankByte(bytes[last - 1])) --last;
    if (last == 0 || bytes[last - 1] == '\n') return {.at = at};
    // The line after.
    size_t blanks = 0;
    while (blanks < rest.size() && IsBlankByte(rest[blanks])) ++blanks;
    const bool line_ends = blanks < rest.size() ? rest[blanks] == '\n' : blanks < kLookAhead;
    if (line_ends) return {.at = at};
  }
  return MayCutInside(rest) ? Cut{.at = at, .inside_passage = true} : Cut{};
}

Cut Cutter::AfterSpace(std::string_view bytes, size_t at) const {
  if (!MayCutInside(bytes.substr(at, kLookAhead))) return {};
  return {.at = at, .inside_passage = true};
}

Cut Cutter::FindLast(std::string_view bytes, size_t most) const {
  most = std::min(most, bytes.size() - 1);
  for (size_t at = most; (at = AfterLastLineFeed(bytes, at)) > 0; --at) {
    const Cut cut = AfterLineFeed(bytes, at);
    if (cut.at > 0) return cut;
  }
  if (layout_ == ReadLayout::kJsonLines) return {};
  for (size_t at = most; at > 0; --at) {
    if (bytes[at - 1] != ' ') continue;
    const Cut cut = AfterSpace(bytes, at);
    if (cut.at > 0) return cut;
  }
  return {};
}

Cut Cutter::FindFirst(std::string_view bytes, size_t from, bool input_ends, size_t* next) const {
  const size_t kept = input_ends ? 1 : kLookAhead;
  *next = from;
  for (; *next + kept <= bytes.size(); ++*next) {
    if (layout_ == ReadLayout::kJsonLines) {
      *next = FindLineFeed(bytes, *next - 1) + 1;
      if (*next + kept > bytes.size()) {
        // Found, but too near the end; or not found, and what has been searched stays so.
        *next = std::min(*next, bytes.size());
        return {};
      }
    }
    const char before = bytes[*next - 1];
    Cut cut;
    if (before == '\n') cut = AfterLineFeed(bytes, *next);
    if (before == ' ' && layout_ != ReadLayout::kJsonLines) cut = AfterSpace(bytes, *next);
    if (cut.at > 0) return cut;
  }
  return {};
}

size_t Cutter::PassageBegin(std::string_view bytes, size_t cut, bool* earlier) const {
  *earlier = true;
  if (layout_ == ReadLayout::kText) return 0;
  size_t begin = AfterLastLineFeed(bytes, cut);
  if (layout_ == ReadLayout::kParagraphs) {
    // Line by line back to a blank one.
    while (begin > 0) {
      const size_t line = AfterLastLineFeed(bytes, begin - 1);
      if (IsBlank(bytes.substr(line, begin - 1 - line))) break;
      begin = line;
    }
  }
  *earlier = begin == 0;
  return begin;
}

}  // namespace phraseweld
