#include <algorithm>
#include <cstring>

#include "read/corpus.h"
#include "read/json_escape.h"

namespace phraseweld {

SourceMap::SourceMap(const Block& block, const TextPiece& piece)
    : cursor_(block.bytes.data() + piece.source_begin),
      base_(block.bytes.data()),
      end_(block.bytes.data() + piece.source_end) {}

uint64_t SourceMap::ToSource(uint64_t text_offset) {
  while (at_ < text_offset && cursor_ < end_) {
    // As many bytes at once as stand for themselves.
    const size_t most =
        std::min<uint64_t>(text_offset - at_, static_cast<uint64_t>(end_ - cursor_));
    const void* backslash = std::memchr(cursor_, '\\', most);
    const size_t plain = backslash == nullptr
                             ? most
                             : static_cast<size_t>(static_cast<const char*>(backslash) - cursor_);
    cursor_ += plain;
    at_ += plain;
    if (backslash == nullptr) continue;
    const JsonEscape escape = ReadJsonEscape(cursor_);
    const uint32_t text_bytes = Utf8Bytes(escape.code_point);
    // An offset inside of what one escape stands for is the escape's.
    if (at_ + text_bytes > text_offset) break;
    cursor_ += escape.source_bytes;
    at_ += text_bytes;
  }
  return static_cast<uint64_t>(cursor_ - base_);
}

}  // namespace phraseweld
