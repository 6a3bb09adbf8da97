#include "reference/words.h"

#include <unicode/brkiter.h>
#include <unicode/locid.h>
#include <unicode/normalizer2.h>
#include <unicode/ubrk.h>
#include <unicode/uchar.h>
#include <unicode/unistr.h>

#include <memory>
#include <stdexcept>

#include "reference/utf8.h"

namespace phraseweld::reference {
namespace {

void Check(UErrorCode status) {
  if (U_FAILURE(status)) throw std::runtime_error(std::string("ICU: ") + u_errorName(status));
}

// Section 2: "U+2019 and U+02BC in a form become U+0027".
icu::UnicodeString WithPlainApostrophes(const icu::UnicodeString& form) {
  icu::UnicodeString plain = form;
  plain.findAndReplace(icu::UnicodeString(UChar32{0x2019}), icu::UnicodeString(UChar32{0x27}));
  plain.findAndReplace(icu::UnicodeString(UChar32{0x02BC}), icu::UnicodeString(UChar32{0x27}));
  return plain;
}

// Section 2: "decomposed, characters of category Mn are dropped, and it is composed again".
icu::UnicodeString WithoutAccents(const icu::UnicodeString& form) {
  UErrorCode status = U_ZERO_ERROR;
  const icu::UnicodeString decomposed =
      icu::Normalizer2::getNFDInstance(status)->normalize(form, status);
  icu::UnicodeString kept;
  for (int32_t i = 0; i < decomposed.length(); i = decomposed.moveIndex32(i, 1)) {
    const UChar32 c = decomposed.char32At(i);
    if (u_charType(c) != U_NON_SPACING_MARK) kept.append(c);
  }
  icu::UnicodeString composed = icu::Normalizer2::getNFCInstance(status)->normalize(kept, status);
  Check(status);
  return composed;
}

// Section 2: "The word's form".
std::string Form(const icu::UnicodeString& word, const Job::Words& options) {
  UErrorCode status = U_ZERO_ERROR;
  icu::UnicodeString form;
  switch (options.fold) {
    case Fold::kCompatibilityCase:
      form = icu::Normalizer2::getNFKCCasefoldInstance(status)->normalize(word, status);
      break;
    case Fold::kCase: {
      icu::UnicodeString folded = word;
      folded.foldCase(U_FOLD_CASE_DEFAULT);
      form = icu::Normalizer2::getNFCInstance(status)->normalize(folded, status);
      break;
    }
    case Fold::kNone:
      form = icu::Normalizer2::getNFCInstance(status)->normalize(word, status);
      break;
  }
  Check(status);
  if (options.strip_accents) form = WithoutAccents(form);
  if (options.fold != Fold::kNone) form = WithPlainApostrophes(form);
  std::string bytes;
  form.toUTF8String(bytes);
  return bytes;
}

}  // namespace

// Section 2: "Segments come from the default word boundaries of UAX #29 in ICU's root word break
// iterator. A segment is a word when its ICU rule status is UBRK_WORD_NUMBER or above."
std::vector<Word> FindWords(std::string_view text, const Job::Words& options) {
  icu::UnicodeString utf16;
  std::vector<size_t> byte_of_unit;
  for (const Character& character : Decode(text)) {
    // U+FFFD is part of no word, so it holds the place of bytes that are not valid.
    utf16.append(UChar32{character.code_point == kInvalid ? 0xFFFD : character.code_point});
    while (byte_of_unit.size() < static_cast<size_t>(utf16.length())) {
      byte_of_unit.push_back(character.begin);
    }
  }
  byte_of_unit.push_back(text.size());

  UErrorCode status = U_ZERO_ERROR;
  std::unique_ptr<icu::BreakIterator> iterator(
      icu::BreakIterator::createWordInstance(icu::Locale::getRoot(), status));
  Check(status);
  iterator->setText(utf16);

  std::vector<Word> words;
  int32_t begin = iterator->first();
  for (int32_t end = iterator->next(); end != icu::BreakIterator::DONE; end = iterator->next()) {
    const int rule_status = iterator->getRuleStatus();
    if (rule_status >= UBRK_WORD_NUMBER) {
      const std::string form = Form(utf16.tempSubStringBetween(begin, end), options);
      if (!form.empty()) {  // "A word whose form is empty counts as gap."
        words.push_back({byte_of_unit[static_cast<size_t>(begin)],
                         byte_of_unit[static_cast<size_t>(end)], form, rule_status});
      }
    }
    begin = end;
  }
  return words;
}

bool IsHyphen(std::string_view gap) {
  const std::vector<Character> characters = Decode(gap);
  if (characters.size() != 1) return false;
  const int32_t c = characters[0].code_point;
  return c == 0x2D || c == 0x2010 || c == 0x2011;
}

// Section 2: "A gap is open when it is (a) (b) (c). Any other gap is a break."
bool IsOpenGap(std::string_view gap, Hyphens hyphens) {
  if (gap.empty()) return true;                                 // (a)
  if (hyphens == Hyphens::kJoin && IsHyphen(gap)) return true;  // (c)
  int line_breaks = 0;                                          // (b)
  int32_t before = 0;
  for (const Character& character : Decode(gap)) {
    const int32_t c = character.code_point;
    if (c == kInvalid) return false;
    if (c == '\n' && before == '\r') {
      // The second half of a CRLF, which is one line break.
    } else if (c == '\n' || c == '\r' || c == 0x2028) {
      ++line_breaks;
    } else if (u_charType(c) != U_SPACE_SEPARATOR) {
      return false;
    }
    before = c;
  }
  return line_breaks <= 1;
}

bool IsNumberStatus(int rule_status) {
  return rule_status >= UBRK_WORD_NUMBER && rule_status < UBRK_WORD_NUMBER_LIMIT;
}

}  // namespace phraseweld::reference
