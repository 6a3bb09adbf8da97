#include "benchmarks/word_source.h"

#include <algorithm>
#include <cmath>
#include <iterator>

namespace phraseweld::benchmarks {
namespace {

// The commonest function words of English, the most frequent first. All of them stand on the list
// configs/function-words/english.txt.
constexpr std::string_view kFunctionWords[] = {
    "the",   "of",     "and",   "to",    "a",       "in",      "is",     "that",    "for",
    "it",    "with",   "as",    "on",    "be",      "at",      "by",     "this",    "from",
    "or",    "are",    "an",    "which", "but",     "not",     "was",    "have",    "they",
    "you",   "can",    "their", "has",   "will",    "its",     "if",     "were",    "he",
    "all",   "we",     "when",  "there", "who",     "would",   "may",    "no",      "these",
    "into",  "than",   "his",   "been",  "any",     "them",    "those",  "some",    "she",
    "what",  "must",   "so",    "about", "our",     "between", "do",     "through", "where",
    "her",   "each",   "both",  "under", "could",   "such",    "while",  "should",  "because",
    "after", "before", "over",  "how",   "against", "during",  "within", "without",
};

constexpr double kShift = 2.7;         // Mandelbrot's shift, his usual value for English
constexpr double kBend = 20000;        // beyond it words are rarer than by Zipf's law
constexpr double kTailExponent = 1.8;  // new words then appear about as often as in English manuals
constexpr double kFirstTailRank = 65536;
constexpr uint64_t kLastRank = uint64_t{1} << 48;  // beyond any text; keeps the arithmetic in range

// How much a word prefers its favourite followers: Zipf-Mandelbrot again, cut off where the steps
// end.
constexpr double kFavouriteExponent = 1.2;
constexpr double kFavouriteShift = 6;
constexpr size_t kFavouriteSteps = 4096;

constexpr std::string_view kConsonants = "bdfghjklmnprstvz";
constexpr std::string_view kVowels = "aiou";  // no "e": "here" and "more" are no invented words
constexpr std::string_view kEndings[] = {"", "n", "r", "st"};
constexpr unsigned kSyllableBits = 6;
constexpr unsigned kEndingBits = 2;

double Weight(double rank) {
  if (rank <= kBend) return 1 / (rank + kShift);
  return std::pow((rank + kShift) / (kBend + kShift), -kTailExponent) / (kBend + kShift);
}

// The weight of all ranks from kFirstTailRank: the sum as an integral.
double TailWeight() {
  const double start = kFirstTailRank - 0.5 + kShift;
  return start * Weight(start - kShift) / (kTailExponent - 1);
}

char* Invent(uint64_t number, char* out) {
  // Two syllables and an ending for the first numbers, three when those are used up, and so on.
  unsigned bits = 2 * kSyllableBits + kEndingBits;
  while (number >= uint64_t{1} << bits) {
    number -= uint64_t{1} << bits;
    bits += kSyllableBits;
  }
  // An odd factor makes neighbours look different and keeps different numbers different.
  number = (number * 0x9E3779B97F4A7C15u) & ((uint64_t{1} << bits) - 1);
  for (unsigned left = bits - kEndingBits; left > 0; left -= kSyllableBits) {
    *out++ = kConsonants[number & 15];
    *out++ = kVowels[(number >> 4) & 3];
    number >>= kSyllableBits;
  }
  const std::string_view ending = kEndings[number];
  return std::copy(ending.begin(), ending.end(), out);
}

}  // namespace

WordSource::WordSource()
    : function_words_(std::size(kFunctionWords)),
      columns_(kTableRanks),
      spellings_(kTableRanks),
      favourites_(kFavouriteSteps) {
  std::vector<double> share(kTableRanks);
  share[0] = TailWeight();
  double sum = share[0];
  for (size_t rank = 1; rank < kTableRanks; ++rank) {
    share[rank] = Weight(static_cast<double>(rank));
    sum += share[rank];
  }
  std::vector<uint32_t> small;
  std::vector<uint32_t> large;
  for (uint32_t rank = 0; rank < kTableRanks; ++rank) {
    share[rank] *= static_cast<double>(kTableRanks) / sum;
    (share[rank] < 1 ? small : large).push_back(rank);
  }
  while (!small.empty() && !large.empty()) {
    const uint32_t less = small.back();
    const uint32_t more = large.back();
    small.pop_back();
    columns_[less] = {static_cast<uint32_t>(share[less] * 0x1p32), more};
    share[more] -= 1 - share[less];
    if (share[more] < 1) {
      large.pop_back();
      small.push_back(more);
    }
  }
  for (const uint32_t rank : small) columns_[rank] = {0, rank};
  for (const uint32_t rank : large) columns_[rank] = {0, rank};

  for (size_t rank = 1; rank < kTableRanks; ++rank) {
    Spelling& spelling = spellings_[rank];
    char* end = spelling.data();
    if (IsFunctionWord(rank)) {
      const std::string_view text = kFunctionWords[rank - 1];
      end = std::copy(text.begin(), text.end(), end);
    } else {
      end = SpellContentWord(rank, end);
    }
    spelling.back() = static_cast<char>(end - spelling.data());
  }
  for (size_t step = 1; step < kFavouriteSteps; ++step) {
    const double unit = static_cast<double>(step) / kFavouriteSteps;
    const double place = kFavouriteShift * (std::pow(unit, -1 / kFavouriteExponent) - 1);
    favourites_[step] = 1 + static_cast<uint32_t>(place);
  }
}

uint64_t WordSource::TailRank(uint64_t bits) {
  // The column has used up the bits, so these are new ones.
  const double unit = static_cast<double>((Mix(bits ^ 0xA0761D6478BD642Fu) >> 11) + 1) * 0x1p-53;
  const double start = kFirstTailRank - 0.5 + kShift;
  const double place = start * std::pow(unit, -1 / (kTailExponent - 1)) - kShift + 0.5;
  return place < static_cast<double>(kLastRank) ? static_cast<uint64_t>(place) : kLastRank;
}

char* WordSource::SpellContentWord(uint64_t rank, char* out) const {
  char* end = Invent(rank - function_words_ - 1, out);
  if (rank % 32 == 0) *out = static_cast<char>(*out - 'a' + 'A');  // a name
  return end;
}

std::string WordSource::InventWord(uint64_t number) {
  char word[kLongest];
  return std::string(word, Invent(number, word));
}

}  // namespace phraseweld::benchmarks
