#include "merge/rulings.h"

#include "merge/merger.h"

namespace phraseweld {

RulingJoiner::RulingJoiner(const std::vector<RuledPhrase>& rulings, const TypeBits* barriers,
                           uint32_t word_types)
    : rulings_(rulings), barriers_(barriers), word_types_(word_types) {
  first_words_.Resize(word_types);
  for (const RuledPhrase& ruling : rulings_) first_words_.Set(ruling.words.front());
}

void RulingJoiner::Join(Entry* stream, uint64_t begin, uint64_t end,
                        std::vector<uint64_t>* joined) const {
  const auto matches = [&](const std::vector<uint32_t>& words, uint64_t at, uint64_t run_end) {
    if (run_end - at < words.size()) return false;
    for (size_t i = 0; i < words.size(); ++i) {
      if (stream[at + i] != words[i]) return false;
    }
    return true;
  };
  for (uint64_t run = begin; run < end;) {
    bool has_first = false;
    uint64_t run_end = run;
    for (; run_end < end && !IsMark(stream[run_end]); ++run_end) {
      if (barriers_ != nullptr && barriers_->HasChecked(stream[run_end])) break;
      has_first = has_first || first_words_.HasChecked(stream[run_end]);
    }
    for (size_t i = 0; has_first && i < rulings_.size(); ++i) {
      const std::vector<uint32_t>& words = rulings_[i].words;
      for (uint64_t at = run; at < run_end; ++at) {
        if (!matches(words, at, run_end)) continue;
        JoinToken(stream, at, at + words.size() - 1, rulings_[i].phrase, word_types_);
        ++(*joined)[i];
        at += words.size() - 1;
      }
    }
    run = run_end + 1;
  }
}

}  // namespace phraseweld
