#ifndef PHRASEWELD_RUN_PASSAGE_FILTER_H_
#define PHRASEWELD_RUN_PASSAGE_FILTER_H_

#include <string>
#include <string_view>
#include <vector>

#include "base/job.h"

namespace phraseweld {

// Tells passages that certainly hold none of a few sequences of words, without splitting them. In
// text that is ASCII alone the form of a word is its letters, in lower case where the job folds
// case, so a passage that lacks the letters of a sequence's longest word lacks the sequence. What
// is not ASCII alone is let through. Not thread-safe.
class PassageFilter {
 public:
  explicit PassageFilter(const Job::Words& words) : folds_(words.fold != Fold::kNone) {}

  void Add(const std::vector<std::string>& forms);
  // Whether it pays: with many sequences nearly all text holds a word of one.
  bool pays() const { return keys_.size() <= kMostKeys; }
  bool MayHold(std::string_view text, std::string* buffer) const;

 private:
  static constexpr size_t kMostKeys = 12;  // each costs a search of the text
  bool folds_;
  std::vector<std::string> keys_;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_PASSAGE_FILTER_H_
