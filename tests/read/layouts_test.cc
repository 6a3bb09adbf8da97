#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include <optional>
#include <random>

#include "read/collect.h"
#include "support/temp_folder.h"

namespace phraseweld {
namespace {

using ::testing::ElementsAre;
using ::testing::IsEmpty;

constexpr ReadLayout kTextLayouts[] = {ReadLayout::kText, ReadLayout::kLines,
                                       ReadLayout::kParagraphs};

bool StartsWithLetter(std::string_view rest) {
  return !rest.empty() && (rest[0] | 0x20) >= 'a' && (rest[0] | 0x20) <= 'z';
}

bool IsBlankLine(std::string_view line) {
  return line.find_first_not_of(" \t\r") == std::string_view::npos;
}

// The layouts once more, slow and obvious: the whole text at once, line by line.
std::vector<Document> ExpectedDocuments(ReadLayout layout, std::string_view bytes) {
  std::vector<Document> documents;
  const auto add = [&](std::string_view text) {
    documents.push_back({.id = "", .passages = {{.field = 0, .text = std::string(text)}}});
  };
  if (layout == ReadLayout::kText) {
    add(bytes);
    return documents;
  }
  std::string paragraph;
  const auto end_paragraph = [&] {
    if (!paragraph.empty()) add(std::string_view(paragraph).substr(0, paragraph.size() - 1));
    paragraph.clear();
  };
  for (size_t begin = 0; begin < bytes.size();) {
    const size_t end = std::min(bytes.find('\n', begin), bytes.size());
    const std::string_view line = bytes.substr(begin, end - begin);
    const bool blank = IsBlankLine(line);
    if (layout == ReadLayout::kLines) {
      if (!blank) add(line);
    } else if (blank) {
      end_paragraph();
    } else {
      paragraph += line;
      paragraph += '\n';
    }
    begin = end + 1;
  }
  end_paragraph();
  return documents;
}

class LayoutsTest : public testing::Test {
 protected:
  Collected Read(const std::string& bytes, const ReadOptions& options) {
    // Written once for all the ways that it is read.
    if (written_ != bytes) folder_.Put("in", bytes);
    written_ = bytes;
    auto collected = Collect({{.path = folder_.Path("in"), .relative = "in"}}, options);
    EXPECT_TRUE(collected.ok()) << collected.status();
    EXPECT_EQ(collected->files[0], bytes);
    return *std::move(collected);
  }
  std::vector<std::string> Texts(ReadLayout layout, const std::string& bytes) {
    std::vector<std::string> texts;
    for (const Document& document : Read(bytes, OptionsFor(layout)).documents) {
      EXPECT_EQ(document.passages.size(), 1u);
      texts.push_back(document.passages[0].text);
    }
    return texts;
  }
  TempFolder folder_;
  std::optional<std::string> written_;
};

TEST_F(LayoutsTest, TextIsTheWholeFile) {
  EXPECT_THAT(Texts(ReadLayout::kText, "one\n\ntwo\r\n"), ElementsAre("one\n\ntwo\r\n"));
  EXPECT_THAT(Texts(ReadLayout::kText, ""), ElementsAre(""));
  EXPECT_THAT(Texts(ReadLayout::kText, " \n"), ElementsAre(" \n"));
}

TEST_F(LayoutsTest, ALineLosesItsLineFeedAndNothingElse) {
  EXPECT_THAT(Texts(ReadLayout::kLines, "one\n\n \t\r\n two \r\nthree"),
              ElementsAre("one", " two \r", "three"));
  EXPECT_THAT(Texts(ReadLayout::kLines, "one\n"), ElementsAre("one"));
  EXPECT_THAT(Texts(ReadLayout::kLines, "\n"), IsEmpty());
  EXPECT_THAT(Texts(ReadLayout::kLines, ""), IsEmpty());
}

TEST_F(LayoutsTest, AParagraphRunsToBeforeTheLineFeedOfItsLastLine) {
  EXPECT_THAT(Texts(ReadLayout::kParagraphs, "\n\n one\ntwo\r\n\t\r\nthree\n\n\n"),
              ElementsAre(" one\ntwo\r", "three"));
  EXPECT_THAT(Texts(ReadLayout::kParagraphs, "one\ntwo"), ElementsAre("one\ntwo"));
  EXPECT_THAT(Texts(ReadLayout::kParagraphs, " \n\n"), IsEmpty());
  EXPECT_THAT(Texts(ReadLayout::kParagraphs, ""), IsEmpty());
}

TEST_F(LayoutsTest, NulsInvalidBytesAndByteOrderMarksAreText) {
  const std::string odd(
      "\xEF\xBB\xBF"
      "a\0b \xFF\xC3\n\xEF\xBB\xBF\n",
      14);
  EXPECT_THAT(Texts(ReadLayout::kText, odd), ElementsAre(odd));
  EXPECT_THAT(Texts(ReadLayout::kLines, odd), ElementsAre(odd.substr(0, 9), "\xEF\xBB\xBF"));
  EXPECT_THAT(Texts(ReadLayout::kParagraphs, odd), ElementsAre(odd.substr(0, 13)));
}

TEST_F(LayoutsTest, AnEmptyFileIsOneBlock) {
  for (const ReadLayout layout : kTextLayouts) {
    EXPECT_THAT(Read("", OptionsFor(layout)).blocks, ElementsAre(""));
  }
  EXPECT_THAT(Read("", OptionsFor(ReadLayout::kJsonLines)).blocks, ElementsAre(""));
}

TEST_F(LayoutsTest, TheDocumentsAreTheSameForEveryBlockSize) {
  const std::string bytes =
      "The mole light burns red. It is  seen at\nnine miles\r\n\r\nby night , and\n  two words\n"
      " \t\n\n\nbells ring on the bar buoy\nwhen the\n\xC3\xA9t\xC3\xA9 comes in , or \n so\n\n"
      "one-very-long-stretch-without-any-space-in-it-that-no-small-block-can-hold-or-cut here\n"
      "a b c d e f g\n\nlast line without end";
  for (const ReadLayout layout : kTextLayouts) {
    const std::vector<Document> expected = ExpectedDocuments(layout, bytes);
    size_t blocks = bytes.size();
    for (size_t size = 1; size <= 70; ++size) {
      SCOPED_TRACE(testing::Message() << static_cast<int>(layout) << " size " << size);
      const Collected read = Read(bytes, OptionsFor(layout, size, StartsWithLetter));
      ASSERT_EQ(read.documents, expected);
      if (size == 1) blocks = read.blocks.size();
      EXPECT_LE(read.blocks.size(), blocks);
    }
    EXPECT_GT(blocks, 20u) << "the smallest size should cut wherever it may";
  }
}

TEST_F(LayoutsTest, RandomTextsReadAsTheObviousReaderHasThem) {
  const std::vector<std::string> parts = {
      "a",    "b",    "word", " ", " ",    "  ",       "\n",           "\n",
      "\n\n", "\r\n", "\t",   ",", "\xFF", "\xC3\xA9", "\xEF\xBB\xBF", std::string(1, '\0')};
  const std::vector<std::function<bool(std::string_view)>> rules = {
      StartsWithLetter, [](std::string_view) { return true; }, nullptr};
  std::mt19937 random(11);
  for (int round = 0; round < 400; ++round) {
    std::string bytes;
    for (size_t left = random() % 60; left > 0; --left) bytes += parts[random() % parts.size()];
    for (const ReadLayout layout : kTextLayouts) {
      const Collected read = Read(
          bytes,
          OptionsFor(layout, 1 + random() % 40, rules[static_cast<size_t>(round) % rules.size()]));
      ASSERT_EQ(read.documents, ExpectedDocuments(layout, bytes))
          << static_cast<int>(layout) << testing::PrintToString(bytes);
    }
  }
}

TEST_F(LayoutsTest, PassagesAreCutOnlyWhereTheyMayBe) {
  std::mt19937 random(5);
  const std::vector<std::string> parts = {"tide", "mark", " ", " ", "\n", ", ", " (", "\n\n"};
  for (int round = 0; round < 100; ++round) {
    std::string bytes;
    for (int part = 0; part < 80; ++part) bytes += parts[random() % parts.size()];
    for (const ReadLayout layout : kTextLayouts) {
      const Collected read = Read(bytes, OptionsFor(layout, 1 + random() % 30, StartsWithLetter));
      size_t at = 0;
      for (size_t i = 0; i + 1 < read.blocks.size(); ++i) {
        at += read.blocks[i].size();
        const std::string_view before = std::string_view(bytes).substr(0, at);
        const std::string_view rest = std::string_view(bytes).substr(at);
        const bool after_line = before.ends_with('\n');
        ASSERT_TRUE(after_line || before.ends_with(' '));
        bool between = after_line && layout == ReadLayout::kLines;
        if (after_line && layout == ReadLayout::kParagraphs) {
          std::string_view last = before.substr(0, at - 1);
          last = last.substr(last.rfind('\n') + 1);
          between = IsBlankLine(last) || IsBlankLine(rest.substr(0, rest.find('\n')));
        }
        ASSERT_TRUE(between || StartsWithLetter(rest)) << testing::PrintToString(bytes) << at;
      }
    }
  }
}

TEST_F(LayoutsTest, ABlankLineTooLongToSeeTheEndOfIsCutNowhereNearIt) {
  // 300 blanks are more than the source looks ahead.
  const std::string bytes = "one\n" + std::string(300, ' ') + "\ntwo\n" + std::string(300, ' ') +
                            "x\nthree\n" + std::string(300, ' ');
  for (size_t size = 1; size <= 70; ++size) {
    const Collected read = Read(
        bytes, OptionsFor(ReadLayout::kParagraphs, size, [](std::string_view) { return true; }));
    ASSERT_EQ(read.documents, ExpectedDocuments(ReadLayout::kParagraphs, bytes)) << size;
  }
}

TEST_F(LayoutsTest, LinesAreCutAfterLineFeedsWherePossible) {
  const std::string bytes = "aa bb\ncc dd\nee ff\n";
  EXPECT_THAT(Read(bytes, OptionsFor(ReadLayout::kLines, 15, StartsWithLetter)).blocks,
              ElementsAre("aa bb\ncc dd\n", "ee ff\n"));
  EXPECT_THAT(Read(bytes, OptionsFor(ReadLayout::kLines, 4, StartsWithLetter)).blocks,
              ElementsAre("aa ", "bb\n", "cc ", "dd\n", "ee ", "ff\n"));
}

}  // namespace
}  // namespace phraseweld
