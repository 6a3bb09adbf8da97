#ifndef PHRASEWELD_DELIVER_BLOCK_WALK_H_
#define PHRASEWELD_DELIVER_BLOCK_WALK_H_

#include <cstdint>
#include <functional>
#include <string>
#include <string_view>
#include <vector>

#include "absl/status/status.h"
#include "absl/types/span.h"
#include "base/entry.h"
#include "base/types.h"
#include "base/word_span.h"
#include "deliver/surfaces.h"

namespace phraseweld {

// The second walk over the text: the same words as the first time, beside the final stream, whose
// k-th word entry of a passage belongs to the k-th word. It makes everything that needs the text
// and the phrases at once: the rewritten file, its joints, the corpus as words, the spans, the
// phrases' spellings, and where given stream positions stand in the text.

// What a walk makes of one block.
struct BlockOutput {
  struct Joint {
    uint64_t at = 0;                      // where the joiner begins in `text`
    uint64_t gap_begin = 0, gap_end = 0;  // bytes of the block that it stands for
  };
  // A piece of a passage's spans: the items of the list, each ended by a comma but for one that
  // reaches into the next block.
  struct Spans {
    std::string items;
    uint32_t document = 0, field = 0;  // as in WalkPiece
    bool begins_passage = false, ends_passage = false;
  };
  struct Found {
    size_t wanted = 0;  // place in WalkOptions::wanted
    uint32_t document = 0, field = 0;
    uint64_t byte = 0;
  };
  std::string text;  // the rewritten bytes of the block
  std::vector<Joint> joints;
  std::string words;  // the block's part of the corpus as words
  std::vector<Spans> spans;
  std::vector<Found> found;
  // The spelling of a phrase that began in an earlier block, as far as this one has it, and of one
  // that goes on in the next. A block that lies inside one phrase has only carried_in.
  std::string carried_in, carried_out;
  bool carries_on = false;  // carried_in does not end in this block
  uint32_t carried_in_type = 0;
  bool has_carried_in = false, has_carried_out = false;
};

struct WalkOptions {
  bool source = true, words = false, spans = false;
  std::string joiner = "_";
  std::string source_joiner = "_";  // the joiner as it stands in the rewritten file
  const TypeTable* types = nullptr;
  Surfaces::Counter* surfaces = nullptr;
  const std::vector<uint64_t>* wanted = nullptr;  // stream positions to find, ascending
};

struct WalkPiece {
  std::string_view text;
  uint64_t text_offset = 0;
  uint32_t document = 0;  // place in the block
  uint32_t field = 0;
  bool begins_passage = true, ends_passage = true;
  bool begins_document = true, ends_document = true;
  absl::Span<const WordSpan> words;
  // Offset in the text -> offset in the block's bytes; called with ascending offsets.
  std::function<uint64_t(uint64_t)> to_source;
};

// Walks one block. Step code; make one a block.
class BlockWalk {
 public:
  // The block has the entries [begin, end) of the stream, which has `size` entries in all.
  BlockWalk(const WalkOptions& options, const Entry* stream, uint64_t size, uint64_t begin,
            uint64_t end, std::string_view bytes, BlockOutput* output);
  // The block's pieces in order.
  absl::Status Piece(const WalkPiece& piece);
  // A document without a piece.
  absl::Status EmptyDocument(bool ends);
  absl::Status Finish();

 private:
  // From `word` of a piece's `words` on, steps over words that are no part of a phrase and stand at
  // no wanted position. Returns the first word that it did not step over.
  size_t PassWords(size_t word, size_t words);
  void BeginToken(Entry type, uint64_t at, const WalkPiece& piece, size_t word);
  void EndToken(const WalkPiece& piece, size_t last_word, bool goes_on);
  std::string Spelling(const WalkPiece& piece, size_t last_word) const;
  void WriteSource();
  void Join(const WalkPiece& piece, uint64_t gap_begin, uint64_t gap_end);
  void Find(const WalkPiece& piece, const WordSpan& word);
  absl::Status Expect(Entry mark);
  bool DocumentHasWordsBefore() const;

  const WalkOptions& options_;
  const Entry* stream_;
  const uint64_t size_, end_;
  uint64_t at_;
  std::string_view bytes_;
  BlockOutput* output_;
  size_t wanted_ = 0;
  // The phrase token that the walk is inside of.
  bool in_token_ = false, token_is_carried_ = false;
  uint32_t token_type_ = 0;
  size_t token_first_word_ = 0;  // of the piece
  bool token_is_plain_ = false;  // so far
  bool document_has_words_ = false;
};

// One space, or the gap itself where it is empty or a hyphen: how a surface shows it.
std::string_view SurfaceGap(std::string_view gap);

}  // namespace phraseweld

#endif  // PHRASEWELD_DELIVER_BLOCK_WALK_H_
