#ifndef PHRASEWELD_TESTS_BENCHMARKS_TEXT_MAKER_H_
#define PHRASEWELD_TESTS_BENCHMARKS_TEXT_MAKER_H_

#include <cstdint>
#include <string_view>
#include <vector>

#include "benchmarks/planted.h"
#include "benchmarks/word_source.h"

namespace phraseweld::benchmarks {

// Documents of invented text, one after another: sentences of 4 to 34 words with capitals, commas,
// dashes, numbers and hyphens, and planted phrases among them. The same seed gives the same text.
class TextMaker {
 public:
  enum class Layout { kLines, kParagraphs };

  TextMaker(uint64_t seed, Layout layout, size_t phrases);

  // The text of the next document and what ends it. Valid until the next call.
  std::string_view NextDocument();

  uint64_t words() const { return words_; }
  uint64_t documents() const { return documents_; }
  const std::vector<PlantedPhrase>& planted() const { return planted_.phrases(); }

 private:
  void AppendSentence();
  // Appends the separator before a word; returns where the word starts.
  char* StartWord(char* out);
  char* AppendBackgroundWord(uint64_t bits, char* out);
  char* AppendPlanted(char* out);
  void DrawPlanting(PlantedPhrase* again);

  Random random_;
  Layout layout_;
  PlantedPhrases planted_;
  WordSource source_;

  std::vector<char> buffer_;
  char* end_;
  const char* line_start_ = nullptr;
  uint64_t words_ = 0;
  uint64_t documents_ = 0;

  uint64_t previous_rank_ = 0;  // 0: the next word follows on nothing
  std::string_view separator_;  // before the next word
  bool separated_ = true;       // a content word or a break stands behind what was planted last
  PlantedPhrase* next_planted_ = nullptr;
  bool next_is_single_ = false;
  uint64_t until_planted_ = 0;  // words
};

}  // namespace phraseweld::benchmarks

#endif  // PHRASEWELD_TESTS_BENCHMARKS_TEXT_MAKER_H_
