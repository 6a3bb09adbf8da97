#include "read/json_escape.h"

#include <cstring>

namespace phraseweld {
namespace {

uint32_t HexDigit(char digit) {
  if (digit <= '9') return static_cast<uint32_t>(digit - '0');
  return static_cast<uint32_t>((digit | 0x20) - 'a') + 10;
}

// The unit of UTF-16 whose \u is at `at`.
uint32_t ReadUnit(const char* at) {
  return HexDigit(at[2]) << 12 | HexDigit(at[3]) << 8 | HexDigit(at[4]) << 4 | HexDigit(at[5]);
}

constexpr bool IsHighSurrogate(uint32_t unit) { return unit >= 0xD800 && unit < 0xDC00; }
constexpr bool IsLowSurrogate(uint32_t unit) { return unit >= 0xDC00 && unit < 0xE000; }

void AppendUtf8(char32_t code_point, std::string* out) {
  const uint32_t bytes = Utf8Bytes(code_point);
  if (bytes == 1) {
    out->push_back(static_cast<char>(code_point));
    return;
  }
  // The lead byte starts with as many ones as there are bytes (Unicode 15.0, table 3-6).
  const uint32_t lead = (0xF00u >> bytes) & 0xFF;
  out->push_back(static_cast<char>(lead | code_point >> (6 * (bytes - 1))));
  for (uint32_t left = bytes - 1; left-- > 0;) {
    out->push_back(static_cast<char>(0x80 | ((code_point >> (6 * left)) & 0x3F)));
  }
}

const char* FindBackslash(std::string_view text) {
  return static_cast<const char*>(std::memchr(text.data(), '\\', text.size()));
}

}  // namespace

JsonEscape ReadJsonEscape(const char* at) {
  switch (at[1]) {
    case 'b':
      return {'\b', 2};
    case 'f':
      return {'\f', 2};
    case 'n':
      return {'\n', 2};
    case 'r':
      return {'\r', 2};
    case 't':
      return {'\t', 2};
    case 'u': {
      const uint32_t unit = ReadUnit(at);
      if (!IsHighSurrogate(unit)) return {unit, 6};
      // The Unicode Standard, section 3.9, D91.
      return {0x10000 + ((unit - 0xD800) << 10) + (ReadUnit(at + 6) - 0xDC00), 12};
    }
    default:  // the quotation mark, the backslash and the slash stand for themselves
      return {static_cast<unsigned char>(at[1]), 2};
  }
}

void AppendUnescaped(std::string_view raw, std::string* out) {
  while (const char* backslash = FindBackslash(raw)) {
    const auto plain = static_cast<size_t>(backslash - raw.data());
    out->append(raw.substr(0, plain));
    const JsonEscape escape = ReadJsonEscape(backslash);
    AppendUtf8(escape.code_point, out);
    raw.remove_prefix(plain + escape.source_bytes);
  }
  out->append(raw);
}

bool HasLoneSurrogate(std::string_view json) {
  while (const char* backslash = FindBackslash(json)) {
    json.remove_prefix(static_cast<size_t>(backslash - json.data()));
    size_t source_bytes = 2;
    if (json[1] == 'u') {
      const uint32_t unit = ReadUnit(json.data());
      source_bytes = 6;
      if (IsLowSurrogate(unit)) return true;
      if (IsHighSurrogate(unit)) {
        // Valid JSON goes on at least with a quotation mark and a brace; six bytes need a look.
        if (json.size() < 12 || json[6] != '\\' || json[7] != 'u' ||
            !IsLowSurrogate(ReadUnit(json.data() + 6))) {
          return true;
        }
        source_bytes = 12;
      }
    }
    json.remove_prefix(source_bytes);
  }
  return false;
}

}  // namespace phraseweld
