#ifndef PHRASEWELD_WORDS_ICU_SEGMENTER_H_
#define PHRASEWELD_WORDS_ICU_SEGMENTER_H_

#include <unicode/rbbi.h>

#include <cstdint>
#include <memory>
#include <string_view>
#include <vector>

#include "words/splitter.h"

namespace phraseweld {

// ICU's root word break iterator over UTF-8. Not thread-safe.
class IcuSegmenter {
 public:
  IcuSegmenter();

  // Appends to *words the segments of `text` whose rule status is that of a word, moved by `base`
  // bytes. `text` must be valid UTF-8. Takes about 6 bytes of memory a byte of text.
  void AppendWords(std::string_view text, uint32_t base, std::vector<WordSpan>* words);

 private:
  std::unique_ptr<icu::RuleBasedBreakIterator> iterator_;
  std::vector<char16_t> units_;
  std::vector<uint32_t> offsets_;  // UTF-16 unit -> byte of `text`
};

}  // namespace phraseweld

#endif  // PHRASEWELD_WORDS_ICU_SEGMENTER_H_
