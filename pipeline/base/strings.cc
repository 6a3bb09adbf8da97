#include "base/strings.h"

#include "absl/strings/ascii.h"

namespace phraseweld {

std::vector<std::string_view> Split(std::string_view text, char separator) {
  std::vector<std::string_view> pieces;
  for (size_t start = 0;;) {
    const size_t end = text.find(separator, start);
    pieces.push_back(text.substr(start, end - start));
    if (end == std::string_view::npos) return pieces;
    start = end + 1;
  }
}

bool Contains(std::string_view text, std::string_view part) {
  return text.find(part) != std::string_view::npos;
}

std::string_view Strip(std::string_view text) {
  constexpr std::string_view kBlanks = " \t\n\v\f\r";
  const size_t start = text.find_first_not_of(kBlanks);
  if (start == std::string_view::npos) return text.substr(text.size());
  return text.substr(start, text.find_last_not_of(kBlanks) + 1 - start);
}

std::string AsciiLower(std::string_view text) {
  std::string lowered(text);
  absl::AsciiStrToLower(&lowered);
  return lowered;
}

}  // namespace phraseweld
