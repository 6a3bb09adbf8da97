#ifndef PHRASEWELD_BASE_UTF8_H_
#define PHRASEWELD_BASE_UTF8_H_

#include <cstddef>
#include <optional>
#include <string>
#include <string_view>

namespace phraseweld {

inline constexpr std::string_view kByteOrderMark = "\xEF\xBB\xBF";

// Enough of Unicode to check short texts and to point at places in them. (Texts of the corpus are
// the business of the room `words`.) All pure; any thread.

// The code point that starts at text[*at], with *at moved behind it; none, with *at moved by one
// byte, where no well-formed UTF-8 sequence (Unicode 15.0, table 3-7) starts. *at < text.size().
std::optional<char32_t> NextCodePoint(std::string_view text, size_t* at);

// The offset of the first byte that is not part of well-formed UTF-8, or none.
std::optional<size_t> FirstInvalidUtf8(std::string_view text);

// The number of code points; a byte outside well-formed UTF-8 counts as one.
size_t CodePoints(std::string_view text);

// Whether `point` is of category Cc: U+0000..U+001F, U+007F..U+009F.
constexpr bool IsControl(char32_t point) { return point < 0x20 || (point >= 0x7F && point < 0xA0); }

// Columns that `text` takes in a terminal: two for the blocks of East Asian wide characters and
// emoji, none for the blocks of combining marks and for zero-width characters, one for all else.
// Goes by blocks, not by character, which is near enough to place a caret.
size_t DisplayWidth(std::string_view text);

// As much of the front of `text` as fits `width` columns, cut between code points.
std::string_view FitWidth(std::string_view text, size_t width);

}  // namespace phraseweld

#endif  // PHRASEWELD_BASE_UTF8_H_
