#ifndef PHRASEWELD_READ_CUTTER_H_
#define PHRASEWELD_READ_CUTTER_H_

#include <functional>
#include <string_view>

#include "read/corpus.h"

namespace phraseweld {

// How much of what follows a cut is looked at. Enough for a word's first characters and for a blank
// line of common length; where it does not tell, the text is not cut there.
inline constexpr size_t kLookAhead = 256;

// A place to end a block at; `at` is 0 where there is none.
struct Cut {
  size_t at = 0;
  bool inside_passage = false;  // the passage before it goes on after it
};

// Decides where a stretch of one input may be cut. The stretch begins where the block before it
// was cut.
class Cutter {
 public:
  explicit Cutter(const ReadOptions& options);

  // The best cut at or before `most`: the last after a line feed, else the last after a space.
  // At least kLookAhead bytes follow `most`, or all of the input's.
  Cut FindLast(std::string_view bytes, size_t most) const;

  // The first cut at or after `from`. Where the input goes on after `bytes`, the last kLookAhead
  // places are left for a later call; *next is where that should go on.
  Cut FindFirst(std::string_view bytes, size_t from, bool input_ends, size_t* next) const;

  // Where the passage that goes on after the cut begins; `*earlier` is set where that may be before
  // bytes[0] (and so is, if bytes[0] is inside a passage).
  size_t PassageBegin(std::string_view bytes, size_t cut, bool* earlier) const;

 private:
  // `at` > 0 and at < bytes.size().
  Cut AfterLineFeed(std::string_view bytes, size_t at) const;
  Cut AfterSpace(std::string_view bytes, size_t at) const;
  bool MayCutInside(std::string_view rest) const;

  ReadLayout layout_;
  std::function<bool(std::string_view rest)> may_cut_before_;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_READ_CUTTER_H_
