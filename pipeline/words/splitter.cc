#include "words/splitter.h"

#include <unicode/utf8.h>

#include <algorithm>
#include <array>

#include "words/break_table.h"
#include "words/word_stream.h"

namespace phraseweld {

class WordSplitter::Impl {
 public:
  Impl(const WordOptions& options, SplitPath path) : stream_(MakeWordStream(options, path)) {}

  void Split(std::string_view text, std::vector<WordSpan>* spans) {
    spans->clear();
    stream_->Start(text);
    while (const size_t count = stream_->Next(buffer_.data(), buffer_.size())) {
      spans->insert(spans->end(), buffer_.begin(), buffer_.begin() + static_cast<ptrdiff_t>(count));
    }
  }

 private:
  std::unique_ptr<WordStream> stream_;
  std::array<WordSpan, 2048> buffer_;  // 16 KiB stay in the first-level cache
};

WordSplitter::WordSplitter(const WordOptions& options, SplitPath path)
    : impl_(std::make_unique<Impl>(options, path)) {}

WordSplitter::~WordSplitter() = default;

void WordSplitter::Split(std::string_view text, std::vector<WordSpan>* spans) {
  impl_->Split(text, spans);
}

bool StartsWord(std::string_view text) {
  // A segment of more bytes than this is not looked at to its end.
  constexpr size_t kMostLook = 1024;
  const auto size = static_cast<int32_t>(std::min(text.size(), kMostLook));
  const BreakTable& table = BreakTable::Get();
  const uint8_t after_space = table.Next(BreakTable::kStart, table.Class(' '));
  auto verdict = BreakTable::Verdict::kNoWord;
  uint8_t state = BreakTable::kStart;
  for (int32_t at = 0; at < size;) {
    UChar32 code_point;
    U8_NEXT(text.data(), at, size, code_point);
    if (code_point < 0) return false;
    const uint8_t cls = table.Class(static_cast<uint32_t>(code_point));
    if (state == BreakTable::kStart) {
      // What vanishes may leave an empty form; a mark or a space belongs to the space before it.
      if (table.MayVanish(cls) || table.Next(after_space, cls) != BreakTable::kDead) return false;
    }
    state = table.Next(state, cls);
    if (state == BreakTable::kDead) return verdict != BreakTable::Verdict::kNoWord;
    if (table.verdict(state) != BreakTable::Verdict::kNotAccepting) verdict = table.verdict(state);
  }
  // Where the text ends here the word may go on in what the caller does not show.
  return false;
}

}  // namespace phraseweld
