#include <unicode/uchar.h>
#include <unicode/utf8.h>

#include "words/splitter.h"

namespace phraseweld {

bool GapIsOpen(std::string_view gap, bool join_hyphens) {
  if (join_hyphens && (gap == "-" || gap == "\u2010" || gap == "\u2011")) return true;
  const auto length = static_cast<int32_t>(gap.size());
  int line_breaks = 0;
  for (int32_t at = 0; at < length;) {
    UChar32 code_point;
    U8_NEXT(gap.data(), at, length, code_point);
    if (code_point == ' ') continue;
    if (code_point == '\r' || code_point == '\n' || code_point == 0x2028) {
      if (code_point == '\r' && at < length && gap[static_cast<size_t>(at)] == '\n') ++at;
      if (++line_breaks > 1) return false;
    } else if (code_point < 0x80 || u_charType(code_point) != U_SPACE_SEPARATOR) {
      return false;  // other ASCII, and the negative values of invalid bytes
    }
  }
  return true;
}

}  // namespace phraseweld
