#include <gtest/gtest.h>
#include <unicode/normalizer2.h>
#include <unicode/uchar.h>
#include <unicode/unistr.h>

#include <string>

#include "words/reference_splitter.h"

namespace phraseweld {
namespace {

std::string Form(const WordOptions& options, std::string_view word) {
  return WordFolder(options).Form(word);
}

constexpr WordOptions kCompatibility{.fold = FormFold::kCompatibilityCase};
constexpr WordOptions kCase{.fold = FormFold::kCase};
constexpr WordOptions kNone{.fold = FormFold::kNone};
constexpr WordOptions kStripped{.fold = FormFold::kCompatibilityCase, .strip_accents = true};
constexpr WordOptions kNoneStripped{.fold = FormFold::kNone, .strip_accents = true};

TEST(Forms, DontIsOneWordWithEitherApostrophe) {
  for (const WordOptions& options : {kCase, kCompatibility}) {
    for (const char* word : {"Don't", "don\u2019t", "DON\u02BCT"}) {
      EXPECT_EQ(Form(options, word), "don't");
    }
  }
  EXPECT_EQ(Form(kNone, "Don\u2019t"), "Don\u2019t");
}

TEST(Forms, FullFoldingMakesTwoLettersOfSharpS) {
  EXPECT_EQ(Form(kCase, "Stra\u00DFe"), "strasse");
  EXPECT_EQ(Form(kCompatibility, "STRA\u1E9EE"), "strasse");
  EXPECT_EQ(Form(kNone, "Stra\u00DFe"), "Stra\u00DFe");
}

TEST(Forms, OnlyCompatibilityMakesLettersOfALigatureAndDigitsOfWideDigits) {
  EXPECT_EQ(Form(kCompatibility, "\uFB01n"), "fin");
  EXPECT_EQ(Form(kCompatibility, "\uFF11\uFF12"), "12");
  EXPECT_EQ(Form(kNone, "\uFB01n"), "\uFB01n");
  EXPECT_EQ(Form(kCase, "\uFF11"), "\uFF11");
}

TEST(Forms, AccentsComposeAndAreStrippedOnlyOnRequest) {
  EXPECT_EQ(Form(kNone, "Cafe\u0301"), "Caf\u00E9");
  EXPECT_EQ(Form(kCase, "CAFE\u0301"), "caf\u00E9");
  EXPECT_EQ(Form(kNoneStripped, "Caf\u00E9"), "Cafe");
  EXPECT_EQ(Form(kStripped, "\u0130zmir \u1EC6"), "izmir e");
  // Letters that no decomposition gives are letters.
  EXPECT_EQ(Form(kStripped, "\u00D8re"), "\u00F8re");
}

TEST(Forms, OfIgnorableCharactersAloneAreEmpty) {
  EXPECT_EQ(Form(kCompatibility, "\u115F\u1160"), "");
  EXPECT_EQ(Form(kCompatibility, "so\u00ADft"), "soft");
  EXPECT_EQ(Form(kCase, "\u115F"), "\u115F");
  EXPECT_EQ(Form(kNoneStripped, "\u0301"), "");
}

TEST(Forms, AsciiIsFoldedAndNothingElse) {
  std::string ascii;
  for (char byte = 1; byte < 0x7F; ++byte) ascii += byte;
  std::string lower = ascii;
  for (char& byte : lower) {
    if (byte >= 'A' && byte <= 'Z') byte = static_cast<char>(byte - 'A' + 'a');
  }
  EXPECT_EQ(Form(kNoneStripped, ascii), ascii);
  EXPECT_EQ(Form(kCase, ascii), lower);
  EXPECT_EQ(Form(kStripped, ascii), lower);
}

// The form through ICU's UTF-16 functions, of which the library uses none.
std::string Utf16Form(const WordOptions& options, std::string_view word) {
  UErrorCode error = U_ZERO_ERROR;
  icu::UnicodeString form =
      icu::UnicodeString::fromUTF8({word.data(), static_cast<int32_t>(word.size())});
  if (options.fold == FormFold::kCompatibilityCase) {
    form = icu::Normalizer2::getNFKCCasefoldInstance(error)->normalize(form, error);
  } else {
    if (options.fold == FormFold::kCase) form.foldCase();
    form = icu::Normalizer2::getNFCInstance(error)->normalize(form, error);
  }
  if (options.strip_accents) {
    form = icu::Normalizer2::getNFDInstance(error)->normalize(form, error);
    icu::UnicodeString kept;
    for (int32_t at = 0; at < form.length(); at = form.moveIndex32(at, 1)) {
      if (u_charType(form.char32At(at)) != U_NON_SPACING_MARK) kept.append(form.char32At(at));
    }
    form = icu::Normalizer2::getNFCInstance(error)->normalize(kept, error);
  }
  if (options.fold != FormFold::kNone) {
    form.findAndReplace(u"\u2019", u"'");
    form.findAndReplace(u"\u02BC", u"'");
  }
  EXPECT_TRUE(U_SUCCESS(error));
  std::string out;
  form.toUTF8String(out);
  return out;
}

TEST(Forms, AreWhatIcuGivesOverUtf16ForWordsOfManyScripts) {
  std::mt19937_64 random(3);
  size_t checked = 0;
  for (int round = 0; round < 20000; ++round) {
    const std::string text = RandomText(&random, 20);
    for (const FormFold fold : {FormFold::kNone, FormFold::kCase, FormFold::kCompatibilityCase}) {
      const WordOptions options{.fold = fold, .strip_accents = random() % 2 == 0};
      WordFolder folder(options);
      for (const WordSpan& word : ReferenceWords(text, options)) {
        const std::string_view bytes =
            std::string_view(text).substr(word.begin, word.end - word.begin);
        ASSERT_EQ(folder.Form(bytes), Utf16Form(options, bytes));
        ++checked;
      }
    }
  }
  EXPECT_GT(checked, 100000u);
}

}  // namespace
}  // namespace phraseweld
