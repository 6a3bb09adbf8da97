#ifndef PHRASEWELD_TESTS_REFERENCE_JSON_WRITER_H_
#define PHRASEWELD_TESTS_REFERENCE_JSON_WRITER_H_

#include <cstdint>
#include <string>
#include <string_view>

namespace phraseweld::reference {

// The text with `"`, `\` and the controls below U+0020 escaped, without quotes around it.
std::string Escape(std::string_view text);

// The value rounded to 9 decimals, halves away from zero, in fixed notation without trailing zeros
// or point.
std::string NineDecimals(double value);

// The number that NineDecimals(value) spells.
double RoundToNineDecimals(double value);

// A JSON object in the making: members in the order in which they are added, no blanks.
class JsonObject {
 public:
  JsonObject& Text(std::string_view key, std::string_view value);
  JsonObject& Count(std::string_view key, uint64_t value);
  JsonObject& Decimal(std::string_view key, double value);
  // `value` is JSON already.
  JsonObject& Json(std::string_view key, std::string_view value);

  std::string Finish() const { return std::string("{").append(members_).append("}"); }

 private:
  std::string members_;
};

}  // namespace phraseweld::reference

#endif  // PHRASEWELD_TESTS_REFERENCE_JSON_WRITER_H_
