#include <unicode/bytestream.h>
#include <unicode/casemap.h>
#include <unicode/normalizer2.h>
#include <unicode/stringpiece.h>
#include <unicode/uchar.h>
#include <unicode/utf8.h>

#include <algorithm>

#include "absl/strings/str_replace.h"
#include "words/ascii.h"
#include "words/icu_error.h"
#include "words/splitter.h"

namespace phraseweld {
namespace {

using Normalizer = const icu::Normalizer2* (*)(UErrorCode&);

std::string Normalize(Normalizer instance, std::string_view text) {
  UErrorCode error = U_ZERO_ERROR;
  const icu::Normalizer2* normalizer = instance(error);
  RequireIcu(error);
  std::string out;
  icu::StringByteSink<std::string> sink(&out, static_cast<int32_t>(text.size()));
  normalizer->normalizeUTF8(0, icu::StringPiece(text.data(), static_cast<int32_t>(text.size())),
                            sink, nullptr, error);
  RequireIcu(error);
  return out;
}

std::string FoldCase(std::string_view text) {
  UErrorCode error = U_ZERO_ERROR;
  std::string out;
  icu::StringByteSink<std::string> sink(&out, static_cast<int32_t>(text.size()));
  icu::CaseMap::utf8Fold(0, icu::StringPiece(text.data(), static_cast<int32_t>(text.size())), sink,
                         nullptr, error);
  RequireIcu(error);
  return out;
}

std::string DropNonspacingMarks(std::string_view text) {
  std::string out;
  const auto length = static_cast<int32_t>(text.size());
  for (int32_t at = 0; at < length;) {
    const int32_t begin = at;
    UChar32 code_point;
    U8_NEXT(text.data(), at, length, code_point);
    if (code_point < 0 || u_charType(code_point) != U_NON_SPACING_MARK) {
      out.append(text.data() + begin, static_cast<size_t>(at - begin));
    }
  }
  return out;
}

}  // namespace

WordFolder::WordFolder(const WordOptions& options) : options_(options) {}

std::string WordFolder::Form(std::string_view word) {
  const bool folds = options_.fold != FormFold::kNone;
  if (IsAscii(word)) {
    // No normal form and no mark touches ASCII; folding is A-Z to a-z.
    std::string form(word);
    if (folds) std::transform(form.begin(), form.end(), form.begin(), LowerAscii);
    return form;
  }
  std::string form;
  switch (options_.fold) {
    case FormFold::kNone:
      form = Normalize(icu::Normalizer2::getNFCInstance, word);
      break;
    case FormFold::kCase:
      form = Normalize(icu::Normalizer2::getNFCInstance, FoldCase(word));
      break;
    case FormFold::kCompatibilityCase:
      form = Normalize(icu::Normalizer2::getNFKCCasefoldInstance, word);
      break;
  }
  if (options_.strip_accents) {
    form = DropNonspacingMarks(Normalize(icu::Normalizer2::getNFDInstance, form));
    form = Normalize(icu::Normalizer2::getNFCInstance, form);
  }
  if (folds) absl::StrReplaceAll({{"\u2019", "'"}, {"\u02BC", "'"}}, &form);  // apostrophes
  return form;
}

}  // namespace phraseweld
