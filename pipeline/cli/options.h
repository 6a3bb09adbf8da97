#ifndef PHRASEWELD_CLI_OPTIONS_H_
#define PHRASEWELD_CLI_OPTIONS_H_

#include <CLI/CLI.hpp>
#include <memory>
#include <string>
#include <utility>
#include <vector>

#include "cli/commands.h"

namespace phraseweld {

// Arguments and options of the kinds that commands are made of. Where nothing else is said, each
// takes one word of the command line as it is; by itself the parser would split "[a,b]", and a
// list would take all the words that follow.

inline void AddArgument(CLI::App& app, const std::string& name, std::string& target,
                        const std::string& meaning) {
  app.add_option(name, target, meaning)->required()->allow_extra_args(false);
}

// One argument or more. The parser splits "[a,b]" here, which words of a phrase can bear: brackets
// are no part of a word.
inline void AddArguments(CLI::App& app, const std::string& name, std::vector<std::string>& target,
                         const std::string& meaning) {
  app.add_option(name, target, meaning)->required()->allow_extra_args(true);
}

inline void AddOption(CLI::App& app, const std::string& names, const std::string& value,
                      std::string& target, const std::string& meaning) {
  app.add_option(names, target, meaning)->type_name(value)->allow_extra_args(false);
}

inline void AddSettings(CLI::App& app, std::vector<std::string>& target) {
  app.add_option("--set", target, "Override a key of the job file; may be given several times.")
      ->type_name("KEY=VALUE")
      ->allow_extra_args(false);
}

// A command whose arguments live as long as its parser and its action.
template <class Arguments, class Define>
std::function<Command::Action(CLI::App&)> DefineWith(Handler<Arguments> handler, Define define) {
  return [handler = std::move(handler), define](CLI::App& app) -> Command::Action {
    auto arguments = std::make_shared<Arguments>();
    define(app, *arguments);
    return [handler, arguments](Console& console) { return handler(*arguments, console); };
  };
}

}  // namespace phraseweld

#endif  // PHRASEWELD_CLI_OPTIONS_H_
