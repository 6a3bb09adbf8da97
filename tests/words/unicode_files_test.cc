// Against the test files of the Unicode Character Database 15.0, as Debian's package unicode-data
// carries them: auxiliary/WordBreakTest.txt and NormalizationTest.txt.

#include <gmock/gmock.h>
#include <gtest/gtest.h>
#include <unicode/uchar.h>
#include <unicode/unistr.h>
#include <unicode/utf8.h>

#include <algorithm>
#include <cstdio>
#include <fstream>
#include <set>
#include <sstream>
#include <string>

#include "absl/strings/numbers.h"
#include "absl/strings/str_cat.h"
#include "absl/strings/str_split.h"
#include "words/reference_splitter.h"

namespace phraseweld {
namespace {

using testing::ElementsAreArray;

constexpr char kFolder[] = "/usr/share/unicode/";

void AppendUtf8(char32_t code_point, std::string* text) {
  icu::UnicodeString(static_cast<UChar32>(code_point)).toUTF8String(*text);
}

// Text of hexadecimal code points with spaces between them.
std::string FromCodePoints(const std::string& list) {
  std::string text;
  for (const auto& field : absl::StrSplit(list, ' ', absl::SkipEmpty())) {
    uint32_t code_point = 0;
    EXPECT_TRUE(absl::SimpleHexAtoi(field, &code_point)) << list;
    AppendUtf8(code_point, &text);
  }
  return text;
}

struct BreakCase {
  std::string line;
  std::string text;
  std::set<uint32_t> boundaries;
};

std::vector<BreakCase> ReadWordBreakTest() {
  std::ifstream file(std::string(kFolder) + "auxiliary/WordBreakTest.txt");
  EXPECT_TRUE(file) << "needs the Debian package unicode-data";
  std::vector<BreakCase> cases;
  std::string line;
  while (std::getline(file, line)) {
    const std::string rule = line.substr(0, line.find('#'));
    BreakCase entry;
    for (const auto& field : absl::StrSplit(rule, absl::ByAnyChar(" \t"), absl::SkipEmpty())) {
      const std::string item(field.data(), field.size());
      if (item == "\u00F7") {
        entry.boundaries.insert(static_cast<uint32_t>(entry.text.size()));
      } else if (item != "\u00D7") {
        entry.text += FromCodePoints(item);
      }
    }
    if (entry.text.empty()) continue;
    entry.line = rule.substr(0, rule.find_last_not_of(" \t") + 1);
    cases.push_back(entry);
  }
  return cases;
}

bool HoldsWordCharacter(std::string_view segment) {
  const auto length = static_cast<int32_t>(segment.size());
  for (int32_t at = 0; at < length;) {
    UChar32 code_point;
    U8_NEXT(segment.data(), at, length, code_point);
    switch (u_getIntPropertyValue(code_point, UCHAR_WORD_BREAK)) {
      case U_WB_ALETTER:
      case U_WB_HEBREW_LETTER:
      case U_WB_NUMERIC:
      case U_WB_KATAKANA:
        return true;
      default:
        break;
    }
  }
  return false;
}

// The words as the file has them: its segments that hold a letter or a digit.
std::vector<std::pair<uint32_t, uint32_t>> WordsOfFile(const BreakCase& entry) {
  std::vector<std::pair<uint32_t, uint32_t>> words;
  for (auto begin = entry.boundaries.begin(), end = std::next(begin); end != entry.boundaries.end();
       begin = end++) {
    if (HoldsWordCharacter(std::string_view(entry.text).substr(*begin, *end - *begin))) {
      words.emplace_back(*begin, *end);
    }
  }
  return words;
}

// Where ICU's root rules part from UAX #29: the colon joins no letters.
constexpr const char* kColonLines[] = {
    "÷ 0061 × 003A × 0041 ÷",
    "÷ 0061 × 003A × 0308 × 0041 ÷",
    "÷ 0061 × 003A × 05D0 ÷",
    "÷ 0061 × 003A × 0308 × 05D0 ÷",
    "÷ 0061 × 003A × 0061 × 2060 ÷",
    "÷ 0061 × 003A × 0308 × 0061 × 2060 ÷",
    "÷ 0061 × 003A × 0061 ÷ 003A ÷",
    "÷ 0061 × 003A × 0308 × 0061 ÷ 003A ÷",
    "÷ 0061 × 003A × 0061 ÷ 0027 ÷",
    "÷ 0061 × 003A × 0308 × 0061 ÷ 0027 ÷",
    "÷ 0061 × 003A × 0061 ÷ 0027 × 2060 ÷",
    "÷ 0061 × 003A × 0308 × 0061 ÷ 0027 × 2060 ÷",
    "÷ 0061 × 003A × 0061 ÷ 002C ÷",
    "÷ 0061 × 003A × 0308 × 0061 ÷ 002C ÷",
    "÷ 0041 × 003A × 0041 ÷",
};

// Where the boundaries are the file's, but ICU's rule status says otherwise than the letters: two
// underscores have the status of a word, a letter joined to a pictograph has that of none.
constexpr const char* kStatusLines[] = {
    "÷ 005F × 005F ÷",
    "÷ 005F × 0308 × 005F ÷",
    "÷ 0061 × 200D × 1F6D1 ÷",
    "÷ 0061 × 200D × 2701 ÷",
};

TEST(UnicodeFiles, IcuHasTheBoundariesOfWordBreakTestButForTheColon) {
  std::vector<std::string> differing;
  for (const BreakCase& entry : ReadWordBreakTest()) {
    std::set<uint32_t> boundaries = {0};
    for (const Segment& segment : ReferenceSegments(entry.text)) boundaries.insert(segment.end);
    if (boundaries != entry.boundaries) differing.push_back(entry.line);
  }
  EXPECT_THAT(differing, ElementsAreArray(kColonLines));
}

TEST(UnicodeFiles, WordsAreThoseOfWordBreakTest) {
  const std::vector<BreakCase> cases = ReadWordBreakTest();
  ASSERT_EQ(cases.size(), 1823u);
  std::vector<std::unique_ptr<WordStream>> streams;
  streams.push_back(MakeExactStream({}));
  for (const ScanLevel level : AvailableScanLevels()) streams.push_back(MakeFastStream({}, level));
  std::set<std::string> expected(std::begin(kColonLines), std::end(kColonLines));
  expected.insert(std::begin(kStatusLines), std::end(kStatusLines));
  for (const auto& stream : streams) {
    std::set<std::string> differing;
    for (const BreakCase& entry : cases) {
      std::vector<std::pair<uint32_t, uint32_t>> words;
      for (const WordSpan& word : WordsOf(stream.get(), entry.text)) {
        words.emplace_back(word.begin, word.end);
      }
      if (words != WordsOfFile(entry)) differing.insert(entry.line);
    }
    EXPECT_EQ(differing, expected);
  }
}

// The rows of NormalizationTest.txt: source, NFC, NFD, NFKC, NFKD.
std::vector<std::vector<std::string>> ReadNormalizationTest() {
  std::vector<std::vector<std::string>> rows;
  const std::string command = absl::StrCat("bzip2 -dc ", kFolder, "NormalizationTest.txt.bz2");
  std::FILE* pipe = popen(command.c_str(), "r");
  if (pipe == nullptr) return rows;
  std::string text;
  char buffer[1 << 16];
  while (const size_t count = std::fread(buffer, 1, sizeof(buffer), pipe)) {
    text.append(buffer, count);
  }
  pclose(pipe);
  std::istringstream lines(text);
  for (std::string line; std::getline(lines, line);) {
    if (line.empty() || line[0] == '#' || line[0] == '@') continue;
    std::vector<std::string> row;
    const std::vector<std::string> fields = absl::StrSplit(line, ';');
    for (size_t field = 0; field < 5; ++field) row.push_back(FromCodePoints(fields[field]));
    rows.push_back(row);
  }
  return rows;
}

TEST(UnicodeFiles, FormsWithoutFoldingAreTheNfcColumnsOfNormalizationTest) {
  const auto rows = ReadNormalizationTest();
  ASSERT_EQ(rows.size(), 19074u) << "needs the Debian packages unicode-data and bzip2";
  WordFolder folder({.fold = FormFold::kNone});
  for (const auto& row : rows) {
    for (const int column : {0, 1, 2}) EXPECT_EQ(folder.Form(row[column]), row[1]);
    for (const int column : {3, 4}) EXPECT_EQ(folder.Form(row[column]), row[3]);
  }
}

TEST(UnicodeFiles, CompatibilityFormsAreOneForAllColumnsOfNormalizationTest) {
  for (const bool strip : {false, true}) {
    WordFolder folder({.fold = FormFold::kCompatibilityCase, .strip_accents = strip});
    int iota_rows = 0;
    for (const auto& row : ReadNormalizationTest()) {
      // NFKC_Casefold does not decompose first (Unicode 15.0, section 3.13, R5), and makes a letter
      // of the mark U+0345, which then sorts no more: marks in another order give another form.
      const bool has_iota = std::any_of(row.begin(), row.end(), [](const std::string& column) {
        return column.find("\u0345") != std::string::npos;
      });
      const std::string form = folder.Form(row[0]);
      EXPECT_EQ(folder.Form(form), form);
      bool same = true;
      for (const std::string& column : row) same = same && folder.Form(column) == form;
      EXPECT_TRUE(same || has_iota) << row[0];
      iota_rows += same ? 0 : 1;
    }
    EXPECT_EQ(iota_rows, strip ? 0 : 12);
  }
}

// The rows of CaseFolding.txt with status C or F: a code point, and what full folding makes of it.
TEST(UnicodeFiles, CaseFormsFoldAsCaseFoldingSays) {
  std::ifstream file(std::string(kFolder) + "CaseFolding.txt");
  ASSERT_TRUE(file) << "needs the Debian package unicode-data";
  WordFolder folder({.fold = FormFold::kCase});
  WordFolder compose({.fold = FormFold::kNone});
  int rows = 0;
  for (std::string line; std::getline(file, line);) {
    const std::vector<std::string> fields = absl::StrSplit(line, "; ");
    if (line.empty() || line[0] == '#' || (fields[1] != "C" && fields[1] != "F")) continue;
    ++rows;
    std::string expected = compose.Form(FromCodePoints(fields[2]));
    // U+0149 folds to U+02BC and n, and that apostrophe is unified.
    if (fields[0] == "0149") expected = "'n";
    EXPECT_EQ(folder.Form(FromCodePoints(fields[0])), expected) << line;
  }
  EXPECT_EQ(rows, 1530);
}

}  // namespace
}  // namespace phraseweld
