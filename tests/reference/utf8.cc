#include "reference/utf8.h"

#include <unicode/utf8.h>

namespace phraseweld::reference {

std::vector<Character> Decode(std::string_view text) {
  std::vector<Character> characters;
  size_t next = 0;
  while (next < text.size()) {
    const size_t begin = next;
    int32_t code_point = 0;
    U8_NEXT(text.data(), next, text.size(), code_point);
    characters.push_back({code_point < 0 ? kInvalid : code_point, begin, next});
  }
  return characters;
}

bool IsValidUtf8(std::string_view text) {
  for (const Character& character : Decode(text)) {
    if (character.code_point == kInvalid) return false;
  }
  return true;
}

bool HasByteOrderMark(std::string_view text) { return text.substr(0, 3) == "\xEF\xBB\xBF"; }

}  // namespace phraseweld::reference
