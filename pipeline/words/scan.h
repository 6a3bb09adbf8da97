#ifndef PHRASEWELD_WORDS_SCAN_H_
#define PHRASEWELD_WORDS_SCAN_H_

#include <cstddef>
#include <cstdint>

#include "words/splitter.h"

namespace phraseweld {

// The scanner of the fast path. The simple idea: classify 64 bytes at once into bit masks; a word
// is a run of letters, digits and underscores, so its ends are where a mask changes. What
// complicates it, and what each costs:
//  - ' and . join two letters or two digits, and , and ; two digits; a lone underscore is no word.
//    All of that is mask arithmetic with one neighbour on each side.
//  - Letters of two bytes from U+00C0 to U+02AF and U+0400 to U+047F (but U+00D7 and U+00F7) are
//    letters like any other, which keeps most European text in the masks.
//  - Every other byte that is not ASCII is *hard*. The scanner goes back to where the segment that
//    the byte may belong to starts and hands over to the rule automaton (`HardText`), which comes
//    back at the next boundary before ASCII. The masks of the block stay good behind it.
// A boundary wipes the slate: what follows it depends on nothing before it.

// What a scan leaves for the next block.
struct ScanCarry {
  uint64_t word = 0;        // 0 or 1: whether the byte before the block is a letter, digit or "_",
  uint64_t letter = 0;      // is (the end of) a letter,
  uint64_t digit = 0;       // is a digit,
  uint64_t underscore = 0;  // is an underscore,
  uint64_t lead = 0;        // begins a letter of two bytes that the block goes on with;
  uint64_t digit_before = 0;  // whether the byte before that one is a digit.
};

class HardText;

struct Scan {
  const char* text = nullptr;
  uint32_t size = 0;
  uint32_t at = 0;  // where the next block starts
  // A boundary at or before `at`: all words before it are final.
  uint32_t resume = 0;
  bool open = false;        // whether a word runs up to `at`,
  uint32_t open_begin = 0;  // and where it began
  ScanCarry carry;
  // Words go to [out, limit); those from `first` on may still be taken back.
  WordSpan* first = nullptr;
  WordSpan* out = nullptr;
  WordSpan* limit = nullptr;
  HardText* hard_text = nullptr;
};

// Splits by rule from a boundary on.
class HardText {
 public:
  // Appends the words of the segments from `begin` on to scan->out and returns the boundary where
  // the scanner takes over again; it lies behind the byte at `hard`, and before ASCII unless room
  // is short.
  virtual uint32_t Resolve(uint32_t begin, uint32_t hard, Scan* scan) = 0;

 protected:
  ~HardText() = default;
};

// A block may write this many words (33, in whole groups of eight) before room is looked at again.
inline constexpr ptrdiff_t kScanRoom = 64;

// Scans until the text ends or room gets short. The text has ended when at >= size and !open.
using ScanFunction = void (*)(Scan* scan);

void ScanScalar(Scan* scan);
#if defined(__x86_64__)
void ScanSse2(Scan* scan);
void ScanAvx2(Scan* scan);
void ScanAvx512(Scan* scan);
#endif

}  // namespace phraseweld

#endif  // PHRASEWELD_WORDS_SCAN_H_
