#include "cli/cli.h"

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include <cstdlib>
#include <fstream>
#include <sstream>

#include "base/strings.h"
#include "base/utf8.h"
#include "base/version.h"
#include "cli/help.h"

namespace phraseweld {
namespace {

using testing::ElementsAre;
using testing::HasSubstr;
using testing::StartsWith;

// Handlers that note what they were asked for.
struct Asked {
  RunArguments run;
  CheckArguments check;
  VerifyArguments verify;
  RestoreArguments restore;
  TraceArguments trace;
  ReportArguments report;
  GradeArguments grade;
  CompareArguments compare;
  int calls = 0;
  absl::Status answer;
};

class CommandLine : public testing::Test {
 protected:
  template <class Arguments>
  Handler<Arguments> Note(Arguments Asked::*field) {
    return [this, field](const Arguments& arguments, Console& console) {
      asked_.*field = arguments;
      ++asked_.calls;
      *console.out << "result\n";
      return asked_.answer;
    };
  }

  // The exit code; what was written is in out_ and err_.
  int Run(const std::vector<std::string>& arguments) {
    const Handlers handlers = {Note(&Asked::run),     Note(&Asked::check),  Note(&Asked::verify),
                               Note(&Asked::restore), Note(&Asked::trace),  Note(&Asked::report),
                               Note(&Asked::grade),   Note(&Asked::compare)};
    std::ostringstream out;
    std::ostringstream err;
    Console console{&out, &err, false, [] { return 80; }};
    const int code = RunCommandLine(arguments, handlers, console);
    out_ = out.str();
    err_ = err.str();
    return code;
  }

  Asked asked_;
  std::string out_;
  std::string err_;
};

const std::vector<std::string> kCommands = {"run",   "check",  "verify", "restore",
                                            "trace", "report", "grade",  "compare"};

TEST_F(CommandLine, RunTakesItsOptionsInAnyOrder) {
  EXPECT_EQ(Run({"run", "--set", "a.b=1", "job.yaml", "--set=c=[x, y]", "--fresh", "--quiet"}), 0);
  EXPECT_EQ(asked_.run.job_file, "job.yaml");
  EXPECT_THAT(asked_.run.settings, ElementsAre("a.b=1", "c=[x, y]"));
  EXPECT_TRUE(asked_.run.fresh);
  EXPECT_TRUE(asked_.run.quiet);
  EXPECT_EQ(out_, "result\n");
  EXPECT_EQ(err_, "");
  EXPECT_EQ(Run({"run", "job.yaml"}), 0);
  EXPECT_TRUE(asked_.run.settings.empty());
  EXPECT_FALSE(asked_.run.fresh);
  EXPECT_FALSE(asked_.run.quiet);
}

TEST_F(CommandLine, TheOtherCommandsTakeTheirs) {
  EXPECT_EQ(Run({"check", "job.yaml", "--set", "x=y"}), 0);
  EXPECT_EQ(asked_.check.job_file, "job.yaml");
  EXPECT_THAT(asked_.check.settings, ElementsAre("x=y"));

  EXPECT_EQ(Run({"verify", "runs/a"}), 0);
  EXPECT_EQ(asked_.verify.run_folder, "runs/a");

  EXPECT_EQ(Run({"restore", "f.txt", "-o", "g.txt"}), 0);
  EXPECT_EQ(asked_.restore.file, "f.txt");
  EXPECT_EQ(asked_.restore.output, "g.txt");
  EXPECT_EQ(Run({"restore", "f.txt"}), 0);
  EXPECT_EQ(asked_.restore.output, "");

  EXPECT_EQ(Run({"report", "runs/a", "--output=page.html"}), 0);
  EXPECT_EQ(asked_.report.run_folder, "runs/a");
  EXPECT_EQ(asked_.report.output, "page.html");

  EXPECT_EQ(Run({"grade", "runs/a", "list.txt", "--json"}), 0);
  EXPECT_EQ(asked_.grade.run_folder, "runs/a");
  EXPECT_EQ(asked_.grade.list_file, "list.txt");
  EXPECT_TRUE(asked_.grade.measures.empty());
  EXPECT_TRUE(asked_.grade.json);

  EXPECT_EQ(Run({"compare", "runs/a", "runs/b", "--html", "x.html"}), 0);
  EXPECT_EQ(asked_.compare.left_run, "runs/a");
  EXPECT_EQ(asked_.compare.right_run, "runs/b");
  EXPECT_FALSE(asked_.compare.json);
  EXPECT_EQ(asked_.compare.html, "x.html");
  EXPECT_EQ(asked_.calls, 7);
}

TEST_F(CommandLine, APhraseMayBeOneArgumentOrSeveral) {
  EXPECT_EQ(Run({"trace", "runs/a", "terms of service"}), 0);
  EXPECT_EQ(asked_.trace.run_folder, "runs/a");
  EXPECT_EQ(asked_.trace.phrase, "terms of service");
  EXPECT_EQ(Run({"trace", "runs/a", "terms", "of", "service", "--json"}), 0);
  EXPECT_EQ(asked_.trace.phrase, "terms of service");
  EXPECT_TRUE(asked_.trace.json);
}

TEST_F(CommandLine, ArgumentsAreTakenAsTheyAre) {
  EXPECT_EQ(Run({"trace", "runs/a", "report"}), 0) << "the name of a command is a word as well";
  EXPECT_EQ(asked_.trace.phrase, "report");
  EXPECT_EQ(Run({"trace", "runs/a", "[x,y]", "z"}), 0) << err_;
  EXPECT_EQ(asked_.trace.phrase, "x y z");
  EXPECT_EQ(Run({"trace", "runs/a", "--", "--json", "-x"}), 0) << err_;
  EXPECT_EQ(asked_.trace.phrase, "--json -x");
  EXPECT_FALSE(asked_.trace.json);
  EXPECT_EQ(Run({"restore", "[a,b].txt", "-o", "[c].txt"}), 0);
  EXPECT_EQ(asked_.restore.file, "[a,b].txt");
  EXPECT_EQ(asked_.restore.output, "[c].txt");
  EXPECT_EQ(Run({"run", "-"}), 0);
  EXPECT_EQ(asked_.run.job_file, "-");
}

TEST_F(CommandLine, GradeKnowsTheMeasures) {
  EXPECT_EQ(Run({"grade", "r", "l", "--measure", "npmi"}), 0);
  EXPECT_THAT(asked_.grade.measures, ElementsAre(Quantity::kNpmi));
  EXPECT_EQ(Run({"grade", "r", "l", "--measure", "all"}), 0);
  EXPECT_EQ(asked_.grade.measures.size(), 12u);
  EXPECT_EQ(Run({"grade", "r", "l", "--measure", "nmpi"}), 2);
  EXPECT_EQ(err_,
            "phraseweld grade: --measure must be one of pmi, npmi, pmi2, pmi3, pmi_floor, g2, "
            "chi2, t, dice, dp_forward, dp_backward, burst, all, not 'nmpi'; did you mean "
            "'npmi'?\n");
  EXPECT_EQ(Run({"grade", "r", "l", "--measure", "occurrences"}), 2);
}

TEST_F(CommandLine, WrongUseIsToldWithTheNearestRightOne) {
  struct Case {
    std::vector<std::string> arguments;
    std::string message;
  };
  const std::vector<Case> cases = {
      {{"rnu", "job.yaml"},
       "phraseweld: unknown command 'rnu'; did you mean 'run'?\n"
       "'phraseweld -h' shows how to use it.\n"},
      {{"frobnicate"},
       "phraseweld: unknown command 'frobnicate'; the commands are run, check, verify, restore, "
       "trace, report, grade, compare\n'phraseweld -h' shows how to use it.\n"},
      {{"--verson"},
       "phraseweld: unknown option '--verson'; did you mean '--version'?\n"
       "'phraseweld -h' shows how to use it.\n"},
      {{"run", "--fersh", "job.yaml"},
       "phraseweld run: unknown option '--fersh'; did you mean '--fresh'?\n"
       "'phraseweld run -h' shows how to use it.\n"},
      {{"run", "--fersh"},
       "phraseweld run: unknown option '--fersh'; did you mean '--fresh'?\n"
       "'phraseweld run -h' shows how to use it.\n"},
      {{"run", "-fersh", "job.yaml"},
       "phraseweld run: unknown option '-fersh'; did you mean '--fresh'?\n"
       "'phraseweld run -h' shows how to use it.\n"},
      {{"run", "job.yaml", "-o", "x"},
       "phraseweld run: unknown option '-o'\n'phraseweld run -h' shows how to use it.\n"},
      {{"restore", "f", "--outptu=g"},
       "phraseweld restore: unknown option '--outptu'; did you mean '--output'?\n"
       "'phraseweld restore -h' shows how to use it.\n"},
      {{"run"}, "phraseweld run: JOB is missing\n'phraseweld run -h' shows how to use it.\n"},
      {{"trace", "runs/a"},
       "phraseweld trace: PHRASE is missing\n'phraseweld trace -h' shows how to use it.\n"},
      {{"compare", "runs/a"},
       "phraseweld compare: OTHER is missing\n'phraseweld compare -h' shows how to use it.\n"},
      {{"verify", "a", "b"},
       "phraseweld verify: 'b' is one argument too many\n"
       "'phraseweld verify -h' shows how to use it.\n"},
      {{"run", "job.yaml", "--set"},
       "phraseweld run: option '--set' takes one value\n"
       "'phraseweld run -h' shows how to use it.\n"},
      {{"restore", "f", "-o", "a", "-o", "b"},
       "phraseweld restore: option '--output' takes one value\n"
       "'phraseweld restore -h' shows how to use it.\n"},
  };
  for (const Case& each : cases) {
    EXPECT_EQ(Run(each.arguments), 2);
    EXPECT_EQ(err_, each.message);
    EXPECT_EQ(out_, "");
  }
  EXPECT_EQ(asked_.calls, 0);
}

TEST_F(CommandLine, NothingAtAllIsAnsweredWithTheShortHelp) {
  EXPECT_EQ(Run({}), 2);
  EXPECT_EQ(out_, "");
  const std::string told = err_;
  EXPECT_EQ(Run({"-h"}), 0);
  EXPECT_EQ(out_, told);
}

TEST_F(CommandLine, VersionIsThatOfTheBuild) {
  EXPECT_EQ(Run({"--version"}), 0);
  EXPECT_EQ(out_, "phraseweld 0.1.0\n");
  std::ostringstream text;
  text << std::ifstream(PHRASEWELD_SOURCE_DIR "/CMakeLists.txt").rdbuf();
  EXPECT_THAT(text.str(), HasSubstr(Concat("project(phraseweld VERSION ", kVersion, " ")));
}

TEST_F(CommandLine, TheStatusDecidesTheExitCode) {
  const auto code = [this](absl::Status status) {
    asked_.answer = std::move(status);
    return Run({"verify", "runs/a"});
  };
  EXPECT_EQ(code(absl::OkStatus()), 0);
  EXPECT_EQ(code(absl::DataLossError("it differs")), 1);
  EXPECT_EQ(err_, "phraseweld verify: it differs\n");
  EXPECT_EQ(code(absl::NotFoundError("no file")), 1);
  EXPECT_EQ(code(absl::InvalidArgumentError("wrong")), 2);
  EXPECT_EQ(code(absl::CancelledError("interrupted")), 130);
  EXPECT_EQ(code(absl::InvalidArgumentError("a.yaml:1:2: wrong\n    line\n    ^")), 2);
  EXPECT_EQ(err_, "a.yaml:1:2: wrong\n    line\n    ^\n");
}

TEST_F(CommandLine, ACommandWithoutAHandlerIsNotOffered) {
  std::ostringstream out;
  std::ostringstream err;
  Console console{&out, &err, false, [] { return 80; }};
  Handlers handlers;
  handlers.verify = Note(&Asked::verify);
  EXPECT_EQ(RunCommandLine({"run", "x"}, handlers, console), 2);
  EXPECT_THAT(err.str(), StartsWith("phraseweld: unknown command 'run'"));
  EXPECT_EQ(RunCommandLine({"verify", "x"}, handlers, console), 0);
}

TEST_F(CommandLine, ResultsThatCannotBeWrittenAreAFailure) {
  std::ofstream full("/dev/full");
  ASSERT_TRUE(full);
  std::ostringstream err;
  Console console{&full, &err, false, [] { return 80; }};
  Handlers handlers;
  handlers.verify = Note(&Asked::verify);
  EXPECT_EQ(RunCommandLine({"verify", "x"}, handlers, console), 1);
  EXPECT_EQ(err.str(), "phraseweld verify: standard output could not be written to\n");
}

TEST_F(CommandLine, EveryHelpFitsEightyColumnsAndShortHelpIsShorter) {
  std::vector<std::vector<std::string>> ways = {{}};
  for (const std::string& command : kCommands) ways.push_back({command});
  for (std::vector<std::string> way : ways) {
    way.push_back("-h");
    EXPECT_EQ(Run(way), 0);
    EXPECT_EQ(err_, "");
    const std::string brief = out_;
    way.back() = "--help";
    EXPECT_EQ(Run(way), 0);
    EXPECT_LT(brief.size(), out_.size());
    EXPECT_THAT(out_, HasSubstr("\nExample:\n  phraseweld "));
    for (const std::string& text : {brief, out_}) {
      for (const std::string_view line : Split(text, '\n')) {
        EXPECT_LE(DisplayWidth(line), 80u) << line;
        EXPECT_FALSE(line.ends_with(' ')) << line;
      }
    }
  }
}

TEST_F(CommandLine, HelpComesBeforeComplaints) {
  EXPECT_EQ(Run({"run", "-h"}), 0);
  const std::string help = out_;
  EXPECT_EQ(Run({"-h", "run"}), 0);
  EXPECT_EQ(out_, help);
  EXPECT_EQ(asked_.calls, 0);
}

TEST_F(CommandLine, EveryExampleIsACommandLineThatWorks) {
  for (const std::string& command : kCommands) {
    ASSERT_EQ(Run({command, "--help"}), 0);
    const std::string help = out_;
    const size_t start = help.find("Example:\n  phraseweld ") + 22;
    std::vector<std::string> words;
    const std::string line = help.substr(start, help.find('\n', start) - start);
    for (std::string_view word : Split(line, ' ')) {
      if (word.starts_with('\'')) word = word.substr(1, word.size() - 2);  // as a shell does
      words.emplace_back(word);
    }
    asked_.calls = 0;
    EXPECT_EQ(Run(words), 0) << err_;
    EXPECT_EQ(words.front(), command);
    EXPECT_EQ(asked_.calls, 1);
  }
}

// The whole texts are kept in tests/cli/help; with PHRASEWELD_UPDATE_HELP set in the environment
// the test brings them up to date instead.
TEST_F(CommandLine, HelpIsAsItWasReadAndAgreed) {
  std::vector<std::vector<std::string>> ways = {{"-h"}, {"--help"}};
  for (const std::string& command : kCommands) ways.push_back({command, "--help"});
  for (const auto& way : ways) {
    ASSERT_EQ(Run(way), 0);
    const std::string name = way.size() == 2 ? way[0] : way[0] == "-h" ? "brief" : "program";
    const std::string path = Concat(PHRASEWELD_SOURCE_DIR, "/tests/cli/help/", name, ".txt");
    if (std::getenv("PHRASEWELD_UPDATE_HELP") != nullptr) {
      ASSERT_TRUE(std::ofstream(path) << out_);
      continue;
    }
    std::ostringstream agreed;
    agreed << std::ifstream(path).rdbuf();
    EXPECT_EQ(out_, agreed.str()) << name;
  }
}

TEST(Wrapped, BreaksAtBlanksAndKeepsParagraphs) {
  EXPECT_EQ(Wrapped("one two\n\nthree", 2), "  one two\n\n  three\n");
  const std::string word(50, 'x');
  EXPECT_EQ(Wrapped(Concat(word, " ", word), 0), Concat(word, "\n", word, "\n"));
  EXPECT_EQ(Wrapped(std::string(100, 'x'), 4), Concat("    ", std::string(100, 'x'), "\n"));
}

}  // namespace
}  // namespace phraseweld
