#include "reference/json_writer.h"

#include <cmath>
#include <cstdio>
#include <cstdlib>

namespace phraseweld::reference {

std::string Escape(std::string_view text) {
  std::string escaped;
  for (const char c : text) {
    switch (c) {
      case '"':
        escaped += "\\\"";
        break;
      case '\\':
        escaped += "\\\\";
        break;
      case '\b':
        escaped += "\\b";
        break;
      case '\f':
        escaped += "\\f";
        break;
      case '\n':
        escaped += "\\n";
        break;
      case '\r':
        escaped += "\\r";
        break;
      case '\t':
        escaped += "\\t";
        break;
      default:
        if (static_cast<unsigned char>(c) < 0x20) {
          const char* const kDigits = "0123456789abcdef";
          escaped += "\\u00";
          escaped += kDigits[c / 16];
          escaped += kDigits[c % 16];
        } else {
          escaped += c;
        }
    }
  }
  return escaped;
}

// Decision 4: times a thousand million, rounded to a whole number with halves away from zero, and
// back. A value too large to have nine decimals stays.
double RoundToNineDecimals(double value) {
  const double scaled = value * 1e9;
  if (std::fabs(scaled) < 9007199254740992.0) value = std::round(scaled) / 1e9;
  return value == 0 ? 0 : value;
}

std::string NineDecimals(double value) {
  char fixed[400];
  std::snprintf(fixed, sizeof(fixed), "%.9f", RoundToNineDecimals(value));
  std::string digits = fixed;
  while (digits.back() == '0') digits.pop_back();
  if (digits.back() == '.') digits.pop_back();
  return digits;
}

JsonObject& JsonObject::Text(std::string_view key, std::string_view value) {
  return Json(key, std::string("\"").append(Escape(value)).append("\""));
}

JsonObject& JsonObject::Count(std::string_view key, uint64_t value) {
  return Json(key, std::to_string(value));
}

JsonObject& JsonObject::Decimal(std::string_view key, double value) {
  return Json(key, NineDecimals(value));
}

JsonObject& JsonObject::Json(std::string_view key, std::string_view value) {
  if (!members_.empty()) members_ += ",";
  members_ += '"';
  members_ += Escape(key);
  members_ += "\":";
  members_ += value;
  return *this;
}

}  // namespace phraseweld::reference
