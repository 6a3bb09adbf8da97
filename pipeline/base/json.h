#ifndef PHRASEWELD_BASE_JSON_H_
#define PHRASEWELD_BASE_JSON_H_

#include <string>
#include <string_view>

namespace phraseweld {

// Appends `text` as the inside of a JSON string: only the quotation mark, the backslash and
// U+0000..U+001F are escaped.
inline void AppendJsonText(std::string* out, std::string_view text) {
  static constexpr char kDigits[] = "0123456789abcdef";
  for (char c : text) {
    const auto byte = static_cast<unsigned char>(c);
    switch (c) {
      case '"':
        *out += "\\\"";
        break;
      case '\\':
        *out += "\\\\";
        break;
      case '\b':
        *out += "\\b";
        break;
      case '\f':
        *out += "\\f";
        break;
      case '\n':
        *out += "\\n";
        break;
      case '\r':
        *out += "\\r";
        break;
      case '\t':
        *out += "\\t";
        break;
      default:
        if (byte < 0x20) {
          *out += "\\u00";
          *out += kDigits[byte >> 4];
          *out += kDigits[byte & 15];
        } else {
          *out += c;
        }
    }
  }
}

inline void AppendJsonString(std::string* out, std::string_view text) {
  *out += '"';
  AppendJsonText(out, text);
  *out += '"';
}

// Appends `,"key":` or, at the start of an object, `"key":`.
inline void AppendJsonKey(std::string* out, std::string_view key) {
  if (!out->empty() && out->back() != '{') *out += ',';
  *out += '"';
  *out += key;
  *out += "\":";
}

}  // namespace phraseweld

#endif  // PHRASEWELD_BASE_JSON_H_
