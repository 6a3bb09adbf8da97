#ifndef PHRASEWELD_WORDS_BREAK_TABLE_H_
#define PHRASEWELD_WORDS_BREAK_TABLE_H_

#include <cstdint>
#include <vector>

namespace phraseweld {

// UAX #29's word boundary rules, as ICU 72's root rules tailor them, compiled into a finite
// automaton over classes of code points. From a boundary on, run it until it dies: the last
// accepting state that it passed ends the segment and tells what the segment is. Segments that hold
// a dictionary character are cut further by ICU's dictionaries. Immutable and thread-safe.
class BreakTable {
 public:
  // What an accepting state makes of a segment.
  enum class Verdict : uint8_t { kNotAccepting, kNoWord, kWord, kNumber };

  static constexpr uint8_t kDead = 0;
  static constexpr uint8_t kStart = 1;

  // Built from ICU's properties when first asked for (about 10 ms).
  static const BreakTable& Get();

  // The class of a code point up to U+10FFFF.
  uint8_t Class(uint32_t code_point) const {
    return blocks_[(static_cast<uint32_t>(block_of_[code_point >> kBlockBits]) << kBlockBits) |
                   (code_point & (kBlockSize - 1))];
  }
  uint8_t Next(uint8_t state, uint8_t cls) const {
    return next_[static_cast<uint32_t>(state) * kMostClasses + cls];
  }
  Verdict verdict(uint8_t state) const { return verdicts_[state]; }
  // Whether ICU consults a dictionary for a segment that holds the class.
  bool IsDictionary(uint8_t cls) const { return dictionary_[cls] != 0; }
  // Whether a form may lose every character of the class: nonspacing marks and default ignorables.
  bool MayVanish(uint8_t cls) const { return vanishing_[cls] != 0; }

 private:
  static constexpr uint32_t kBlockBits = 7;
  static constexpr uint32_t kBlockSize = 1u << kBlockBits;
  static constexpr uint32_t kMostClasses = 64;

  BreakTable();
  void Classify(std::vector<uint32_t>* memberships_of_class);
  void Compile(const std::vector<uint32_t>& memberships_of_class);

  std::vector<uint16_t> block_of_;  // code point / kBlockSize -> block
  std::vector<uint8_t> blocks_;     // the classes of the code points of each distinct block
  std::vector<uint8_t> next_;       // [state][class]
  std::vector<Verdict> verdicts_;
  std::vector<uint8_t> dictionary_;  // by class, 0 or 1
  std::vector<uint8_t> vanishing_;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_WORDS_BREAK_TABLE_H_
