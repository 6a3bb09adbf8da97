#ifndef PHRASEWELD_TESTS_REFERENCE_JSON_READER_H_
#define PHRASEWELD_TESTS_REFERENCE_JSON_READER_H_

#include <cstddef>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

namespace phraseweld::reference {

// A JSON string: its text, and where each byte of the text comes from.
struct JsonText {
  std::string text;
  // place[i]: offset in the line of the character that byte i of the text belongs to, as it is
  // written there (an escape, say); place[text.size()]: offset of the closing quote.
  std::vector<size_t> place;
};

enum class JsonKind { kString, kNumber, kTrueOrFalse, kNull, kObject, kArray };

struct JsonMember {
  std::string key;
  JsonKind kind;
  JsonText string;  // only where kind is kString
  std::string raw;  // the value as written
};

// The members of the object that a line holds, in order, duplicates and all; nothing where the
// line is not one JSON object by RFC 8259, holds invalid UTF-8, or escapes a lone surrogate.
std::optional<std::vector<JsonMember>> ReadJsonObject(std::string_view line);

}  // namespace phraseweld::reference

#endif  // PHRASEWELD_TESTS_REFERENCE_JSON_READER_H_
