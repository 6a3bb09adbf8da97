#ifndef PHRASEWELD_READ_JSON_ESCAPE_H_
#define PHRASEWELD_READ_JSON_ESCAPE_H_

#include <cstdint>
#include <string>
#include <string_view>

namespace phraseweld {

// An escape of a JSON string (RFC 8259, section 7); a surrogate pair is one.
struct JsonEscape {
  char32_t code_point = 0;
  uint32_t source_bytes = 0;  // 2, 6 or 12
};

// The escape whose backslash is at `at`, which is in a valid JSON string without lone surrogates.
JsonEscape ReadJsonEscape(const char* at);

// The bytes of a code point in UTF-8: 1 to 4.
constexpr uint32_t Utf8Bytes(char32_t code_point) {
  if (code_point < 0x80) return 1;
  if (code_point < 0x800) return 2;
  return code_point < 0x10000 ? 3 : 4;
}

// Appends what the inside of a valid JSON string stands for. Never longer than `raw`.
void AppendUnescaped(std::string_view raw, std::string* out);

// Whether valid JSON has the escape of a surrogate that is not half of a pair.
bool HasLoneSurrogate(std::string_view json);

}  // namespace phraseweld

#endif  // PHRASEWELD_READ_JSON_ESCAPE_H_
