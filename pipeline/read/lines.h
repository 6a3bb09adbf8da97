#ifndef PHRASEWELD_READ_LINES_H_
#define PHRASEWELD_READ_LINES_H_

#include <cstddef>
#include <cstdint>
#include <cstring>
#include <string_view>

namespace phraseweld {

// A byte that a blank line may hold beside its line feed.
constexpr bool IsBlankByte(char byte) { return byte == ' ' || byte == '\t' || byte == '\r'; }

constexpr bool IsBlank(std::string_view line) {
  for (const char byte : line) {
    if (!IsBlankByte(byte)) return false;
  }
  return true;
}

// The offset of the first line feed at or after `from`; text.size() where there is none.
inline size_t FindLineFeed(std::string_view text, size_t from) {
  if (from >= text.size()) return text.size();
  const void* found = std::memchr(text.data() + from, '\n', text.size() - from);
  return found == nullptr ? text.size()
                          : static_cast<size_t>(static_cast<const char*>(found) - text.data());
}

// The offset after the last line feed before `end`: where the line of the byte before `end` begins,
// unless that byte is a line feed itself. 0 where there is none.
inline size_t AfterLastLineFeed(std::string_view text, size_t end) {
  const void* found = end == 0 ? nullptr : memrchr(text.data(), '\n', end);
  return found == nullptr ? 0
                          : static_cast<size_t>(static_cast<const char*>(found) - text.data()) + 1;
}

inline uint64_t CountLineFeeds(std::string_view text) {
  // Counters of one byte that compilers keep in vector registers; they would overflow at 256.
  constexpr size_t kLanes = 32, kRounds = 255;
  uint64_t count = 0;
  while (text.size() >= kLanes) {
    uint8_t lanes[kLanes] = {};
    size_t rounds = text.size() / kLanes;
    if (rounds > kRounds) rounds = kRounds;
    for (size_t round = 0; round < rounds; ++round) {
      const char* const bytes = text.data() + round * kLanes;
      for (size_t lane = 0; lane < kLanes; ++lane) {
        lanes[lane] = static_cast<uint8_t>(lanes[lane] + (bytes[lane] == '\n'));
      }
    }
    for (const uint8_t lane : lanes) count += lane;
    text.remove_prefix(rounds * kLanes);
  }
  for (const char byte : text) count += byte == '\n';
  return count;
}

}  // namespace phraseweld

#endif  // PHRASEWELD_READ_LINES_H_
