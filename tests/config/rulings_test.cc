#include "config/rulings.h"

#include "config/job_fixture.h"

namespace phraseweld {
namespace {

using testing::HasSubstr;
using testing::StartsWith;

class Rulings : public JobFixture {
 protected:
  std::string JobWith(std::string_view rulings) {
    const std::string path = folder_.Put("rulings.yaml", rulings);
    return "corpus: {files: [a]}\nphrases:\n  rulings: " + path + "\n";
  }
  std::vector<Ruling> Read(std::string_view rulings) {
    return Good(JobWith(rulings)).phrases.ruling_list;
  }
  std::string FaultIn(std::string_view rulings) { return Fault(JobWith(rulings)); }
};

TEST_F(Rulings, AreReadInTheirOrderWithTheirLines) {
  const auto rulings = Read(
      "# by hand\n"
      "- {never: \"et cetera and so\", reason: filler}\n"
      "- reason: name of a light\n"
      "  always: Left Bank  Light\n"
      "- always: 42 steps\n");
  ASSERT_EQ(rulings.size(), 3u);
  EXPECT_FALSE(rulings[0].always);
  EXPECT_EQ(rulings[0].phrase, "et cetera and so");
  EXPECT_EQ(rulings[0].reason, "filler");
  EXPECT_EQ(rulings[0].line, 2);
  EXPECT_EQ(rulings[0].file, folder_.Path("rulings.yaml"));
  EXPECT_TRUE(rulings[1].always);
  EXPECT_EQ(rulings[1].phrase, "Left Bank  Light");
  EXPECT_EQ(rulings[1].reason, "name of a light");
  EXPECT_EQ(rulings[1].line, 4);
  EXPECT_EQ(rulings[2].phrase, "42 steps");
  EXPECT_EQ(rulings[2].reason, "");
}

TEST_F(Rulings, AFileWithoutAnEntryHasNone) {
  EXPECT_TRUE(Read("").empty());
  EXPECT_TRUE(Read("# none yet\n").empty());
  EXPECT_TRUE(Read("[]\n").empty());
}

TEST_F(Rulings, TheSameRulingTwiceIsNoContradiction) {
  EXPECT_EQ(Read("- never: so on\n- never: So  on\n").size(), 2u);
}

TEST_F(Rulings, TheSameTextRuledBothWaysIsRefused) {
  EXPECT_EQ(FaultIn("- never: left bank\n- always: tide table\n- always: \" Left  BANK \"\n"),
            "rulings.yaml:3:3: 'left bank' is ruled 'always' on line 3 and 'never' on line 1; keep "
            "one of the two\n"
            "    - always: \" Left  BANK \"\n"
            "      ^");
}

TEST_F(Rulings, AnEntryIsNeverOrAlwaysAndNotBoth) {
  EXPECT_THAT(FaultIn("- {never: a b, always: c d}\n"),
              StartsWith("rulings.yaml:1:3: a ruling says 'never' or 'always', not both\n"));
  EXPECT_THAT(FaultIn("- {reason: because}\n"),
              StartsWith("rulings.yaml:1:3: a ruling needs 'never' or 'always'; it is {never: "));
}

TEST_F(Rulings, FaultsAreNamedWithTheirPlace) {
  EXPECT_THAT(FaultIn("never: a b\n"), StartsWith("rulings.yaml:1:1: a rulings file is a list"));
  EXPECT_THAT(FaultIn("- a b\n"), StartsWith("rulings.yaml:1:3: a ruling is a map, {never: "));
  EXPECT_THAT(
      FaultIn("- nevr: a b\n"),
      StartsWith("rulings.yaml:1:3: unknown key 'nevr' in a ruling; did you mean 'never'?"));
  EXPECT_THAT(FaultIn("- {never: [a]}\n"),
              StartsWith("rulings.yaml:1:11: never must be a text, not a list"));
  EXPECT_THAT(FaultIn("- {always: \"  \"}\n"),
              StartsWith("rulings.yaml:1:12: always must be a text, not a blank one"));
  EXPECT_THAT(FaultIn("- {never: a b, reason: {c: d}}\n"),
              StartsWith("rulings.yaml:1:24: reason must be a text, not a map"));
  EXPECT_THAT(FaultIn("- {never: a b, reason: }\n"),
              StartsWith("rulings.yaml:1:16: reason must be a text, not nothing"));
  EXPECT_THAT(
      FaultIn("- never: a b\n  never: c d\n"),
      StartsWith("rulings.yaml:2:3: key 'never' stands here again, first on line 1; start a "
                 "new entry with '- '"));
  EXPECT_THAT(FaultIn("- never: \"a b\n"),
              StartsWith("rulings.yaml:1:10: the closing quote of this text is missing"));
  EXPECT_THAT(FaultIn("- never: a: b\n"), StartsWith("rulings.yaml:1:11: not YAML: "));
}

TEST_F(Rulings, AllFaultsOfJobAndRulingsComeAtOnce) {
  const std::string message = Fault(JobWith("- {nevr: x}\n- y\n") + "  longest: 1\n");
  EXPECT_THAT(message, StartsWith("demo.yaml:4:12: phrases.longest must be"));
  EXPECT_THAT(message, HasSubstr("\nrulings.yaml:1:4: unknown key 'nevr'"));
  EXPECT_THAT(message, HasSubstr("\nrulings.yaml:2:3: a ruling is a map"));
}

TEST_F(Rulings, AFileThatIsNotThereIsAFaultOfTheJob) {
  const std::string message =
      Fault("corpus: {files: [a]}\nphrases: {rulings: " + folder_.Path("absent.yaml") + "}\n");
  EXPECT_THAT(message, StartsWith("demo.yaml:2:20: phrases.rulings: "));
  EXPECT_THAT(message, HasSubstr("absent.yaml"));
  EXPECT_THAT(message, HasSubstr("; a relative path starts at the working directory\n"));
}

TEST_F(Rulings, NoneStandsForNoFile) {
  EXPECT_EQ(Good("corpus: {files: [a]}\nphrases: {rulings: none}\n").phrases.rulings, "");
}

}  // namespace
}  // namespace phraseweld
