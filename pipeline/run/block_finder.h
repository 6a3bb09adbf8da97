#ifndef PHRASEWELD_RUN_BLOCK_FINDER_H_
#define PHRASEWELD_RUN_BLOCK_FINDER_H_

#include <cstdint>
#include <functional>
#include <map>
#include <memory>
#include <string>
#include <utility>
#include <vector>

#include "absl/container/flat_hash_map.h"
#include "absl/status/status.h"
#include "base/entry.h"
#include "read/corpus.h"
#include "run/context_finder.h"
#include "run/passage_filter.h"
#include "run/passage_seam.h"
#include "run/word_tree.h"
#include "words/splitter.h"
#include "words/vocabulary.h"

namespace phraseweld {

// The part of FindPhrases() that looks at one block at a time, side by side with other blocks.

// Around a match, before what is too much is cut off between characters.
inline constexpr size_t kRawContextBytes = PassageSeam::kAround;
static_assert(kRawContextBytes >= kContextBytes + 4);

// Words that are looked for, or looked at again, get a place behind all places of the source.
inline constexpr uint64_t kNoPlace = uint64_t{1} << 61;

// What is looked for. Complete before the scan begins; then any thread.
class Wanted {
 public:
  struct Sequence {
    uint32_t phrase = WordTree::kNone;
    bool keep = false;
  };

  Wanted(const Job& job, const std::vector<std::vector<std::string>>& phrases,
         const FindOptions& options, Vocabulary* vocabulary);

  const WordTree& tree() const { return tree_; }
  // All that the tree has under a number: the same words may be wanted more than once.
  const std::vector<Sequence>& sequences(uint32_t number) const { return sequences_[number]; }
  uint32_t words_of(uint32_t phrase) const { return lengths_[phrase]; }
  size_t longest() const { return longest_; }
  // Whether the scan may leave out passages that the filter turns away.
  bool filters() const { return filters_; }
  const PassageFilter& filter() const { return filter_; }
  bool keeps_runs() const { return keeps_runs_; }
  bool keeps_all_runs() const { return keeps_all_runs_; }
  size_t contexts() const { return contexts_; }  // of a phrase and kind, at most

 private:
  void Add(const std::vector<std::string>& forms, Sequence sequence, Vocabulary* vocabulary);

  const size_t contexts_;
  const bool keeps_runs_, keeps_all_runs_;
  WordTree tree_;
  PassageFilter filter_;
  bool filters_ = false;
  std::vector<std::vector<Sequence>> sequences_;
  std::map<std::vector<std::string>, uint32_t> number_of_;
  std::vector<uint32_t> lengths_;
  size_t longest_ = 1;
};

// A match with its text as far as its piece has it, without names.
struct RawContext {
  uint32_t phrase = 0;
  bool broken = false;
  uint32_t document = 0;  // place in the block
  uint32_t field = 0;
  bool reaches_back = false;     // the text before may go on in an earlier piece
  bool reaches_forward = false;  // the text behind goes on in a later piece
  PhraseContext context;
};

// What was found in one block.
struct BlockFindings {
  struct Count {
    uint64_t occurrences = 0, documents = 0, across_breaks = 0;
    uint32_t first_document = WordTree::kNone, last_document = WordTree::kNone;
    size_t contexts[2] = {0, 0};
  };
  absl::flat_hash_map<uint32_t, Count> counts;  // by phrase
  std::map<std::pair<uint32_t, std::string>, uint64_t> breaks;
  std::vector<RawContext> contexts;
  std::vector<Entry> runs;                            // kept ones, one after another
  std::vector<std::pair<uint32_t, size_t>> run_ends;  // document, end in `runs`
  std::vector<Entry> head, tail;  // of the runs that reach over the block's ends
  bool one_run = false;           // head is the whole block, and the run goes on behind it
};

// Not thread-safe; one a thread.
class BlockFinder {
 public:
  // `has_its_contexts(phrase, broken)`: no more contexts of that kind are wanted; may turn true at
  // any time.
  BlockFinder(const std::vector<InputFile>& inputs, const ReadOptions& read,
              const WordOptions& words, const Wanted& wanted,
              std::function<bool(uint32_t phrase, bool broken)> has_its_contexts,
              Vocabulary* vocabulary)
      : parser_(inputs, read),
        splitter_(words),
        words_(words),
        wanted_(wanted),
        has_its_contexts_(std::move(has_its_contexts)),
        vocabulary_(vocabulary) {}

  // Parses the block and replaces *found. What reaches over the ends of the block is not found.
  absl::Status Find(Block* block, BlockFindings* found);

 private:
  void FindIn(const TextPiece& piece, uint32_t document, BlockFindings* found);
  void KeepRuns(const TextPiece& piece, uint32_t document, bool first, bool last,
                BlockFindings* found);

  BlockParser parser_;
  WordSplitter splitter_;
  const WordOptions words_;
  const Wanted& wanted_;
  const std::function<bool(uint32_t, bool)> has_its_contexts_;
  Vocabulary* const vocabulary_;
  std::unique_ptr<Encoder> encoder_;
  uint64_t next_index_ = 0;
  // Of the piece at hand.
  std::vector<Entry> entries_;
  std::vector<WordSpan> spans_;
  std::string lower_;
  std::vector<size_t> kept_at_;  // where sequences to keep begin
};

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_BLOCK_FINDER_H_
