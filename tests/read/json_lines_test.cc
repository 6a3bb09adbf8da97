#include <gmock/gmock.h>
#include <gtest/gtest.h>
#include <simdjson.h>

#include <optional>
#include <random>

#include "read/collect.h"
#include "support/temp_folder.h"

namespace phraseweld {
namespace {

using ::testing::AllOf;
using ::testing::ElementsAre;
using ::testing::HasSubstr;
using ::testing::IsEmpty;
using ::testing::SizeIs;

class JsonLinesTest : public testing::Test {
 protected:
  JsonLinesTest() {
    options_.layout = ReadLayout::kJsonLines;
    options_.fields = {"title", "body"};
    options_.id = "id";
  }
  absl::StatusOr<Collected> TryRead(const std::string& bytes) {
    // Written once for all the ways that it is read.
    if (written_ != bytes) folder_.Put("in.jsonl", bytes);
    written_ = bytes;
    return Collect({{.path = folder_.Path("in.jsonl"), .relative = "in.jsonl"}}, options_);
  }
  std::vector<Document> Read(const std::string& bytes) {
    const auto read = TryRead(bytes);
    EXPECT_TRUE(read.ok()) << read.status();
    if (!read.ok()) return {};
    EXPECT_EQ(read->files[0], bytes);
    return read->documents;
  }
  // The one passage of the one document whose body has these raw bytes.
  std::string BodyOf(const std::string& raw) {
    const std::vector<Document> documents = Read("{\"body\":\"" + raw + "\"}");
    if (documents.size() != 1 || documents[0].passages.size() != 1) return "not one passage";
    return documents[0].passages[0].text;
  }
  bool IsBad(const std::string& line) {
    const absl::Status status = TryRead(line).status();
    EXPECT_TRUE(status.ok() || status.code() == absl::StatusCode::kDataLoss);
    return !status.ok();
  }
  TempFolder folder_;
  ReadOptions options_;
  std::optional<std::string> written_;
};

TEST_F(JsonLinesTest, FieldsArePassagesInTheOrderAskedFor) {
  EXPECT_THAT(Read("{\"body\":\"b1\",\"id\":\"x\",\"title\":\"t1\"}\n"
                   "  { \"title\" : \"t2\" , \"other\" : [ \"}\" , {\"title\":\"no\"} ] }\r\n"
                   "\n \t\r\n"
                   "{}\n"
                   "{\"body\":\"\",\"title\":null}"),
              ElementsAre(Document{"x", {{0, "t1"}, {1, "b1"}}}, Document{"", {{0, "t2"}}},
                          Document{"", {}}, Document{"", {{1, ""}}}));
}

TEST_F(JsonLinesTest, OnlyStringsArePassagesAndOnlyAtTheTop) {
  EXPECT_THAT(Read("{\"title\":7,\"body\":[\"b\"],\"x\":{\"title\":\"deep\",\"id\":\"deep\"}}"),
              ElementsAre(Document{"", {}}));
}

TEST_F(JsonLinesTest, TheFirstOfEqualKeysCounts) {
  EXPECT_THAT(Read("{\"title\":\"a\",\"title\":\"b\",\"id\":1,\"id\":2}\n"
                   "{\"title\":null,\"title\":\"b\"}"),
              ElementsAre(Document{"1", {{0, "a"}}}, Document{"", {}}));
}

TEST_F(JsonLinesTest, AnIdIsAStringsTextOrARawScalar) {
  EXPECT_THAT(Read("{\"id\":\"a\\u00e9\"}\n{\"id\":-1.50e3 }\n{\"id\":true}\n{\"id\":false}\n"
                   "{\"id\":null}\n{\"id\":[1]}\n{\"id\":{}}\n{\"id\": 12}"),
              ElementsAre(Document{"a\xC3\xA9", {}}, Document{"-1.50e3", {}}, Document{"true", {}},
                          Document{"false", {}}, Document{"", {}}, Document{"", {}},
                          Document{"", {}}, Document{"12", {}}));
}

TEST_F(JsonLinesTest, AFieldMayBeTheIdAndAKeyMayBeEscaped) {
  options_.id = "title";
  EXPECT_THAT(Read("{\"t\\u0069tle\":\"a\\tb\",\"body\\u0000\":\"no\"}"),
              ElementsAre(Document{"a\tb", {{0, "a\tb"}}}));
}

TEST_F(JsonLinesTest, EscapesAreDecoded) {
  EXPECT_EQ(BodyOf("plain"), "plain");
  EXPECT_EQ(BodyOf(R"(\"\\\/\b\f\n\r\t)"), "\"\\/\b\f\n\r\t");
  EXPECT_EQ(BodyOf(R"(\\)"), "\\");
  EXPECT_EQ(BodyOf(R"(a\\\"b\\)"), "a\\\"b\\");
  EXPECT_EQ(BodyOf(R"(\u00e9\u00E9\u20ac)"), "\xC3\xA9\xC3\xA9\xE2\x82\xAC");
  EXPECT_EQ(BodyOf(R"(\uD83D\uDE00!)"), "\xF0\x9F\x98\x80!");
  EXPECT_EQ(BodyOf(R"(x\u0000y)"), std::string("x\0y", 3));
}

TEST_F(JsonLinesTest, EveryCodePointsEscapeDecodesAsSimdjsonHasIt) {
  std::string raw;
  for (uint32_t point = 0; point < 0x110000; point += point < 0x3000 ? 1 : 61) {
    if (point >= 0xD800 && point < 0xE000) continue;
    char escape[16];
    if (point < 0x10000) {
      snprintf(escape, sizeof escape, "\\u%04x", point);
    } else {
      snprintf(escape, sizeof escape, "\\u%04X\\u%04x", 0xD800 + ((point - 0x10000) >> 10),
               0xDC00 + ((point - 0x10000) & 0x3FF));
    }
    raw += escape;
  }
  simdjson::dom::parser parser;
  std::string_view expected;
  ASSERT_EQ(parser.parse("\"" + raw + "\"").get(expected), simdjson::SUCCESS);
  EXPECT_EQ(BodyOf(raw), expected);
}

TEST_F(JsonLinesTest, AByteOrderMarkIsSkippedAtTheFilesStartOnly) {
  const std::string mark = "\xEF\xBB\xBF";
  EXPECT_THAT(Read(mark + "{\"title\":\"" + mark + "a\"}"),
              ElementsAre(Document{"", {{0, mark + "a"}}}));
  EXPECT_THAT(Read(mark), IsEmpty());
  EXPECT_THAT(Read(mark + "\n{}"), SizeIs(1));
  EXPECT_TRUE(IsBad("{}\n" + mark + "{}"));
}

TEST_F(JsonLinesTest, ABadLineStopsWithFileLineByteReasonAndAdvice) {
  const std::string lines = "{\"title\":\"a\"}\n\n{\"title\":\"b\"\n{}\n";
  for (const size_t size : {size_t{1}, size_t{20}, size_t{1000}}) {
    options_.block_bytes = size;
    const absl::Status status = TryRead(lines).status();
    EXPECT_EQ(status.code(), absl::StatusCode::kDataLoss);
    EXPECT_EQ(std::string(status.message())
                  .rfind(folder_.Path("in.jsonl") +
                             ": line 3 (from byte 15) is not a JSON object: The JSON document has",
                         0),
              0u)
        << status;
    EXPECT_THAT(std::string(status.message()),
                HasSubstr("Mend the line, or set corpus.bad_lines: keep"));
  }
}

TEST_F(JsonLinesTest, BadLinesAreCountedAndPassedThroughWhereTheyMayBe) {
  options_.keep_bad_lines = true;
  for (const size_t size : {size_t{1}, size_t{20}, size_t{1000}}) {
    options_.block_bytes = size;
    const std::string lines = "{\"title\":\"a\"}\nno json\n[]\n{\"title\":\"b\"}\n{\"title\":";
    const auto read = TryRead(lines);
    ASSERT_TRUE(read.ok()) << read.status();
    EXPECT_EQ(read->bad_lines, 3u);
    EXPECT_EQ(read->files[0], lines);
    EXPECT_THAT(read->documents, ElementsAre(Document{"", {{0, "a"}}}, Document{"", {{0, "b"}}}));
  }
}

TEST_F(JsonLinesTest, WhatIsNoJsonObjectIsBad) {
  const std::vector<std::string> bad = {
      "[]",
      "\"text\"",
      "7",
      "null",
      "{",
      "}",
      "{}{}",
      "{} x",
      "{\"a\"}",
      "{\"a\":}",
      "{\"a\":1,}",
      "{a:1}",
      "{'a':1}",
      "{\"a\":01}",
      "{\"a\":1.}",
      "{\"a\":.5}",
      "{\"a\":+1}",
      "{\"a\":1e}",
      "{\"a\":NaN}",
      "{\"a\":\"tab\there\"}",
      std::string("{\"a\":\"nul\0here\"}", 16),
      std::string("{}\0", 3),
      "{\"a\":\"\\x\"}",
      "{\"a\":\"\\u12g4\"}",
      "{\"a\":\"\\uD800\"}",
      "{\"a\":\"\\uD800x\"}",
      "{\"a\":\"\\uD800\\n\"}",
      "{\"a\":\"\\uD800\\uD800\"}",
      "{\"a\":\"\\uD800\\u0041\"}",
      "{\"a\":\"\\uDC00\"}",
      "{\"\\uDC00\":1}",
      "{\"a\":[{\"b\":\"\\uDFFF\\uD800\"}]}",
      "{\"a\":\"\xFF\"}",
      "{\"a\":\"\xC3\"}",
      "{\"a\":\"\xC0\x80\"}",
      "{\"a\":\"\xED\xA0\x80\"}",
      "{\"a\":123456789012345678901234567890,}",
      "{\"a\":0123456789012345678901234567890}",
      "{\"a\":123456789012345678901234567890.}",
      "{\"a\":" + std::string(2000, '[') + std::string(2000, ']') + "}",
  };
  for (const std::string& line : bad) EXPECT_TRUE(IsBad(line)) << testing::PrintToString(line);
}

TEST_F(JsonLinesTest, AnyJsonObjectIsGood) {
  const std::vector<std::string> good = {
      "{}",
      " { } ",
      "{\"a\":\"\\\\uD800\"}",
      "{\"a\":\"\\\\\\\\\"}",
      "{\"a\":0.10,\"b\":-0,\"c\":1E+2,\"d\":2e-05}",
      "{\"a\":123456789012345678901234567890}",
      "{\"a\":-18446744073709551616,\"e\":\"123456789012345678901234567890\"}",
      "{\"a\":1e400,\"b\":[1E-4000,1e+0400]}",
      "{\"a\":" + std::string(400, '9') + ".25e" + std::string(30, '9') + "}",
      "{\"a\":" + std::string(1000, '[') + std::string(1000, ']') + "}",
      "{\"a\":\"\xF4\x8F\xBF\xBF\xE2\x80\xA8\x7F\"}",
  };
  for (const std::string& line : good) EXPECT_FALSE(IsBad(line)) << testing::PrintToString(line);
}

TEST_F(JsonLinesTest, TheDocumentsAreTheSameForEveryBlockSize) {
  const std::string lines =
      "\xEF\xBB\xBF{\"id\":1,\"title\":\"Mole light\",\"body\":\"red \\u00e9 \\\"lamp\\\"\"}\r\n\n"
      "{\"body\":\"one two three four\",\"x\":[1,{\"body\":\"n\"}]}\n  \n{}\n"
      "{\"title\":\"a\\nb\"}\n{\"title\":\"end\"}";
  const std::vector<Document> expected = Read(lines);
  ASSERT_THAT(expected, SizeIs(5));
  for (size_t size = 1; size <= 70; ++size) {
    options_.block_bytes = size;
    ASSERT_EQ(Read(lines), expected) << size;
  }
}

TEST_F(JsonLinesTest, RandomObjectsReadAsSimdjsonHasThem) {
  const std::vector<std::string> keys = {"title", "body", "id", "x", "t\\u0069tle", "bo\\\\dy"};
  const std::vector<std::string> texts = {
      "a", " ", "\\\"", "\\\\", "\\n",      "\\u00fc",        "{",   "}",
      "[", "]", ",",    ":",    "\xC3\xA9", "\\uD83D\\uDE00", "\\/", "word"};
  std::mt19937 random(3);
  const auto text = [&] {
    std::string raw;
    for (size_t left = random() % 6; left > 0; --left) raw += texts[random() % texts.size()];
    return "\"" + raw + "\"";
  };
  const auto blank = [&] { return std::string(random() % 3 == 0 ? " " : ""); };
  const std::function<std::string(int)> value = [&](int depth) -> std::string {
    switch (random() % (depth > 2 ? 4 : 6)) {
      case 0:
        return "-12.5e1";
      case 1:
        return "null";
      case 4:
        return "[" + blank() + value(depth + 1) + "," + value(depth + 1) + blank() + "]";
      case 5:
        return "{" + text() + blank() + ":" + value(depth + 1) + "}";
      default:
        return text();
    }
  };
  simdjson::dom::parser parser;
  for (int round = 0; round < 100; ++round) {
    std::string lines;
    std::vector<Document> expected;
    for (int line = 0; line < 10; ++line) {
      std::string object = blank() + "{" + blank();
      for (size_t left = random() % 5; left > 0; --left) {
        object += "\"" + keys[random() % keys.size()] + "\"" + blank() + ":" + blank() + value(0) +
                  blank() + "," + blank();
      }
      object += "\"last\":1}" + blank();
      simdjson::dom::object parsed;
      ASSERT_EQ(parser.parse(object).get(parsed), simdjson::SUCCESS) << object;
      Document document;
      simdjson::dom::element member;
      if (parsed["id"].get(member) == simdjson::SUCCESS) {
        if (member.is_string()) document.id = std::string(member.get_string().value());
        if (member.is_double()) document.id = "-12.5e1";
      }
      for (uint32_t field = 0; field < 2; ++field) {
        std::string_view found;
        if (parsed[options_.fields[field]].get(found) == simdjson::SUCCESS) {
          document.passages.push_back({field, std::string(found)});
        }
      }
      expected.push_back(document);
      lines += object + "\n";
    }
    ASSERT_EQ(Read(lines), expected) << lines;
  }
}

class SourceMapTest : public JsonLinesTest {
 protected:
  // Maps the offsets 0, step, 2·step, ... of the body's text and its end to offsets of its source.
  std::vector<uint64_t> Map(const std::string& raw, uint64_t step) {
    const std::vector<InputFile> inputs = {
        {.path = folder_.Put("in", "{\"body\":\"" + raw + "\"}"), .relative = "in"}};
    BlockSource source(inputs, options_);
    BlockParser parser(inputs, options_);
    Block block;
    EXPECT_TRUE(source.Next(&block).value());
    EXPECT_TRUE(parser.Parse(&block).ok());
    const TextPiece& piece = block.pieces.at(0);
    EXPECT_TRUE(piece.escaped);
    SourceMap map(block, piece);
    std::vector<uint64_t> mapped;
    for (uint64_t at = 0; at < piece.text.size(); at += step) {
      mapped.push_back(map.ToSource(at) - piece.source_begin);
    }
    EXPECT_EQ(map.ToSource(piece.text.size()), piece.source_end);
    EXPECT_EQ(map.ToSource(piece.text.size()), piece.source_end);
    return mapped;
  }
};

TEST_F(SourceMapTest, OffsetsOfTheTextBecomeOffsetsOfTheSource) {
  EXPECT_THAT(Map("a\\nb", 1), ElementsAre(0, 1, 3));
  EXPECT_THAT(Map("\\\\\\\"", 1), ElementsAre(0, 2));
  EXPECT_THAT(Map("\\u0041xy\\/z", 1), ElementsAre(0, 6, 7, 8, 10));
}

TEST_F(SourceMapTest, AnOffsetInsideOfWhatAnEscapeStandsForIsTheEscapes) {
  EXPECT_THAT(Map("\\u00e9x", 1), ElementsAre(0, 0, 6));
  EXPECT_THAT(Map("x\\u20acy", 1), ElementsAre(0, 1, 1, 1, 7));
  EXPECT_THAT(Map("\\uD83D\\uDE00x", 1), ElementsAre(0, 0, 0, 0, 12));
  EXPECT_THAT(Map("\xC3\xA9\\n\xC3\xA9", 1), ElementsAre(0, 1, 2, 4, 5));
}

TEST_F(SourceMapTest, StridesGiveWhatSingleStepsGive) {
  const std::string raw = "The \\\"bar\\\" buoy \\u2013 \\uD83D\\uDD14 rings\\r\\n\xC3\xA9t\\u00e9";
  const std::vector<uint64_t> single = Map(raw, 1);
  for (uint64_t step = 2; step < single.size(); ++step) {
    const std::vector<uint64_t> strided = Map(raw, step);
    for (size_t i = 0; i < strided.size(); ++i) EXPECT_EQ(strided[i], single[i * step]) << step;
  }
}

}  // namespace
}  // namespace phraseweld
