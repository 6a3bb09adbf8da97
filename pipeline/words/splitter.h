#ifndef PHRASEWELD_WORDS_SPLITTER_H_
#define PHRASEWELD_WORDS_SPLITTER_H_

#include <cstdint>
#include <memory>
#include <string>
#include <string_view>
#include <vector>

#include "base/word_span.h"

namespace phraseweld {

// How a word becomes its form. Mirrors Job::Words; this room does not know the job.
enum class FormFold { kNone, kCase, kCompatibilityCase };

struct WordOptions {
  FormFold fold = FormFold::kCompatibilityCase;
  bool strip_accents = false;
  bool join_hyphens = true;
};

// kExact asks ICU for everything; kFast must give the same spans for every text.
enum class SplitPath { kExact, kFast };

// Splits text into words: UAX #29 as ICU's root word break iterator has it, less the words whose
// form is empty. Not thread-safe; make one a thread. Copies nothing of the text.
class WordSplitter {
 public:
  explicit WordSplitter(const WordOptions& options, SplitPath path = SplitPath::kFast);
  ~WordSplitter();
  WordSplitter(const WordSplitter&) = delete;
  WordSplitter& operator=(const WordSplitter&) = delete;

  // Replaces *spans by the words of `text` in order. text.size() < 2^31. Any bytes will do: those
  // that are no part of valid UTF-8 stand between words.
  void Split(std::string_view text, std::vector<WordSpan>* spans);

 private:
  class Impl;
  std::unique_ptr<Impl> impl_;
};

// The form of one word. Not thread-safe.
class WordFolder {
 public:
  explicit WordFolder(const WordOptions& options);
  // The form of `word` (a span that WordSplitter gave), through ICU; may be empty.
  std::string Form(std::string_view word);

 private:
  WordOptions options_;
};

// Whether words on both sides of `gap` are neighbours. `gap` is all that stands between them.
bool GapIsOpen(std::string_view gap, bool join_hyphens);

// Whether a word with a non-empty form certainly begins at the first byte of `text`, given that the
// byte before it is an ASCII space or line feed. A text may be cut there: both halves split as the
// whole would, and no gap is cut in two. False is always safe.
bool StartsWord(std::string_view text);

}  // namespace phraseweld

#endif  // PHRASEWELD_WORDS_SPLITTER_H_
