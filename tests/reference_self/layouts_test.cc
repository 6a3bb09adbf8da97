// Layouts, documents' names, JSON in and out, spans.

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include <stdexcept>

#include "reference_self/jobs.h"

namespace phraseweld {
namespace {

using testing::AllOf;
using testing::HasSubstr;

Job JsonJob() {
  Job job = RulingJob(Layout::kJsonLines, "old mill");
  job.corpus.fields = {"body", "title"};
  job.corpus.id = "id";
  job.deliver.spans = true;
  return job;
}

// The text of body: "the old mill 😀 old", a line break, "mill", with the emoji's 4 bytes at 13.
TEST(Json, GapsAreReplacedInTheRawString) {
  const Files files =
      RunOn(JsonJob(), R"({"title" : "\u004fld\u0020\u006Dill", "id":7,)"
                       R"("body":"the old mill \ud83d\uDE00 old\nmill","other":"old mill"})");
  EXPECT_EQ(files.at("corpus/notes"),
            R"({"title" : "\u004fld_\u006Dill", "id":7,)"
            R"("body":"the old_mill \ud83d\uDE00 old_mill","other":"old mill"})");
  EXPECT_EQ(files.at("spans.jsonl"),
            R"({"document":"7","passage":"body","spans":[[4,12,"old mill"],[18,26,"old mill"]]})"
            "\n"
            R"({"document":"7","passage":"title","spans":[[0,8,"old mill"]]})"
            "\n");
  EXPECT_THAT(files.at("inventory.jsonl"),
              HasSubstr("\"occurrences\":3,\"inside_longer\":0,\"documents\":1,"
                        "\"surface\":\"old mill\""));
}

TEST(Json, JoinerIsEscaped) {
  Job job = JsonJob();
  job.deliver.joiner = "\"\\\x1f\u00b7";
  EXPECT_EQ(CorpusOf(job, R"({"body":"old mill"})"), "{\"body\":\"old\\\"\\\\\\u001f\u00b7mill\"}");
}

TEST(Json, NamesOfDocuments) {
  const Files files = RunOn(JsonJob(),
                            "\xEF\xBB\xBF{\"id\":\"a\\tb\",\"body\":\"\"}\n"
                            " \r\n"
                            "{\"id\":-1.50e+2,\"body\":\"\"}\n"
                            "{\"id\":true,\"body\":\"\"}\n"
                            "{\"id\":null,\"body\":\"\"}\n"
                            "{\"id\":{\"id\":1},\"body\":\"\"}\r\n"
                            "{\"body\":\"\",\"body\":\"old mill\"}\n"
                            "{\"body\":0,\"body\":\"old mill\"}\n"
                            "{\"id\":\"x\",\"id\":\"y\",\"title\":\"\"}");
  EXPECT_EQ(files.at("spans.jsonl"),
            "{\"document\":\"a\\tb\",\"passage\":\"body\",\"spans\":[]}\n"
            "{\"document\":\"-1.50e+2\",\"passage\":\"body\",\"spans\":[]}\n"
            "{\"document\":\"true\",\"passage\":\"body\",\"spans\":[]}\n"
            "{\"document\":\"4\",\"passage\":\"body\",\"spans\":[]}\n"
            "{\"document\":\"5\",\"passage\":\"body\",\"spans\":[]}\n"
            "{\"document\":\"6\",\"passage\":\"body\",\"spans\":[]}\n"
            "{\"document\":\"x\",\"passage\":\"title\",\"spans\":[]}\n");
}

TEST(Json, BadLines) {
  const std::vector<std::string> bad = {"[1]",
                                        "7",
                                        "{",
                                        "{}x",
                                        "{\"body\":\"old mill\"",
                                        "{\"body\":\"old mill\",}",
                                        "{'body':1}",
                                        "{\"body\":01}",
                                        "{\"body\":1.}",
                                        "{\"body\":\"\\x\"}",
                                        "{\"body\":\"\\ud800\"}",
                                        "{\"body\":\"\\udc00\\ud800\"}",
                                        "{\"body\":\"\\ud800\\u0041\"}",
                                        "{\"body\":\"\t\"}",
                                        "{\"body\":\"old mill \xFF\"}",
                                        "{\"body\":nul}",
                                        "{\"body\" \"old mill\"}"};
  for (const std::string& line : bad) {
    const std::string text = "{\"body\":\"old mill\"}\n" + line + "\n{\"body\":\"a\"}\n";
    Job job = JsonJob();
    try {
      RunOn(job, text);
      ADD_FAILURE() << line;
    } catch (const std::runtime_error& error) {
      EXPECT_THAT(error.what(), AllOf(HasSubstr("notes:2:"), HasSubstr("byte offset 20")));
    }
    job.corpus.bad_lines = BadLines::kKeep;
    const Files files = RunOn(job, text);
    EXPECT_EQ(files.at("corpus/notes"),
              "{\"body\":\"old_mill\"}\n" + line + "\n{\"body\":\"a\"}\n");
    EXPECT_THAT(files.at("spans.jsonl"),
                AllOf(HasSubstr("\"document\":\"2\""), testing::Not(HasSubstr("\"3\""))));
  }
}

TEST(Json, WordsOfADocumentAreOneLine) {
  Job job = JsonJob();
  job.deliver.corpus = CorpusForm::kWords;
  EXPECT_EQ(CorpusOf(job, "{\"title\":\"T!\",\"body\":\"Old mill, x\"}\n\n{}\n{\"title\":\"u\"}"),
            "old_mill x t\n\nu\n");
}

// A paragraph: from its first line's first byte to before the last line's LF.
TEST(Layouts, Paragraphs) {
  Job job = RulingJob(Layout::kParagraphs, "old mill");
  job.deliver.spans = true;
  const std::string text = "\n x old\r\nmill old\r\n \t\r\nmill\n\n\nold mill";
  const Files files = RunOn(job, text);
  EXPECT_EQ(files.at("corpus/notes"), "\n x old_mill old\r\n \t\r\nmill\n\n\nold_mill");
  EXPECT_EQ(files.at("spans.jsonl"),
            "{\"document\":\"1\",\"passage\":\"\",\"spans\":[[3,12,\"old mill\"]]}\n"
            "{\"document\":\"2\",\"passage\":\"\",\"spans\":[]}\n"
            "{\"document\":\"3\",\"passage\":\"\",\"spans\":[[0,8,\"old mill\"]]}\n");
}

TEST(Layouts, FilesAreDocumentsOfOneCorpus) {
  Job job = LinesJob(2);
  job.corpus.layout = Layout::kText;
  job.deliver.spans = true;
  const Files files =
      ReferenceRun(job, {{"a/1.txt", "\xEF\xBB\xBFold\nmill"}, {"2.txt", ""}, {"3", "old mill"}});
  EXPECT_EQ(files.at("corpus/a/1.txt"), "old+mill\n");
  EXPECT_EQ(files.at("corpus/2.txt"), "\n");
  EXPECT_EQ(files.at("corpus/3"), "old+mill\n");
  EXPECT_EQ(files.at("spans.jsonl"),
            "{\"document\":\"1\",\"passage\":\"\",\"spans\":[[3,11,\"old mill\"]]}\n"
            "{\"document\":\"2\",\"passage\":\"\",\"spans\":[]}\n"
            "{\"document\":\"3\",\"passage\":\"\",\"spans\":[[0,8,\"old mill\"]]}\n");
}

TEST(Layouts, OrdinalsRunOnFromFileToFile) {
  Job job = LinesJob(1);
  const Files files = ReferenceRun(job, {{"a", "x\n\ny\n"}, {"b", "old mill\n"}});
  EXPECT_THAT(files.at("audit/pass-01.jsonl"), HasSubstr("\"first\":{\"document\":\"3\","));
}

}  // namespace
}  // namespace phraseweld
