#ifndef PHRASEWELD_TESTS_BENCHMARKS_PLANTED_H_
#define PHRASEWELD_TESTS_BENCHMARKS_PLANTED_H_

#include <cstdint>
#include <string>
#include <vector>

#include "benchmarks/word_source.h"

namespace phraseweld::benchmarks {

// A phrase that is put into the text on purpose, and how often it has been.
struct PlantedPhrase {
  enum class Kind {
    kPlain,    // all of its words are reserved words that no other phrase has
    kShared,   // as plain, but its first word is also that of the phrase before it
    kBridged,  // as plain, but one or two function words stand behind its first word
  };
  Kind kind;
  std::vector<std::string> words;
  bool stands_singly;  // its first word also stands in the text without the rest

  uint64_t times = 0;
  uint64_t documents = 0;
  uint64_t singles = 0;
  uint64_t last_document = 0;  // from 1
};

// Phrases of 2 to 5 words. Every word that is no function word is reserved: it begins with "qu",
// which no word of WordSource does, and the text puts a content word or a break between any two
// planted things. So a phrase stands in the text exactly as often as it was planted.
class PlantedPhrases {
 public:
  PlantedPhrases(size_t count, Random& random);

  bool empty() const { return phrases_.empty(); }
  const std::vector<PlantedPhrase>& phrases() const { return phrases_; }

  // A phrase, by rates that differ by up to 1:100 between phrases.
  PlantedPhrase& Draw(Random& random);

 private:
  std::vector<PlantedPhrase> phrases_;
  std::vector<uint32_t> draws_;  // each phrase as often as its rate asks
};

// The name of a kind in the list of what was planted.
std::string_view KindName(PlantedPhrase::Kind kind);

}  // namespace phraseweld::benchmarks

#endif  // PHRASEWELD_TESTS_BENCHMARKS_PLANTED_H_
