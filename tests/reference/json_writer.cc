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

std::string NineDecimals(double value) {
  // A double next to a half of the ninth decimal is either exactly there or at least 1e-35 away
  // (it is a multiple of 2^-84 where it is above 5e-10), so 60 decimals tell on which side it is.
  char exact[400];
  std::snprintf(exact, sizeof(exact), "%.60f", std::fabs(value));
  std::string digits = exact;
  const size_t point = digits.find('.');
  const bool up = digits[point + 10] >= '5';
  digits.resize(point + 10);
  if (up) {
    size_t i = digits.size();
    while (i > 0) {
      --i;
      if (digits[i] == '.') continue;
      if (digits[i] != '9') {
        ++digits[i];
        break;
      }
      digits[i] = '0';
      if (i == 0) digits.insert(digits.begin(), '1');
    }
  }
  while (digits.back() == '0') digits.pop_back();
  if (digits.back() == '.') digits.pop_back();
  if (value < 0 && digits != "0") digits.insert(digits.begin(), '-');
  return digits;
}

double RoundToNineDecimals(double value) {
  return std::strtod(NineDecimals(value).c_str(), nullptr);
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
