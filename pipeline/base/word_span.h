#ifndef PHRASEWELD_BASE_WORD_SPAN_H_
#define PHRASEWELD_BASE_WORD_SPAN_H_

#include <cstdint>

namespace phraseweld {

// A word's place in its text: bytes [begin, end). `number`: its rule status is in the NUMBER range.
struct WordSpan {
  uint32_t begin;
  uint32_t end : 31;
  uint32_t number : 1;
  friend bool operator==(const WordSpan& a, const WordSpan& b) {
    return a.begin == b.begin && a.end == b.end && a.number == b.number;
  }
};
static_assert(sizeof(WordSpan) == 8);

}  // namespace phraseweld

#endif  // PHRASEWELD_BASE_WORD_SPAN_H_
