#ifndef PHRASEWELD_BASE_JSON_H_
#define PHRASEWELD_BASE_JSON_H_

#include <string>
#include <string_view>

#include "base/strings.h"

namespace phraseweld {

// Appends `text` as the inside of a JSON string: only the quotation mark, the backslash and
// U+0000..U+001F are escaped.
inline void AppendJsonText(std::string* out, std::string_view text) {
  static constexpr char kDigits[] = "0123456789abcdef";
  size_t copied = 0;
  for (size_t i = 0; i < text.size(); ++i) {
    const char c = text[i];
    const auto byte = static_cast<unsigned char>(c);
    if (byte >= 0x20 && c != '"' && c != '\\') continue;
    out->append(text, copied, i - copied);
    copied = i + 1;
    *out += '\\';
    switch (c) {
      case '"':
      case '\\':
        *out += c;
        break;
      case '\b':
        *out += 'b';
        break;
      case '\f':
        *out += 'f';
        break;
      case '\n':
        *out += 'n';
        break;
      case '\r':
        *out += 'r';
        break;
      case '\t':
        *out += 't';
        break;
      default:
        *out += "u00";
        *out += kDigits[byte >> 4];
        *out += kDigits[byte & 15];
    }
  }
  out->append(text, copied);
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

// Appends `"key":count`.
template <typename Integer>
void AppendJsonCount(std::string* out, std::string_view key, Integer count) {
  AppendJsonKey(out, key);
  AppendTo(out, count);
}

// Appends `"key":"text"`.
inline void AppendJsonString(std::string* out, std::string_view key, std::string_view text) {
  AppendJsonKey(out, key);
  AppendJsonString(out, text);
}

// Appends `"key":[...]`, with append(item) for each item.
template <typename Items, typename Append>
void AppendJsonList(std::string* out, std::string_view key, const Items& items, Append&& append) {
  AppendJsonKey(out, key);
  *out += '[';
  bool first = true;
  for (const auto& item : items) {
    if (!first) *out += ',';
    first = false;
    append(item);
  }
  *out += ']';
}

}  // namespace phraseweld

#endif  // PHRASEWELD_BASE_JSON_H_
