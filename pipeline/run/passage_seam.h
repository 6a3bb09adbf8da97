#ifndef PHRASEWELD_RUN_PASSAGE_SEAM_H_
#define PHRASEWELD_RUN_PASSAGE_SEAM_H_

#include <cstdint>
#include <string>
#include <string_view>
#include <vector>

#include "base/word_span.h"
#include "words/splitter.h"

namespace phraseweld {

// The text on both sides of the place where a passage was cut into pieces: enough of it that every
// sequence of up to `longest` words that reaches over the cut lies in it, and the text around that.
// One thread.
class PassageSeam {
 public:
  // Text that is kept before the first word that may belong to a sequence, at least.
  static constexpr size_t kAround = 64;  // bytes

  PassageSeam(const WordOptions& options, size_t longest) : splitter_(options), longest_(longest) {}

  // What is known of the passage so far is forgotten: the next piece begins one.
  void Clear();
  // A piece of the passage that goes on behind it. `offset`: of the piece in the passage's text.
  void Keep(std::string_view piece, uint64_t offset);

  // The kept text and as much as is needed of `piece`, which goes on where the last one ended.
  // Words may be split from text[exact_from] on; bytes before `cut` are those of earlier pieces.
  struct Joined {
    std::string text;
    size_t exact_from = 0;
    size_t cut = 0;
    uint64_t offset = 0;  // of text[0] in the passage's text
  };
  Joined Join(std::string_view piece);
  // All of the text that is kept, its last byte the last of the passage so far.
  std::string_view text() const { return text_; }

 private:
  size_t Words(std::string_view text);
  size_t HeadEnd(std::string_view piece);
  size_t TailBegin(std::string_view text);

  WordSplitter splitter_;
  std::vector<WordSpan> spans_;
  const size_t longest_;
  std::string text_;
  size_t exact_from_ = 0;
  uint64_t offset_ = 0;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_PASSAGE_SEAM_H_
