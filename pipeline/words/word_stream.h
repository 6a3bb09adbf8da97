#ifndef PHRASEWELD_WORDS_WORD_STREAM_H_
#define PHRASEWELD_WORDS_WORD_STREAM_H_

#include <cstddef>
#include <memory>
#include <string_view>
#include <vector>

#include "words/splitter.h"

namespace phraseweld {

// The words of one text, a buffer at a time, so that memory does not grow with the text (but for
// one stretch of dictionary text at a time). Not thread-safe.
class WordStream {
 public:
  // A buffer that Next() is given has room for this many words or more.
  static constexpr size_t kLeastCapacity = 256;

  virtual ~WordStream() = default;
  // Begins `text`, which must stay until the last Next(). text.size() < 2^31.
  virtual void Start(std::string_view text) = 0;
  // Writes the next words to `words` and returns their number, at most `capacity`; 0 at the end.
  virtual size_t Next(WordSpan* words, size_t capacity) = 0;
};

// The instruction sets that the fast path has a scanner for. kScalar runs everywhere.
enum class ScanLevel { kScalar, kSse2, kAvx2, kAvx512 };

// The levels that this build and this processor have, slowest first.
std::vector<ScanLevel> AvailableScanLevels();

std::unique_ptr<WordStream> MakeExactStream(const WordOptions& options);
// `level` must be available.
std::unique_ptr<WordStream> MakeFastStream(const WordOptions& options, ScanLevel level);
// The fast path at the best available level.
std::unique_ptr<WordStream> MakeWordStream(const WordOptions& options, SplitPath path);

}  // namespace phraseweld

#endif  // PHRASEWELD_WORDS_WORD_STREAM_H_
