#ifndef PHRASEWELD_MERGE_RULINGS_H_
#define PHRASEWELD_MERGE_RULINGS_H_

#include <cstdint>
#include <vector>

#include "base/entry.h"
#include "base/slots.h"

namespace phraseweld {

// An always-ruling: its words and the type of the token that they become.
struct RuledPhrase {
  std::vector<uint32_t> words;
  uint32_t phrase = 0;
};

// Pass 0: joins every stretch of single-word tokens that spells a ruling, in the order of
// `rulings`, leftmost first, in stream[begin, end), which begins and ends with a run. Adds to
// (*joined)[i]. `barriers` (may be null): single-word types that end a run.
class RulingJoiner {
 public:
  RulingJoiner(const std::vector<RuledPhrase>& rulings, const TypeBits* barriers,
               uint32_t word_types);
  void Join(Entry* stream, uint64_t begin, uint64_t end, std::vector<uint64_t>* joined) const;

 private:
  const std::vector<RuledPhrase>& rulings_;
  const TypeBits* barriers_;
  uint32_t word_types_;
  TypeBits first_words_;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_MERGE_RULINGS_H_
