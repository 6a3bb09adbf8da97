#include <array>
#include <optional>

#include "base/strings.h"
#include "base/utf8.h"
#include "run/context_finder.h"

namespace phraseweld {
namespace {

struct NamedBreak {
  char32_t point;
  std::string_view name;
};

constexpr std::array<NamedBreak, 44> kNames = {{
    {',', "a comma"},
    {'.', "a full stop"},
    {';', "a semicolon"},
    {':', "a colon"},
    {'?', "a question mark"},
    {'!', "an exclamation mark"},
    {'(', "a bracket"},
    {')', "a bracket"},
    {'[', "a bracket"},
    {']', "a bracket"},
    {'{', "a bracket"},
    {'}', "a bracket"},
    {'"', "a quotation mark"},
    {'\'', "an apostrophe"},
    {'/', "a slash"},
    {'\\', "a backslash"},
    {'-', "a hyphen"},
    {'*', "an asterisk"},
    {'&', "an ampersand"},
    {'%', "a percent sign"},
    {'=', "an equals sign"},
    {'+', "a plus sign"},
    {'<', "a bracket"},
    {'>', "a bracket"},
    {'|', "a bar"},
    {'#', "a number sign"},
    {'\t', "a tab"},
    {0x2010, "a hyphen"},
    {0x2011, "a hyphen"},
    {0x2012, "a dash"},
    {0x2013, "a dash"},
    {0x2014, "a dash"},
    {0x2015, "a dash"},
    {0x2018, "a quotation mark"},
    {0x2019, "an apostrophe"},
    {0x201A, "a quotation mark"},
    {0x201C, "a quotation mark"},
    {0x201D, "a quotation mark"},
    {0x201E, "a quotation mark"},
    {0xAB, "a quotation mark"},
    {0xBB, "a quotation mark"},
    {0x2026, "an ellipsis"},
    {0x2022, "a bullet"},
    {0xB0, "a degree sign"},
}};

bool IsSpace(char32_t point) {
  return point == ' ' || point == '\n' || point == '\r' || point == 0xA0 || point == 0x3000 ||
         point == 0x202F || point == 0x205F || point == 0x1680 || point == 0x2028 ||
         (point >= 0x2000 && point <= 0x200A);
}

}  // namespace

std::string BreakName(std::string_view gap) {
  for (size_t at = 0; at < gap.size();) {
    const size_t begin = at;
    const std::optional<char32_t> point = NextCodePoint(gap, &at);
    if (!point) return "a byte that is no UTF-8";
    if (IsSpace(*point)) continue;
    for (const NamedBreak& named : kNames) {
      if (named.point == *point) return std::string(named.name);
    }
    if (IsControl(*point)) return "a control character";
    return Concat("'", gap.substr(begin, at - begin), "'");
  }
  return "a blank line";
}

}  // namespace phraseweld
