#ifndef PHRASEWELD_TESTS_BENCHMARKS_WORD_SOURCE_H_
#define PHRASEWELD_TESTS_BENCHMARKS_WORD_SOURCE_H_

#include <array>
#include <cstdint>
#include <cstring>
#include <string>
#include <string_view>
#include <vector>

namespace phraseweld::benchmarks {

// 64 random bits out of 64: the finaliser of SplitMix64 (Steele, Lea & Flood 2014).
inline uint64_t Mix(uint64_t bits) {
  bits = (bits ^ (bits >> 30)) * 0xBF58476D1CE4E5B9u;
  bits = (bits ^ (bits >> 27)) * 0x94D049BB133111EBu;
  return bits ^ (bits >> 31);
}

// SplitMix64: one addition and one Mix() a draw, and any seed will do.
class Random {
 public:
  explicit Random(uint64_t seed) : state_(seed) {}
  uint64_t Next() { return Mix(state_ += 0x9E3779B97F4A7C15u); }
  // In (0, 1].
  double Unit() { return static_cast<double>((Next() >> 11) + 1) * 0x1p-53; }

 private:
  uint64_t state_;
};

// Words with the frequencies of a natural text. The word of rank r, from 1, has a probability in
// proportion to 1 / (r + 2.7) (Zipf-Mandelbrot) up to rank 20,000 and to (r + 2.7)^-1.8 beyond.
// There is no last rank, so new words appear for ever, their number growing as the 1/1.8-th power
// of the text (Heaps). The first ranks are function words of English; the others are invented words
// of ASCII letters, different for every rank and none of them with a "q" or an "e".
//
// Thread-safe once made.
class WordSource {
 public:
  // A word is at most this long, in bytes; Spell() may write as much whatever the word.
  static constexpr size_t kLongest = 32;

  WordSource();

  // The rank that `bits` draw; the lowest 48 of them decide.
  uint64_t Rank(uint64_t bits) const {
    const Column& column = columns_[bits & (kTableRanks - 1)];
    const uint32_t threshold = static_cast<uint32_t>(bits >> 16);
    const uint64_t rank = threshold < column.threshold ? bits & (kTableRanks - 1) : column.other;
    return rank != 0 ? rank : TailRank(bits);
  }

  // The rank of a word that follows the word of rank `previous`. Every word has favourites among
  // its followers, as words have in a text; over all previous words the ranks are spread as by
  // Rank().
  uint64_t FollowerRank(uint64_t previous, uint64_t bits) const {
    const uint32_t favourite = favourites_[bits >> 52];
    return favourite == 0 ? Rank(bits) : Rank(Mix(previous * 0xD6E8FEB86659FD93u + favourite));
  }

  bool IsFunctionWord(uint64_t rank) const { return rank <= function_words_; }

  // Writes the word of that rank and returns its end.
  char* Spell(uint64_t rank, char* out) const {
    if (rank >= kTableRanks) return SpellContentWord(rank, out);
    const Spelling& spelling = spellings_[rank];
    std::memcpy(out, spelling.data(), spelling.size());
    return out + spelling.back();
  }

  // An invented word, different for every number; lower case.
  static std::string InventWord(uint64_t number);

 private:
  static constexpr size_t kTableRanks = size_t{1} << 16;

  // A column of the alias table (Walker 1977; Vose 1991): below the threshold the column's own
  // rank.
  struct Column {
    uint32_t threshold;
    uint32_t other;
  };
  // The letters of a word and, in the last place, how many there are.
  using Spelling = std::array<char, 16>;

  static uint64_t TailRank(uint64_t bits);
  char* SpellContentWord(uint64_t rank, char* out) const;

  size_t function_words_;
  std::vector<Column> columns_;       // by rank; 0 stands for all ranks from kTableRanks
  std::vector<Spelling> spellings_;   // by rank
  std::vector<uint32_t> favourites_;  // by 12 random bits; 0 is none
};

}  // namespace phraseweld::benchmarks

#endif  // PHRASEWELD_TESTS_BENCHMARKS_WORD_SOURCE_H_
