#ifndef PHRASEWELD_TESTS_REFERENCE_CORPUS_H_
#define PHRASEWELD_TESTS_REFERENCE_CORPUS_H_

#include <cstddef>
#include <string>
#include <vector>

#include "base/job.h"
#include "reference/reference.h"
#include "reference/words.h"

namespace phraseweld::reference {

using Forms = std::vector<std::string>;

// Section 3: a token of a passage's stream. Its type is the sequence of its words' forms. A merged
// token keeps the tokens that it was made of.
struct Token {
  Forms forms;
  size_t first_word;  // places in Passage::words
  size_t last_word;
  bool break_before;  // a break stands between the token before it and this one
  int pass = -1;      // the pass that made it; -1 for a word
  std::vector<Token>
      parts;  // of a merged token: x, the words of the bridge, y; or a ruling's words
};

// Nothing reaches across passages.
struct Passage {
  std::string name;
  std::string text;
  // place[i]: offset in the file of the character that byte i of the text belongs to;
  // place[text.size()]: where the text ends there.
  std::vector<size_t> place;
  std::vector<Word> words;
  std::vector<Token> tokens;
};

struct Document {
  std::string name;
  size_t input;  // place among the inputs
  std::vector<Passage> passages;
};

// The documents of a corpus in order, each passage's words found, every word a token.
std::vector<Document> ReadCorpus(const Job& job, const std::vector<RefInput>& inputs);

// The forms joined by one space.
std::string Text(const Forms& forms);

}  // namespace phraseweld::reference

#endif  // PHRASEWELD_TESTS_REFERENCE_CORPUS_H_
