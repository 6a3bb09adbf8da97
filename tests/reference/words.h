#ifndef PHRASEWELD_TESTS_REFERENCE_WORDS_H_
#define PHRASEWELD_TESTS_REFERENCE_WORDS_H_

#include <cstddef>
#include <string>
#include <string_view>
#include <vector>

#include "base/job.h"

namespace phraseweld::reference {

// A word of a text. What stands between two words is the gap.
struct Word {
  size_t begin;  // byte offsets in the text
  size_t end;
  std::string form;
  int rule_status;  // of ICU's root word break iterator
};

// The words of a text, in order. A segment whose form is empty is none.
std::vector<Word> FindWords(std::string_view text, const Job::Words& options);

// Whether the words on both sides of the gap are neighbours; else the gap is a break.
bool IsOpenGap(std::string_view gap, Hyphens hyphens);

// Whether the gap is exactly one of the hyphens U+002D, U+2010, U+2011.
bool IsHyphen(std::string_view gap);

// Whether a word with this rule status is in ICU's NUMBER range.
bool IsNumberStatus(int rule_status);

}  // namespace phraseweld::reference

#endif  // PHRASEWELD_TESTS_REFERENCE_WORDS_H_
