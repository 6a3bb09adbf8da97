#include "words/icu_segmenter.h"

#include <unicode/brkiter.h>
#include <unicode/ubrk.h>
#include <unicode/utext.h>
#include <unicode/utf16.h>
#include <unicode/utf8.h>

#include "words/icu_error.h"

namespace phraseweld {
IcuSegmenter::IcuSegmenter() {
  UErrorCode error = U_ZERO_ERROR;
  std::unique_ptr<icu::BreakIterator> made(
      icu::BreakIterator::createWordInstance(icu::Locale::getRoot(), error));
  RequireIcu(error);
  // ICU documents that its factories make no other kind.
  iterator_.reset(static_cast<icu::RuleBasedBreakIterator*>(made.release()));
  // An iterator loads a dictionary when it first meets its script, and until then may treat a mark
  // that several scripts share (U+30FC) otherwise than afterwards. One word of Thai, Lao, Khmer,
  // Burmese, Han and Hangul each loads them all, so that words do not depend on what came before.
  std::vector<WordSpan> words;
  AppendWords("\u0e01\u0e01 \u0e81\u0e81 \u1780\u1780 \u1000\u1000 \u4e00\u4e00 \uac00\uac00", 0,
              &words);
}

void IcuSegmenter::AppendWords(std::string_view text, uint32_t base, std::vector<WordSpan>* words) {
  const auto length = static_cast<int32_t>(text.size());
  units_.resize(text.size());
  offsets_.resize(text.size() + 1);
  size_t unit = 0;
  for (int32_t at = 0; at < length;) {
    const auto begin = static_cast<uint32_t>(at);
    UChar32 code_point;
    U8_NEXT_UNSAFE(text.data(), at, code_point);
    offsets_[unit] = begin;
    if (U_IS_BMP(code_point)) {
      units_[unit++] = static_cast<char16_t>(code_point);
    } else {
      units_[unit++] = U16_LEAD(code_point);
      offsets_[unit] = begin;
      units_[unit++] = U16_TRAIL(code_point);
    }
  }
  offsets_[unit] = static_cast<uint32_t>(length);

  UErrorCode error = U_ZERO_ERROR;
  UText utext = UTEXT_INITIALIZER;
  utext_openUChars(&utext, units_.data(), static_cast<int64_t>(unit), &error);
  iterator_->setText(&utext, error);
  RequireIcu(error);
  int32_t begin = iterator_->first();
  for (int32_t end = iterator_->next(); end != icu::BreakIterator::DONE; end = iterator_->next()) {
    const int32_t status = iterator_->getRuleStatus();
    if (status >= UBRK_WORD_NUMBER) {
      words->push_back({base + offsets_[static_cast<size_t>(begin)],
                        (base + offsets_[static_cast<size_t>(end)]) & 0x7FFFFFFFu,
                        status < UBRK_WORD_NUMBER_LIMIT});
    }
    begin = end;
  }
  utext_close(&utext);
}

}  // namespace phraseweld
