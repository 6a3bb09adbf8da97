#ifndef PHRASEWELD_DELIVER_SURFACES_H_
#define PHRASEWELD_DELIVER_SURFACES_H_

#include <atomic>
#include <cstdint>
#include <string>
#include <string_view>
#include <vector>

#include "absl/status/status.h"
#include "base/parallel.h"
#include "base/shared_texts.h"
#include "base/types.h"

namespace phraseweld {

// The spellings of phrase tokens and how often each occurs. Most tokens are spelt like their type's
// text; those are not counted but are what is left of all its tokens.
class Surfaces {
 public:
  // `tokens`: of each type, in the corpus.
  Surfaces(const TypeTable& types, const std::vector<uint64_t>& tokens)
      : types_(types), tokens_(tokens) {}

  // Whether a word is its own form whatever the job's options: ASCII, and neither a capital letter
  // nor a mark. A token of such words with a blank in every gap is spelt like its text.
  static bool IsPlain(std::string_view word);

  // What one thread counts with: it passes spellings on many at a time.
  class Counter {
   public:
    explicit Counter(Surfaces* surfaces) : surfaces_(surfaces) {}
    // For every token that is not spelt like its text, and at will for others.
    void Count(uint32_t type, std::string_view spelling);
    // Passes on what is left.
    void Flush();

   private:
    Surfaces* const surfaces_;
    std::string bytes_;
    std::vector<size_t> ends_;  // of each spelling in bytes_
  };

  // When every counter was flushed, and before MostFrequent().
  absl::Status Settle(Lanes& lanes);

  // The most frequent spelling (of equals the first in byte order) of a type whose text is `text`;
  // that text where it has no token. Any thread.
  std::string MostFrequent(uint32_t type, const std::string& text) const;

 private:
  const TypeTable& types_;
  const std::vector<uint64_t>& tokens_;
  // A type's four bytes and a spelling; the note is how often it was counted.
  SharedTexts spellings_;
  std::atomic<bool> full_ = false;
  // The ids of the spellings by type: those of a phrase are at [begins_[phrase], begins_[phrase +
  // 1]).
  std::vector<uint64_t> ids_;
  std::vector<uint32_t> begins_;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_DELIVER_SURFACES_H_
