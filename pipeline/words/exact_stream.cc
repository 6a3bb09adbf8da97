#include <unicode/uchar.h>
#include <unicode/uscript.h>
#include <unicode/utf8.h>

#include <algorithm>

#include "words/icu_segmenter.h"
#include "words/word_stream.h"

namespace phraseweld {
namespace {

// ICU gets stretches of about this many bytes: long enough to make a stretch's fixed cost vanish,
// short enough to stay in the second-level cache.
constexpr int32_t kStretchBytes = 1 << 16;

bool IsIgnored(UChar32 code_point) {
  const int32_t word_break = u_getIntPropertyValue(code_point, UCHAR_WORD_BREAK);
  return word_break == U_WB_EXTEND || word_break == U_WB_FORMAT || word_break == U_WB_ZWJ;
}

// Whether the code point takes part in no rule of UAX #29 but WB3c, WB4 and WB999 and in no
// dictionary.
bool IsPlain(UChar32 code_point) {
  if (u_getIntPropertyValue(code_point, UCHAR_WORD_BREAK) != U_WB_OTHER ||
      u_hasBinaryProperty(code_point, UCHAR_EXTENDED_PICTOGRAPHIC) || code_point == '@' ||
      u_getIntPropertyValue(code_point, UCHAR_LINE_BREAK) == U_LB_COMPLEX_CONTEXT ||
      u_hasBinaryProperty(code_point, UCHAR_IDEOGRAPHIC)) {
    return false;
  }
  const int32_t script = u_getIntPropertyValue(code_point, UCHAR_SCRIPT);
  return script != USCRIPT_HAN && script != USCRIPT_HIRAGANA;
}

// Whether a boundary stands between two code points whatever stands around them. False for many
// boundaries.
bool IsCertainBoundary(UChar32 before, UChar32 after) {
  if (before == '\n') return true;
  return IsPlain(before) && !IsIgnored(after);
}

class ExactStream : public WordStream {
 public:
  explicit ExactStream(const WordOptions& options) : folder_(options) {}

  void Start(std::string_view text) override {
    text_ = text;
    at_ = 0;
    words_.clear();
    given_ = 0;
  }

  size_t Next(WordSpan* words, size_t capacity) override {
    while (given_ == words_.size()) {
      if (at_ == static_cast<int32_t>(text_.size())) return 0;
      words_.clear();
      given_ = 0;
      SplitStretch();
    }
    const size_t count = std::min(capacity, words_.size() - given_);
    std::copy_n(words_.begin() + static_cast<ptrdiff_t>(given_), count, words);
    given_ += count;
    return count;
  }

 private:
  // Splits the stretch from at_ to the next invalid byte, the next certain boundary after
  // kStretchBytes or the end of the text, whichever is first, and moves at_ behind it.
  void SplitStretch() {
    const auto size = static_cast<int32_t>(text_.size());
    const int32_t begin = at_;
    UChar32 before = 0;
    bool invalid = false;
    while (at_ < size) {
      int32_t next = at_;
      UChar32 code_point;
      U8_NEXT(text_.data(), next, size, code_point);
      invalid = code_point < 0;
      if (invalid) break;
      if (at_ - begin >= kStretchBytes && IsCertainBoundary(before, code_point)) break;
      before = code_point;
      at_ = next;
    }
    const std::string_view stretch =
        text_.substr(static_cast<size_t>(begin), static_cast<size_t>(at_ - begin));
    if (!stretch.empty()) {
      segmenter_.AppendWords(stretch, static_cast<uint32_t>(begin), &words_);
      std::erase_if(words_, [this](const WordSpan& word) {
        return folder_.Form(text_.substr(word.begin, word.end - word.begin)).empty();
      });
    }
    if (invalid) ++at_;
  }

  WordFolder folder_;
  IcuSegmenter segmenter_;
  std::string_view text_;
  int32_t at_ = 0;  // the first byte that ICU has not seen
  std::vector<WordSpan> words_;
  size_t given_ = 0;  // of words_
};

}  // namespace

std::unique_ptr<WordStream> MakeExactStream(const WordOptions& options) {
  return std::make_unique<ExactStream>(options);
}

}  // namespace phraseweld
