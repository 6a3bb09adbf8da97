#ifndef PHRASEWELD_TESTS_REFERENCE_UTF8_H_
#define PHRASEWELD_TESTS_REFERENCE_UTF8_H_

#include <cstddef>
#include <cstdint>
#include <string_view>
#include <vector>

namespace phraseweld::reference {

constexpr int32_t kInvalid = -1;

// One code point of a text, or a stretch of bytes that are not part of valid UTF-8.
struct Character {
  int32_t code_point;  // kInvalid: not valid UTF-8
  size_t begin;        // byte offsets
  size_t end;
};

std::vector<Character> Decode(std::string_view text);

bool IsValidUtf8(std::string_view text);

// True where the text begins with U+FEFF.
bool HasByteOrderMark(std::string_view text);

}  // namespace phraseweld::reference

#endif  // PHRASEWELD_TESTS_REFERENCE_UTF8_H_
