#ifndef PHRASEWELD_BASE_STRINGS_H_
#define PHRASEWELD_BASE_STRINGS_H_

#include <string>
#include <string_view>
#include <type_traits>
#include <vector>

#include "absl/strings/str_cat.h"
#include "absl/strings/string_view.h"

namespace phraseweld {

// Debian builds Abseil with a string_view of its own, which std::string_view does not convert to;
// these take the standard one. All pure; any thread.

namespace internal {
template <class T>
decltype(auto) Piece(const T& value) {
  if constexpr (std::is_same_v<T, std::string_view>) {
    return absl::string_view(value.data(), value.size());
  } else {
    return (value);
  }
}
}  // namespace internal

// Texts and whole numbers, one after another.
template <class... Pieces>
std::string Concat(const Pieces&... pieces) {
  return absl::StrCat(internal::Piece(pieces)...);
}

template <class... Pieces>
void AppendTo(std::string* text, const Pieces&... pieces) {
  absl::StrAppend(text, internal::Piece(pieces)...);
}

template <class Range>
std::string Join(const Range& texts, std::string_view between) {
  std::string joined;
  bool first = true;
  for (const auto& text : texts) {
    if (!first) joined.append(between);
    joined.append(text);
    first = false;
  }
  return joined;
}

// The pieces between the separators; one more than there are separators. They point into `text`.
std::vector<std::string_view> Split(std::string_view text, char separator);

bool Contains(std::string_view text, std::string_view part);

// Without the blanks, tabs and line ends at both ends.
std::string_view Strip(std::string_view text);

// With A-Z as a-z; other bytes as they are.
std::string AsciiLower(std::string_view text);

}  // namespace phraseweld

#endif  // PHRASEWELD_BASE_STRINGS_H_
