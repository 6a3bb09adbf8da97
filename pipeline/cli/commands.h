#ifndef PHRASEWELD_CLI_COMMANDS_H_
#define PHRASEWELD_CLI_COMMANDS_H_

#include <functional>
#include <string>
#include <string_view>
#include <vector>

#include "absl/status/status.h"
#include "base/quantity.h"
#include "cli/console.h"

namespace CLI {
class App;
}

namespace phraseweld {

// What each command was asked to do. Paths are as given, relative to the working directory.

struct RunArguments {
  std::string job_file;
  std::vector<std::string> settings;  // key=value
  bool fresh = false;                 // start anew instead of going on
  bool quiet = false;                 // no progress
};

struct CheckArguments {
  std::string job_file;
  std::vector<std::string> settings;  // key=value
};

struct VerifyArguments {
  std::string run_folder;
};

struct RestoreArguments {
  std::string file;
  std::string output;  // empty: standard output
};

struct TraceArguments {
  std::string run_folder;
  std::string phrase;  // the words as given, with one space between arguments
  bool json = false;
};

struct ReportArguments {
  std::string run_folder;
  std::string output;  // empty: report.html in the run folder
};

struct GradeArguments {
  std::string run_folder;
  std::string list_file;
  std::vector<Quantity> measures;  // empty: the one that the run ranked by
  bool json = false;
};

struct CompareArguments {
  std::string left_run;
  std::string right_run;
  bool json = false;
  std::string html;  // empty: no page
};

// What does a command's work. The status decides the exit code (see ExitCode() in cli.h), its
// message is shown to the user.
template <class Arguments>
using Handler = std::function<absl::Status(const Arguments&, Console&)>;

// A command without a handler is not offered.
struct Handlers {
  Handler<RunArguments> run;
  Handler<CheckArguments> check;
  Handler<VerifyArguments> verify;
  Handler<RestoreArguments> restore;
  Handler<TraceArguments> trace;
  Handler<ReportArguments> report;
  Handler<GradeArguments> grade;
  Handler<CompareArguments> compare;
};

// The handlers of the program itself.
Handlers ProgramHandlers();

// A command as the command line knows it.
struct Command {
  using Action = std::function<absl::Status(Console&)>;
  std::string_view name;
  std::string_view summary;      // one line, for the list of commands
  std::string_view description;  // paragraphs, for --help
  std::string_view example;      // lines that can be typed as they are
  // Adds the command's arguments and options to its parser. What comes back does the work, once
  // the command line has been read.
  std::function<Action(CLI::App&)> define;
};

Command RunCommand(Handler<RunArguments> handler);
Command CheckCommand(Handler<CheckArguments> handler);
Command VerifyCommand(Handler<VerifyArguments> handler);
Command RestoreCommand(Handler<RestoreArguments> handler);
Command TraceCommand(Handler<TraceArguments> handler);
Command ReportCommand(Handler<ReportArguments> handler);
Command GradeCommand(Handler<GradeArguments> handler);
Command CompareCommand(Handler<CompareArguments> handler);

// Those that have a handler, in the order in which they are listed.
std::vector<Command> CommandTable(const Handlers& handlers);

}  // namespace phraseweld

#endif  // PHRASEWELD_CLI_COMMANDS_H_
