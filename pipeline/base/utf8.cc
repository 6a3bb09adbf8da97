#include "base/utf8.h"

#include <algorithm>
#include <array>

namespace phraseweld {
namespace {

struct Block {
  char32_t first;
  char32_t last;
};

// Blocks whose letters are W or F in Unicode's EastAsianWidth.txt.
constexpr std::array<Block, 12> kWide = {{{0x1100, 0x115F},      // Hangul Jamo, leading consonants
                                          {0x2E80, 0x303E},      // CJK radicals, punctuation
                                          {0x3041, 0x33FF},      // kana, CJK symbols
                                          {0x3400, 0x4DBF},      // CJK extension A
                                          {0x4E00, 0x9FFF},      // CJK
                                          {0xA000, 0xA4CF},      // Yi
                                          {0xAC00, 0xD7A3},      // Hangul syllables
                                          {0xF900, 0xFAFF},      // CJK compatibility
                                          {0xFE30, 0xFE6F},      // CJK compatibility forms
                                          {0xFF00, 0xFF60},      // full-width forms
                                          {0x1F300, 0x1F64F},    // pictographs, emoticons
                                          {0x20000, 0x3FFFD}}};  // CJK extensions B and later

// Blocks of combining marks, zero-width spaces and joiners, variation selectors.
constexpr std::array<Block, 8> kZero = {{{0x0300, 0x036F},
                                         {0x1AB0, 0x1AFF},
                                         {0x1DC0, 0x1DFF},
                                         {0x200B, 0x200F},
                                         {0x20D0, 0x20FF},
                                         {0xFE00, 0xFE0F},
                                         {0xFE20, 0xFE2F},
                                         {0xFEFF, 0xFEFF}}};

template <size_t kSize>
bool InAny(const std::array<Block, kSize>& blocks, char32_t point) {
  return std::any_of(blocks.begin(), blocks.end(), [point](const Block& block) {
    return point >= block.first && point <= block.last;
  });
}

size_t PointWidth(std::optional<char32_t> point) {
  if (!point.has_value()) return 1;
  if (InAny(kZero, *point)) return 0;
  return InAny(kWide, *point) ? 2 : 1;
}

}  // namespace

std::optional<char32_t> NextCodePoint(std::string_view text, size_t* at) {
  const auto byte = [text](size_t index) -> unsigned {
    return index < text.size() ? static_cast<unsigned char>(text[index]) : 0u;
  };
  const size_t start = *at;
  const unsigned lead = byte(start);
  *at = start + 1;
  if (lead < 0x80) return lead;
  // Table 3-7: the second byte's range depends on the first; the rest are 80..BF.
  const size_t length = lead >= 0xF0 ? 4 : lead >= 0xE0 ? 3 : 2;
  if (lead < 0xC2 || lead > 0xF4) return std::nullopt;
  const unsigned low = lead == 0xE0 ? 0xA0 : lead == 0xF0 ? 0x90 : 0x80;
  const unsigned high = lead == 0xED ? 0x9F : lead == 0xF4 ? 0x8F : 0xBF;
  char32_t point = lead & (0x7Fu >> length);
  for (size_t i = 1; i < length; ++i) {
    const unsigned next = byte(start + i);
    if (next < (i == 1 ? low : 0x80) || next > (i == 1 ? high : 0xBF)) return std::nullopt;
    point = point << 6 | (next & 0x3F);
  }
  *at = start + length;
  return point;
}

std::optional<size_t> FirstInvalidUtf8(std::string_view text) {
  for (size_t at = 0; at < text.size();) {
    const size_t start = at;
    if (!NextCodePoint(text, &at).has_value()) return start;
  }
  return std::nullopt;
}

size_t CodePoints(std::string_view text) {
  size_t count = 0;
  for (size_t at = 0; at < text.size(); ++count) NextCodePoint(text, &at);
  return count;
}

size_t DisplayWidth(std::string_view text) {
  size_t width = 0;
  for (size_t at = 0; at < text.size();) width += PointWidth(NextCodePoint(text, &at));
  return width;
}

std::string_view FitWidth(std::string_view text, size_t width) {
  size_t used = 0;
  for (size_t at = 0; at < text.size();) {
    const size_t start = at;
    used += PointWidth(NextCodePoint(text, &at));
    if (used > width) return text.substr(0, start);
  }
  return text;
}

}  // namespace phraseweld
