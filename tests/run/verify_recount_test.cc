#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include <functional>
#include <string>
#include <utility>
#include <vector>

#include "deliver/joints.h"
#include "run/verify_fixture.h"

namespace phraseweld {
namespace {

using ::testing::AllOf;
using ::testing::HasSubstr;
using ::testing::IsEmpty;
using ::testing::Not;

class VerifyRecountTest : public VerifyTest {};

TEST_F(VerifyRecountTest, NumbersOfTheAuditAreRecounted) {
  Run({});
  const std::string log = "audit/pass-01.jsonl";
  for (const char* key : {"rank", "n", "left_slots", "right_slots", "slots", "expected",
                          "documents", "pmi", "npmi", "g2", "joined", "yielded", "byte"}) {
    for (const size_t line : {size_t{2}, LineWith(folder_.Get("run/" + log), "near_miss")}) {
      EXPECT_THAT(FaultsAfter(log, Bumped(line, key)),
                  AllOf(HasSubstr(Concat(folder_.Path("run/" + log), ":", line, ": ")),
                        HasSubstr(Concat(key, ": found "))))
          << key;
    }
  }
  for (const char* key : {"pass", "tokens_in", "types_in", "slots", "occurrences"}) {
    EXPECT_THAT(FaultsAfter(log, Bumped(1, key)), HasSubstr(Concat(key, ": found "))) << key;
  }
  const size_t last = LineWith(folder_.Get("run/" + log), "\"balance\"");
  for (const char* key : {"accepted", "joined", "words_absorbed", "tokens_out"}) {
    EXPECT_THAT(FaultsAfter(log, Bumped(last, key)),
                HasSubstr(Concat(folder_.Path("run/" + log), ":", last, ": ", key, ": found ")))
        << key;
  }
  for (const char* key : {"joined", "documents"}) {
    EXPECT_THAT(FaultsAfter("audit/pass-00.jsonl", Bumped(2, key)),
                HasSubstr(Concat("audit/pass-00.jsonl:2: ", key, ": found ")));
  }
  EXPECT_THAT(FaultsAfter("audit/pass-00.jsonl", Replaced("a signal", "no signal")),
              HasSubstr("reason: found \"no signal\", expected \"a signal\""));
}

// Line `a` and the line after it change places, and take each other's rank.
std::string Swapped(const std::string& text, size_t a) {
  std::vector<std::string> lines = Lines(text);
  const auto rank = [](std::string& line) {
    const size_t begin = line.find("\"rank\":");
    return std::make_pair(begin, line.find(',', begin) - begin);
  };
  std::string& first = lines.at(a - 1);
  std::string& second = lines.at(a);
  const auto [at_first, size_first] = rank(first);
  const auto [at_second, size_second] = rank(second);
  const std::string rank_first = first.substr(at_first, size_first);
  first.replace(at_first, size_first, second.substr(at_second, size_second));
  second.replace(at_second, size_second, rank_first);
  std::swap(first, second);
  return Join(lines, "\n");
}

TEST_F(VerifyRecountTest, LinesInAnotherOrderAreFound) {
  Run({});
  const std::string log = "audit/pass-01.jsonl";
  EXPECT_THAT(FaultsAfter(log, [](const std::string& text) { return Swapped(text, 2); }),
              HasSubstr(Concat(folder_.Path("run/" + log), ":3: order: found ")));
  const size_t near_miss = LineWith(folder_.Get("run/" + log), "near_miss");
  EXPECT_THAT(FaultsAfter(log, [=](const std::string& text) { return Swapped(text, near_miss); }),
              HasSubstr(Concat(log, ":", near_miss + 1, ": order: found ")));
}

std::function<std::string(std::string)> WithoutLine(size_t line) {
  return [line](const std::string& text) {
    std::vector<std::string> lines = Lines(text);
    lines.erase(lines.begin() + static_cast<ptrdiff_t>(line - 1));
    return Join(lines, "\n");
  };
}

TEST_F(VerifyRecountTest, ALineThatIsMissingOrStandsTwiceIsFound) {
  Run({});
  const std::string log = "audit/pass-01.jsonl";
  const size_t near_miss = LineWith(folder_.Get("run/" + log), "near_miss");
  EXPECT_THAT(FaultsAfter(log, WithoutLine(near_miss)),
              HasSubstr(Concat(log, ":", near_miss, ": rank: found 2, expected 1")));
  EXPECT_THAT(FaultsAfter(log, WithoutLine(2)),
              HasSubstr(Concat(log, ":2: rank: found 2, expected 1")));
  EXPECT_THAT(FaultsAfter(log,
                          [](const std::string& text) {
                            std::vector<std::string> lines = Lines(text);
                            lines.insert(lines.begin() + 2, lines[1]);
                            return Join(lines, "\n");
                          }),
              HasSubstr(" stands twice in this pass"));
  // An accepted type told as a near miss, and the other way round.
  EXPECT_THAT(FaultsAfter(log,
                          [&](const std::string& text) {
                            std::vector<std::string> lines = Lines(text);
                            std::string& line = lines.at(near_miss - 1);
                            line.replace(line.find("near_miss"), 9, "accepted");
                            line.erase(line.find(",\"failed\""), std::string::npos);
                            line += '}';
                            return Join(lines, "\n");
                          }),
              HasSubstr(" of the accepted \""));
}

TEST_F(VerifyRecountTest, TheInventoryIsRecounted) {
  Run({});
  const std::string inventory = "inventory.jsonl";
  const std::string before = folder_.Get("run/" + inventory);
  for (const char* key :
       {"words", "pass", "occurrences", "inside_longer", "documents", "joined", "pmi"}) {
    const size_t line = LineWith(before, "\"pmi\"");
    EXPECT_THAT(FaultsAfter(inventory, Bumped(line, key)),
                AllOf(HasSubstr(Concat(folder_.Path("run/" + inventory), ":", line, ": ")),
                      HasSubstr(Concat(key, ": found "))))
        << key;
  }
  EXPECT_THAT(FaultsAfter(inventory, WithoutLine(2)),
              HasSubstr("inventory.jsonl: place 2: found no line, expected \""));
  EXPECT_THAT(FaultsAfter(inventory, Replaced("\"surface\":\"", "\"surface\":\"X")),
              HasSubstr("inventory.jsonl:1: surface: found \"X"));
  EXPECT_THAT(FaultsAfter(inventory,
                          [](const std::string& text) {
                            std::vector<std::string> lines = Lines(text);
                            std::swap(lines[1], lines[2]);
                            return Join(lines, "\n");
                          }),
              HasSubstr("inventory.jsonl:2: phrase in this place: found "));
  EXPECT_THAT(FaultsAfter("inventory.tsv", Replaced("\t2\t", "\t3\t")),
              HasSubstr("inventory.tsv: byte "));
  EXPECT_THAT(FaultsAfter("inventory.tsv", WithoutLine(3)), HasSubstr("(line 3): found "));
  EXPECT_THAT(FaultsAfter("manifest.json",
                          Bumped(LineWith(folder_.Get("run/manifest.json"), "words_in_phrases"),
                                 "words_in_phrases")),
              HasSubstr("manifest.json: totals.words_in_phrases: found "));
}

TEST_F(VerifyRecountTest, TheDeliveredTextsAreMadeAnew) {
  Run({});
  EXPECT_THAT(FaultsAfter("corpus/a.txt", Replaced("light", "night")),
              AllOf(HasSubstr("corpus/a.txt: undone, it is not "),
                    HasSubstr(Concat(folder_.Path("run/corpus/a.txt"), ": byte ")),
                    HasSubstr("found \"night")));
  EXPECT_THAT(FaultsAfter("spans.jsonl", Replaced("[[0,", "[[1,")),
              HasSubstr("spans.jsonl: byte "));
  Run({"lines", "words"});
  EXPECT_THAT(FaultsAfter("corpus/a.txt", Replaced("_", " ")), HasSubstr("corpus/a.txt: byte "));
}

// Both files changed to fit each other, so that undoing them succeeds.
TEST_F(VerifyRecountTest, AJointChangedWithEverythingThatDependsOnItIsFound) {
  Run({"lines"});
  const std::string path = folder_.Path("run/corpus/a.txt");
  const std::string rewritten = folder_.Get("run/corpus/a.txt");
  const std::string source = folder_.Get("in/a.txt");
  const auto write = [&](size_t wrong, size_t skipped) {
    auto joints = *JointsWriter::Create(FileSystem::Posix(), JointsPath(path), "_");
    std::string text, undone;
    size_t at = 0;
    for (size_t i = 0; i < rewritten.size(); ++i) {
      if (rewritten[i] != '_') {
        joints->Skip(1);
        text += rewritten[i];
        undone += rewritten[i];
        continue;
      }
      const std::string gap =
          source.compare(undone.size(), 2, "  ") == 0 ? "  " : source.substr(undone.size(), 1);
      if (at == skipped) {
        joints->Skip(gap.size());
        text += gap;
        undone += gap;
      } else {
        const std::string written = at == wrong ? "\t" : gap;
        joints->Joint(written);
        text += '_';
        undone += written;
      }
      ++at;
    }
    joints->Source(undone);
    ASSERT_TRUE(joints->Finish().ok());
    folder_.Put("run/corpus/a.txt", text);
    MendHashes();
  };
  write(SIZE_MAX, SIZE_MAX);
  EXPECT_THAT(Faults(), IsEmpty());
  write(3, SIZE_MAX);
  EXPECT_THAT(Faults(), AllOf(HasSubstr("corpus/a.txt: undone, it is not "), HasSubstr("\\x09")));
  // A phrase that was not joined after all: the source comes back, but the rewrite is another.
  write(SIZE_MAX, 3);
  EXPECT_THAT(Faults(), AllOf(HasSubstr("corpus/a.txt: byte "), Not(HasSubstr("undone"))));
}

TEST_F(VerifyRecountTest, AnotherJobIsFound) {
  Run({});
  EXPECT_THAT(FaultsAfter("job.yaml", Replaced("pmi: 1", "pmi: 3")),
              HasSubstr("accept.pmi: found 1, expected 3"));
  EXPECT_THAT(FaultsAfter("job.yaml", Replaced("longest: 5", "longest: 2")),
              HasSubstr("expected at most 2"));
  EXPECT_THAT(FaultsAfter("job.yaml", Replaced("take: all", "take: 1")),
              HasSubstr("accepted types: found "));
  EXPECT_THAT(FaultsAfter("job.yaml", Replaced("english", "none")), HasSubstr("slots"));
  folder_.Put("rulings.yaml", "- {always: fog horn, reason: a signal}\n- {never: pump room}\n");
  EXPECT_THAT(Faults(), HasSubstr("\"pump room\" is ruled never in "));
}

TEST_F(VerifyRecountTest, FaultsAreCutAtTwentyAndCounted) {
  Run({});
  const std::string faults = FaultsAfter("audit/pass-01.jsonl", [](std::string text) {
    for (size_t at = 0; (at = text.find(",\"bridge\"", at)) != std::string::npos; at += 30) {
      for (const char* key : {"n", "left_slots", "right_slots", "slots", "joined"}) {
        const size_t digit =
            text.find_first_not_of("0123456789", text.find(Concat("\"", key, "\":"), at) +
                                                     std::string(key).size() + 3) -
            1;
        text[digit] = text[digit] == '1' ? '2' : '1';
      }
    }
    return text;
  });
  EXPECT_EQ(Lines(faults).size(), 22u) << faults;
  EXPECT_THAT(faults, HasSubstr("\n  and "));
}

// Under compatibility case one letter becomes four words with spaces between them.
TEST_F(VerifyRecountTest, TextsThatCanBeReadInSeveralWaysAreToldApart) {
  const std::string words = "صلى الله عليه وسلم";
  std::string text;
  for (int i = 0; i < 8; ++i) {
    AppendTo(&text, "محمد ﷺ قال\n", words, " قال\nمحمد ", words, " قال خير\n");
  }
  folder_.Put("in/arabic.txt", text);
  RunOn({{"LAYOUT", "lines"},
         {"CORPUS", "words"},
         {"JOINER", "_"},
         {"COMPRESS", "none"},
         {"REPORT", "false"}});
  EXPECT_THAT(folder_.Get("run/inventory.jsonl"), HasSubstr("ﷺ"));
  EXPECT_THAT(Faults(), IsEmpty());
  EXPECT_THAT(FaultsAfter("audit/pass-01.jsonl", Bumped(2, "n")), HasSubstr("pass-01.jsonl:2: "));
}

}  // namespace
}  // namespace phraseweld
