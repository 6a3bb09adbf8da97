#ifndef PHRASEWELD_TESTS_WORDS_REFERENCE_SPLITTER_H_
#define PHRASEWELD_TESTS_WORDS_REFERENCE_SPLITTER_H_

#include <cstdint>
#include <random>
#include <string>
#include <string_view>
#include <vector>

#include "words/splitter.h"
#include "words/word_stream.h"

namespace phraseweld {

// A segment of ICU's root word break iterator, in bytes.
struct Segment {
  uint32_t begin;
  uint32_t end;
  int32_t status;
};

// The segments of `text`, asked of ICU over each whole stretch of valid UTF-8, with nothing shared
// with the library. Invalid bytes are in no segment.
std::vector<Segment> ReferenceSegments(std::string_view text);

// The words among them: those with a word's status and a form that is not empty.
std::vector<WordSpan> ReferenceWords(std::string_view text, const WordOptions& options);

// All words that `stream` gives for `text`.
std::vector<WordSpan> WordsOf(WordStream* stream, std::string_view text,
                              size_t capacity = WordStream::kLeastCapacity);

// The text with its words in brackets and its bytes beyond ASCII escaped, numbers marked by "#".
std::string Show(std::string_view text, const std::vector<WordSpan>& words);

// One character or invalid byte sequence for each class that the rules or the scanner tell apart.
const std::vector<std::string>& Representatives();

// `count` pieces out of Representatives(), of ranges of many scripts, and of ASCII words.
std::string RandomText(std::mt19937_64* random, size_t count);

}  // namespace phraseweld

#endif  // PHRASEWELD_TESTS_WORDS_REFERENCE_SPLITTER_H_
