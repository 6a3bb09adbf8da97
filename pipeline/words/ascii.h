#ifndef PHRASEWELD_WORDS_ASCII_H_
#define PHRASEWELD_WORDS_ASCII_H_

#include <cstdint>
#include <cstring>
#include <string_view>

namespace phraseweld {

constexpr bool IsAsciiByte(char byte) { return static_cast<unsigned char>(byte) < 0x80; }

constexpr char LowerAscii(char byte) {
  const bool upper = byte >= 'A' && byte <= 'Z';
  return static_cast<char>(byte | (upper ? 0x20 : 0));
}

inline uint64_t LoadWord(const char* bytes) {
  uint64_t word;
  std::memcpy(&word, bytes, sizeof(word));
  return word;
}

inline bool IsAscii(std::string_view text) {
  constexpr uint64_t kHighBits = 0x8080808080808080u;
  uint64_t seen = 0;
  size_t at = 0;
  for (; at + sizeof(seen) <= text.size(); at += sizeof(seen)) seen |= LoadWord(text.data() + at);
  for (; at < text.size(); ++at) seen |= static_cast<unsigned char>(text[at]);
  return (seen & kHighBits) == 0;
}

}  // namespace phraseweld

#endif  // PHRASEWELD_WORDS_ASCII_H_
