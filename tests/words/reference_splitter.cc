#include "words/reference_splitter.h"

#include <unicode/brkiter.h>
#include <unicode/ubrk.h>
#include <unicode/unistr.h>
#include <unicode/utf8.h>

#include <memory>

#include "absl/strings/str_format.h"

namespace phraseweld {
namespace {

icu::BreakIterator* Iterator() {
  static icu::BreakIterator* const iterator = [] {
    UErrorCode error = U_ZERO_ERROR;
    auto* made = icu::BreakIterator::createWordInstance(icu::Locale::getRoot(), error);
    // Loads every dictionary, since a mark that scripts share is treated otherwise before.
    made->setText(icu::UnicodeString(u"กก ກກ កក ကက 一一 가가"));
    while (made->next() != icu::BreakIterator::DONE) {
    }
    return made;
  }();
  return iterator;
}

void AppendSegments(std::string_view text, uint32_t base, std::vector<Segment>* segments) {
  if (text.empty()) return;
  const auto length = static_cast<int32_t>(text.size());
  icu::UnicodeString units;
  std::vector<uint32_t> offsets;
  for (int32_t at = 0; at < length;) {
    const auto begin = base + static_cast<uint32_t>(at);
    UChar32 code_point;
    U8_NEXT(text.data(), at, length, code_point);
    units.append(code_point);
    offsets.resize(static_cast<size_t>(units.length()), begin);
  }
  offsets.push_back(base + static_cast<uint32_t>(length));
  icu::BreakIterator* iterator = Iterator();
  iterator->setText(units);
  for (int32_t begin = 0, end = iterator->next(); end != icu::BreakIterator::DONE;
       begin = end, end = iterator->next()) {
    segments->push_back({offsets[static_cast<size_t>(begin)], offsets[static_cast<size_t>(end)],
                         iterator->getRuleStatus()});
  }
}

std::string Utf8(char32_t code_point) {
  std::string out;
  icu::UnicodeString(static_cast<UChar32>(code_point)).toUTF8String(out);
  return out;
}

}  // namespace

std::vector<Segment> ReferenceSegments(std::string_view text) {
  std::vector<Segment> segments;
  const auto length = static_cast<int32_t>(text.size());
  int32_t begin = 0;
  for (int32_t at = 0; at < length;) {
    const int32_t start = at;
    UChar32 code_point;
    U8_NEXT(text.data(), at, length, code_point);
    if (code_point >= 0) continue;
    AppendSegments(text.substr(static_cast<size_t>(begin), static_cast<size_t>(start - begin)),
                   static_cast<uint32_t>(begin), &segments);
    begin = at;
  }
  AppendSegments(text.substr(static_cast<size_t>(begin)), static_cast<uint32_t>(begin), &segments);
  return segments;
}

std::vector<WordSpan> ReferenceWords(std::string_view text, const WordOptions& options) {
  WordFolder folder(options);
  std::vector<WordSpan> words;
  for (const Segment& segment : ReferenceSegments(text)) {
    if (segment.status < UBRK_WORD_NUMBER) continue;
    if (folder.Form(text.substr(segment.begin, segment.end - segment.begin)).empty()) continue;
    words.push_back(
        {segment.begin, segment.end & 0x7FFFFFFFu, segment.status < UBRK_WORD_NUMBER_LIMIT});
  }
  return words;
}

std::vector<WordSpan> WordsOf(WordStream* stream, std::string_view text, size_t capacity) {
  std::vector<WordSpan> words;
  std::vector<WordSpan> buffer(capacity);
  stream->Start(text);
  while (const size_t count = stream->Next(buffer.data(), buffer.size())) {
    words.insert(words.end(), buffer.begin(), buffer.begin() + static_cast<ptrdiff_t>(count));
  }
  return words;
}

std::string Show(std::string_view text, const std::vector<WordSpan>& words) {
  std::string out;
  const auto append = [&](size_t begin, size_t end) {
    for (const char byte : text.substr(begin, end - begin)) {
      if (byte >= ' ' && byte <= '~') {
        out += byte;
      } else {
        absl::StrAppendFormat(&out, "\\x%02X", static_cast<unsigned char>(byte));
      }
    }
  };
  size_t done = 0;
  for (const WordSpan& word : words) {
    append(done, word.begin);
    out += word.number ? "[#" : "[";
    append(word.begin, word.end);
    out += ']';
    done = word.end;
  }
  append(done, text.size());
  return out;
}

const std::vector<std::string>& Representatives() {
  static const std::vector<std::string>& pieces = *new std::vector<std::string>{
      "a",          "1",          "_",      ".",      "'",      ",",        " ",
      "\n",         "-",          "\"",     ":",      "@",      "\u00E9",   "\u0436",
      "\u00D7",     "\u0300",     "\u200D", "\u00AD", "\u05D0", "\u30AB",   "\u3042",
      "\u4E00",     "\u3005",     "\uAC00", "\u0E01", "\u0E31", "\u2019",   "\u00B7",
      "\u066C",     "\u0661",     "\u203F", "\u3000", "\u0085", "\u24C2",   "\U0001F600",
      "\U0001F1E6", "\u115F",     "\u30FC", "\u03B1", "\xFF",   "\xC3",     "\xE2\x80",
      "\r",         "\u102B",     "\u2E80", "\u3031", "\u200B", "\u19DA",   "\u00F7",
      "\u07FA",     "\U00016FE4", "Z",      ";",      "\t",     "\xF0\x9F", std::string(1, '\0'),
  };
  return pieces;
}

std::string RandomText(std::mt19937_64* random, size_t count) {
  // Ranges that hold letters, marks and punctuation of many scripts, with dictionary scripts and
  // unassigned code points among them.
  static constexpr struct {
    char32_t first, last;
  } kRanges[] = {{0x20, 0x7E},       {0x80, 0x24F},      {0x250, 0x36F},     {0x370, 0x52F},
                 {0x590, 0x6FF},     {0x900, 0xDFF},     {0xE00, 0xEFF},     {0x1000, 0x109F},
                 {0x1100, 0x11FF},   {0x1780, 0x17FF},   {0x1950, 0x19DF},   {0x1E00, 0x1FFF},
                 {0x2000, 0x206F},   {0x2100, 0x214F},   {0x3000, 0x30FF},   {0x4E00, 0x9FFF},
                 {0xAC00, 0xD7A3},   {0xFE00, 0xFE6F},   {0xFF00, 0xFFEF},   {0x1F000, 0x1F9FF},
                 {0x20000, 0x2A6DF}, {0xE0000, 0xE01EF}, {0x1F1E6, 0x1F1FF}, {0x0, 0x10FFFF}};
  const auto below = [random](uint64_t limit) { return (*random)() % limit; };
  std::string text;
  // A text keeps to few kinds, so that long stretches of one kind occur as well as mixtures.
  const uint64_t kinds = 1 + below(4);
  std::vector<uint64_t> chosen;
  for (uint64_t i = 0; i < kinds; ++i) chosen.push_back(below(std::size(kRanges) + 6));
  for (size_t i = 0; i < count; ++i) {
    const uint64_t kind = chosen[below(kinds)];
    if (kind < std::size(kRanges)) {
      const auto& range = kRanges[kind];
      const auto code_point =
          static_cast<char32_t>(range.first + below(range.last - range.first + 1));
      if (code_point >= 0xD800 && code_point <= 0xDFFF) continue;
      text += Utf8(code_point);
    } else if (kind == std::size(kRanges)) {
      text += static_cast<char>(below(256));
    } else if (kind == std::size(kRanges) + 1) {
      for (uint64_t letters = 1 + below(9); letters > 0; --letters) {
        text += static_cast<char>('a' + below(26));
      }
      text += ' ';
    } else if (kind == std::size(kRanges) + 2) {
      text += "aB1_.',; \n-@"[below(12)];
    } else {
      text += Representatives()[below(Representatives().size())];
    }
  }
  return text;
}

}  // namespace phraseweld
