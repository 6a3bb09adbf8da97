#ifndef PHRASEWELD_CLI_HELP_H_
#define PHRASEWELD_CLI_HELP_H_

#include <CLI/CLI.hpp>
#include <string>
#include <string_view>
#include <vector>

#include "cli/commands.h"

namespace phraseweld {

// Help fits this many columns.
inline constexpr size_t kHelpWidth = 80;

// Help of the program: `brief` for -h, whole for --help.
std::string ProgramHelp(const CLI::App& app, const std::vector<Command>& commands, bool brief);

// Help of one command, whose parser is `app`.
std::string CommandHelp(const CLI::App& app, const Command& command, bool brief);

// `text` broken at blanks into lines of at most kHelpWidth columns, each line after `indent`
// blanks and ended; a blank line stays between paragraphs. Longer words stand out.
std::string Wrapped(std::string_view text, size_t indent);

}  // namespace phraseweld

#endif  // PHRASEWELD_CLI_HELP_H_
