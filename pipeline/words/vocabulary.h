#ifndef PHRASEWELD_WORDS_VOCABULARY_H_
#define PHRASEWELD_WORDS_VOCABULARY_H_

#include <cstdint>
#include <memory>
#include <string>
#include <string_view>
#include <vector>

#include "absl/status/statusor.h"
#include "absl/types/span.h"
#include "base/entry.h"
#include "base/huge_pages.h"
#include "words/splitter.h"

namespace phraseweld {

// The forms of a corpus and their ids. While the corpus is read, threads intern forms at will and
// get provisional ids; Finish() then numbers the forms by where each first stood, so that the ids
// of a finished vocabulary depend on the corpus alone.
class Vocabulary {
 public:
  Vocabulary();
  ~Vocabulary();

  // A word as it was met: its form, where, and whether it was a number there.
  struct Sighting {
    std::string_view form;
    uint64_t place = 0;
    bool number = false;
    uint32_t id = 0;
  };

  // Thread-safe. Fills in the provisional id of each form and remembers the smallest `place` it was
  // seen at, and whether the word there was a number. Many at once take less time.
  void Intern(absl::Span<Sighting> sightings);
  // The same for one; returns its id.
  uint32_t Intern(std::string_view form, uint64_t place, bool number);

  // Call once, when no thread interns any more. The final ids: first `reserved` in their order
  // (whether they occurred or not; duplicates in it are dropped), then the forms of the corpus by
  // their places. Returns the table provisional id -> final id.
  // ResourceExhausted when there are more than kMostTypes forms.
  absl::StatusOr<HugeVector<uint32_t>> Finish(const std::vector<std::string>& reserved);

  // After Finish(). Thread-safe.
  uint32_t size() const;
  std::string_view form(uint32_t id) const;
  // Asks memory for what form() will read; for many at once that takes less than the waiting for
  // each.
  void Expect(absl::Span<const uint32_t> ids) const;
  bool is_number(uint32_t id) const;  // false for a reserved form that never occurred
  // The id of `form`, or kBreak where the vocabulary lacks it.
  uint32_t Find(std::string_view form) const;

  // Bytes that this vocabulary holds now; thread-safe, approximate to a few percent.
  uint64_t memory() const;

 private:
  class Impl;
  std::unique_ptr<Impl> impl_;
};

// Text -> entries. One a thread, sharing a vocabulary. Keeps a bounded cache (about 1 MiB) of the
// words that it met, so that the common word costs two loads and a compare.
class Encoder {
 public:
  Encoder(const WordOptions& options, Vocabulary* vocabulary, SplitPath path = SplitPath::kFast);
  ~Encoder();

  // Appends the entries of `text`, a whole passage or a part of one that StartsWord() allowed to
  // cut: a provisional id for each word, kBreak between two words whose gap is not open. With
  // `more_follows` (the passage goes on, with a word at its first byte) also kBreak at the end when
  // the gap after the last word is not open. `place` is what Intern() gets for an entry appended at
  // index 0 of `entries`; the one at index i gets place + i. Calls of one thread must have
  // ascending places.
  void Encode(std::string_view text, bool more_follows, uint64_t place,
              std::vector<Entry>* entries);

  // The same in two steps, which take less time for many short texts: EncodeAhead() leaves ids of
  // words that the cache does not know open, kBreak for the time being, and Settle() fills them in.
  // Between them all calls have the same `entries` and `place`, and `entries` only grows.
  void EncodeAhead(std::string_view text, bool more_follows, uint64_t place,
                   std::vector<Entry>* entries);
  void Settle(std::vector<Entry>* entries);

 private:
  class Impl;
  std::unique_ptr<Impl> impl_;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_WORDS_VOCABULARY_H_
