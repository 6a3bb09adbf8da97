#ifndef PHRASEWELD_WORDS_SURFACE_CACHE_H_
#define PHRASEWELD_WORDS_SURFACE_CACHE_H_

#include <array>
#include <cstdint>
#include <cstring>
#include <string_view>
#include <utility>

#include "base/entry.h"
#include "base/huge_pages.h"
#include "words/ascii.h"

namespace phraseweld {

// What a thread remembers of words that it met: the bytes of a word as they stand in the text ->
// the provisional id of its form. So the common word is neither folded nor looked up in the
// vocabulary. Sized for the second-level cache of a core. Not thread-safe.

// Words of at most 16 bytes, as two integers padded with zeros: no word ends in a zero byte.
class ShortWordCache {
 public:
  static constexpr uint32_t kMostBytes = 16;

  struct Key {
    uint64_t low;
    uint64_t high;
  };

  // The key of text[begin, begin + size), size <= kMostBytes. Reads nothing outside of `text`.
  static Key KeyOf(std::string_view text, uint32_t begin, uint32_t size) {
    if (text.size() - begin >= kMostBytes) [[likely]] {
      const char* at = text.data() + begin;
      return {LoadWord(at) & kMasks[size], LoadWord(at + 8) & kMasks[kMostBytes + 1 + size]};
    }
    char padded[kMostBytes] = {};
    std::memcpy(padded, text.data() + begin, size);
    return {LoadWord(padded), LoadWord(padded + 8)};
  }

  // Asks for what Find(key) will read.
  void Prefetch(Key key) const { __builtin_prefetch(&lines_[LineOf(key)]); }

  // The id, or kBreak.
  uint32_t Find(Key key) {
    Line& line = lines_[LineOf(key)];
    // Seven of eight words of English stand in the first way.
    if (line.Has(0, key)) [[likely]]
      return line.id[0];
    for (size_t way = 1; way < kWays; ++way) {
      if (line.Has(way, key)) {
        line.Swap(way);
        return line.id[way - 1];
      }
    }
    return kBreak;
  }

  // `key` is not there. Forgets the last of its line.
  void Add(Key key, uint32_t id) {
    Line& line = lines_[LineOf(key)];
    line.low[kWays - 1] = key.low;
    line.high[kWays - 1] = key.high;
    line.id[kWays - 1] = id;
  }

 private:
  static constexpr size_t kWays = 3;    // what a cache line of 64 bytes holds
  static constexpr int kLineBits = 14;  // 1 MiB: 3.7 % misses on 46 MB of English, half that 4.8 %

  // A new word takes the last way, and each time it is met again it moves one way forward: words
  // met once never drive out a common one. (On English this misses a sixth less than first in,
  // first out, and less than least recently used.)
  struct alignas(64) Line {
    uint64_t low[kWays] = {};
    uint64_t high[kWays] = {};
    uint32_t id[kWays] = {kBreak, kBreak, kBreak};

    bool Has(size_t way, Key key) const {
      return ((low[way] ^ key.low) | (high[way] ^ key.high)) == 0;
    }
    void Swap(size_t way) {
      std::swap(low[way], low[way - 1]);
      std::swap(high[way], high[way - 1]);
      std::swap(id[way], id[way - 1]);
    }
  };

  // Masks of the low halves for sizes 0 to 16, then of the high halves.
  static constexpr std::array<uint64_t, 2 * (kMostBytes + 1)> kMasks = [] {
    std::array<uint64_t, 2 * (kMostBytes + 1)> masks{};
    for (uint32_t size = 0; size <= kMostBytes; ++size) {
      const auto mask = [](uint32_t bytes) {
        return bytes >= 8 ? ~uint64_t{0} : (uint64_t{1} << (8 * bytes)) - 1;
      };
      masks[size] = mask(size);
      masks[kMostBytes + 1 + size] = size > 8 ? mask(size - 8) : 0;
    }
    return masks;
  }();

  static size_t LineOf(Key key) {
    // Odd constants with bits in every byte (from the fractions of the golden ratio and pi).
    const uint64_t mixed = (key.low ^ (key.high * 0x243F6A8885A308D3u)) * 0x9E3779B97F4A7C15u;
    return (mixed ^ mixed << 29) >> (64 - kLineBits);
  }

  HugeVector<Line> lines_ = HugeVector<Line>(size_t{1} << kLineBits);
};

// Words of 17 to 56 bytes.
class LongWordCache {
 public:
  static constexpr uint32_t kMostBytes = 56;

  // The id, or kBreak.
  uint32_t Find(std::string_view word) const {
    const Line& line = lines_[LineOf(word)];
    return line.size == word.size() && std::memcmp(line.bytes, word.data(), word.size()) == 0
               ? line.id
               : kBreak;
  }

  void Add(std::string_view word, uint32_t id) {
    Line& line = lines_[LineOf(word)];
    line.id = id;
    line.size = static_cast<uint32_t>(word.size());
    std::memcpy(line.bytes, word.data(), word.size());
  }

 private:
  static constexpr int kLineBits = 12;  // 256 KiB: in English one word of a hundred is so long

  struct alignas(64) Line {
    uint32_t id = kBreak;
    uint32_t size = 0;
    char bytes[kMostBytes];
  };

  static size_t LineOf(std::string_view word) {
    uint64_t mixed = word.size();
    size_t at = 0;
    for (; at + 8 <= word.size(); at += 8) {
      mixed = (mixed ^ LoadWord(word.data() + at)) * 0x9E3779B97F4A7C15u;
      mixed ^= mixed >> 32;
    }
    // The last eight bytes again, whole or not: no word here is shorter.
    mixed = (mixed ^ LoadWord(word.data() + word.size() - 8)) * 0x9E3779B97F4A7C15u;
    return mixed >> (64 - kLineBits);
  }

  HugeVector<Line> lines_ = HugeVector<Line>(size_t{1} << kLineBits);
};

}  // namespace phraseweld

#endif  // PHRASEWELD_WORDS_SURFACE_CACHE_H_
