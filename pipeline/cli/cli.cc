#include "cli/cli.h"

#include <sys/ioctl.h>
#include <unistd.h>

#include <CLI/CLI.hpp>
#include <algorithm>
#include <cstdlib>
#include <exception>
#include <iostream>
#include <new>
#include <string_view>
#include <utility>

#include "base/nearest.h"
#include "base/strings.h"
#include "base/version.h"
#include "cli/help.h"

namespace phraseweld {
namespace {

constexpr int kUsualWidth = 80;  // where the terminal does not say

// The parsers and what they lead to.
struct Program {
  CLI::App app;
  std::vector<Command> commands;
  std::vector<CLI::App*> parsers;  // beside `commands`
  std::vector<Command::Action> actions;

  explicit Program(const Handlers& handlers) : commands(CommandTable(handlers)) {
    app.name("phraseweld");
    app.set_help_flag("-h");  // before the commands, which take it over
    app.set_help_all_flag("--help");
    app.set_version_flag("--version", Concat("phraseweld ", kVersion), "Show the version.");
    app.require_subcommand(1);
    for (const Command& command : commands) {
      parsers.push_back(app.add_subcommand(std::string(command.name)));
      actions.push_back(command.define(*parsers.back()));
    }
  }

  // The position of the command on the command line, or commands.size().
  size_t Chosen() const {
    const auto parser = std::find_if(parsers.begin(), parsers.end(),
                                     [](const CLI::App* each) { return each->parsed(); });
    return static_cast<size_t>(parser - parsers.begin());
  }
};

bool IsOption(const std::string& word) {
  return word[0] == '-' && word.find_first_not_of('-') != std::string::npos;
}

std::string UnknownOption(const CLI::App& parser, const std::string& word) {
  // Compared without their dashes, which all have in common and which are easily miscounted.
  std::vector<std::string> known = {"help"};
  for (const CLI::Option* option : parser.get_options()) {
    for (const std::string& name : option->get_lnames()) known.push_back(name);
  }
  const std::string name = word.substr(0, word.find('='));
  const std::string bare = name.substr(name.find_first_not_of('-'));
  const std::vector<std::string_view> names(known.begin(), known.end());
  const auto nearest = NearestName(bare, names);
  return Concat("unknown option '", name, "'",
                nearest.has_value() ? Concat("; did you mean '--", *nearest, "'?") : "");
}

std::string UnknownCommand(const Program& program, const std::string& word) {
  std::vector<std::string_view> names;
  for (const Command& command : program.commands) names.push_back(command.name);
  std::string help = DidYouMean(word, names);
  if (help.empty() && !names.empty()) help = Concat("; the commands are ", Join(names, ", "));
  return Concat("unknown command '", word, "'", help);
}

// What is wrong with the command line, in this program's words. What the parser could not place is
// told before what it misses, since a misspelt option is often the cause of both.
std::string WhatIsWrong(const Program& program, const CLI::ParseError& error) {
  const size_t chosen = program.Chosen();
  const bool has_command = chosen < program.commands.size();
  const CLI::App& parser = has_command ? *program.parsers[chosen] : program.app;
  std::vector<std::string> left_over = program.app.remaining();
  if (has_command) {
    const std::vector<std::string> own = parser.remaining();
    left_over.insert(left_over.end(), own.begin(), own.end());
  }
  for (const std::string& word : left_over) {
    if (IsOption(word)) return UnknownOption(parser, word);
  }
  if (!left_over.empty()) {
    return has_command ? Concat("'", left_over.front(), "' is one argument too many")
                       : UnknownCommand(program, left_over.front());
  }
  if (!has_command) return "a command is missing";
  for (const CLI::Option* option : parser.get_options()) {
    if (option->get_required() && option->count() == 0) {
      return Concat(option->get_name(), " is missing");
    }
  }
  // The parser's messages start with the option's name and a colon.
  const std::string_view message = error.what();
  if (dynamic_cast<const CLI::ArgumentMismatch*>(&error) != nullptr) {
    return Concat("option '", message.substr(0, message.find(':')), "' takes one value");
  }
  return std::string(message);
}

// Usage errors and help; -1 when the command's action is to be carried out.
int Parse(const std::vector<std::string>& arguments, Program& program, Console& console) {
  const auto help = [&program](bool brief) {
    const size_t chosen = program.Chosen();
    return chosen == program.commands.size()
               ? ProgramHelp(program.app, program.commands, brief)
               : CommandHelp(*program.parsers[chosen], program.commands[chosen], brief);
  };
  try {
    std::vector<std::string> reversed(arguments.rbegin(), arguments.rend());
    program.app.parse(std::move(reversed));
    return -1;
  } catch (const CLI::CallForHelp&) {
    *console.out << help(true);
  } catch (const CLI::CallForAllHelp&) {
    *console.out << help(false);
  } catch (const CLI::CallForVersion& version) {
    *console.out << version.what() << "\n";
  } catch (const CLI::ParseError& error) {
    if (arguments.empty()) {
      *console.err << help(true);
      return kExitWrongUse;
    }
    const size_t chosen = program.Chosen();
    const std::string command =
        chosen == program.commands.size() ? "" : Concat(" ", program.commands[chosen].name);
    *console.err << "phraseweld" << command << ": " << WhatIsWrong(program, error)
                 << "\n'phraseweld" << command << " -h' shows how to use it.\n";
    return kExitWrongUse;
  }
  return kExitDone;
}

void TellFailure(std::string_view command, const absl::Status& status, Console& console) {
  const std::string message(status.message());
  // Faults of a file stand in lines of their own, each starting with its place, where editors and
  // terminals look for it.
  if (Contains(message, "\n")) {
    *console.err << message << "\n";
  } else {
    *console.err << "phraseweld " << command << ": " << message << "\n";
  }
}

int TerminalWidth() {
  winsize size{};
  if (ioctl(STDERR_FILENO, TIOCGWINSZ, &size) == 0 && size.ws_col > 0) return size.ws_col;
  return kUsualWidth;
}

}  // namespace

int ExitCode(const absl::Status& status) {
  switch (status.code()) {
    case absl::StatusCode::kOk:
      return kExitDone;
    case absl::StatusCode::kInvalidArgument:
      return kExitWrongUse;
    case absl::StatusCode::kCancelled:
      return kExitInterrupted;
    default:
      return kExitFailed;
  }
}

int RunCommandLine(const std::vector<std::string>& arguments, const Handlers& handlers,
                   Console& console) {
  Program program(handlers);
  std::string_view command;
  int code = Parse(arguments, program, console);
  if (code < 0) {
    const size_t chosen = program.Chosen();
    command = program.commands[chosen].name;
    const absl::Status status = program.actions[chosen](console);
    if (!status.ok()) TellFailure(command, status, console);
    code = ExitCode(status);
  }
  console.out->flush();
  if (code == kExitDone && !*console.out) {
    TellFailure(command, absl::DataLossError("standard output could not be written to"), console);
    code = kExitFailed;
  }
  return code;
}

int Main(int argc, char** argv) {
  const char* terminal = std::getenv("TERM");
  // A terminal that calls itself dumb cannot go back in a line.
  const bool capable = terminal != nullptr && std::string_view(terminal) != "dumb";
  Console console{&std::cout, &std::cerr, capable && isatty(STDERR_FILENO) == 1, TerminalWidth};
  try {
    return RunCommandLine({argv + std::min(argc, 1), argv + argc}, ProgramHandlers(), console);
  } catch (const std::bad_alloc&) {
    std::cerr << "phraseweld: out of memory; a smaller limits.memory keeps more on disk\n";
  } catch (const std::exception& failure) {
    // Only a library that is broken or missing its data throws this far.
    std::cerr << "phraseweld: a library failed: " << failure.what() << "\n";
  }
  return kExitFailed;
}

}  // namespace phraseweld
