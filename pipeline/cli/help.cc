#include "cli/help.h"

#include <algorithm>
#include <utility>

#include "base/strings.h"
#include "base/utf8.h"

namespace phraseweld {
namespace {

using Rows = std::vector<std::pair<std::string, std::string>>;

// Name and meaning side by side, the meanings aligned and wrapped.
std::string Table(const Rows& rows) {
  size_t widest = 0;
  for (const auto& [name, meaning] : rows) widest = std::max(widest, name.size());
  const size_t indent = 2 + widest + 2;
  std::string text;
  for (const auto& [name, meaning] : rows) {
    std::string wrapped = Wrapped(meaning, indent);
    wrapped.replace(2, name.size(), name);
    text += wrapped;
  }
  return text;
}

std::string OptionNames(const CLI::Option& option) {
  std::vector<std::string> names;
  for (const std::string& name : option.get_snames()) names.push_back("-" + name);
  for (const std::string& name : option.get_lnames()) names.push_back("--" + name);
  const std::string joined = Join(names, ", ");
  // Flags have no value, and options of this program always name theirs.
  return option.get_items_expected_max() == 0 ? joined : joined + " " + option.get_type_name();
}

struct OptionRows {
  Rows arguments;
  Rows options;
};

OptionRows RowsOf(const CLI::App& app) {
  OptionRows rows;
  for (const CLI::Option* option : app.get_options()) {
    if (option->get_positional()) {
      rows.arguments.emplace_back(option->get_name(), option->get_description());
    } else if (option != app.get_help_ptr() && option != app.get_help_all_ptr()) {
      rows.options.emplace_back(OptionNames(*option), option->get_description());
    }
  }
  rows.options.emplace_back("-h", "Show this help in short.");
  rows.options.emplace_back("--help", "Show this help at length, with an example.");
  return rows;
}

std::string Usage(const CLI::App& app, std::string_view command) {
  std::string usage = Concat("  phraseweld ", command);
  for (const CLI::Option* option : app.get_options()) {
    if (!option->get_positional()) continue;
    const bool several = option->get_items_expected_max() > 1;
    AppendTo(&usage, " ", option->get_name(), several ? "..." : "");
  }
  return usage + " [options]\n";
}

}  // namespace

std::string Wrapped(std::string_view text, size_t indent) {
  const std::string blanks(indent, ' ');
  std::string wrapped;
  for (const std::string_view paragraph : Split(text, '\n')) {
    std::string line;
    for (const std::string_view word : Split(paragraph, ' ')) {
      if (!line.empty() && indent + DisplayWidth(line) + 1 + DisplayWidth(word) > kHelpWidth) {
        AppendTo(&wrapped, blanks, line, "\n");
        line.clear();
      }
      AppendTo(&line, line.empty() ? "" : " ", word);
    }
    if (!line.empty()) AppendTo(&wrapped, blanks, line);
    wrapped += "\n";
  }
  return wrapped;
}

std::string ProgramHelp(const CLI::App& app, const std::vector<Command>& commands, bool brief) {
  std::string text = "  phraseweld COMMAND ...\n\n";
  if (!brief) {
    text += Wrapped(
        "Phraseweld mines multi-word phrases out of a document collection by pointwise mutual "
        "information, keeps an account of every decision, and rewrites the collection with the "
        "phrases joined.\n",
        0);
  }
  Rows rows;
  for (const Command& command : commands) {
    rows.emplace_back(std::string(command.name), std::string(command.summary));
  }
  AppendTo(&text, "Commands:\n", Table(rows), "\nOptions:\n", Table(RowsOf(app).options), "\n");
  if (brief) return text + "Each command has help of its own: phraseweld COMMAND -h\n";
  if (!commands.empty()) {
    AppendTo(&text, "Example:\n  ", commands.front().example, "\n\n");
  }
  return text + Wrapped(
                    "Results go to standard output, all else to standard error. The exit status is "
                    "0 when the work is done, 1 when it failed, 2 when the command line or the job "
                    "file is wrong, and 130 when it was interrupted.",
                    0);
}

std::string CommandHelp(const CLI::App& app, const Command& command, bool brief) {
  const OptionRows rows = RowsOf(app);
  Rows all = rows.arguments;
  all.insert(all.end(), rows.options.begin(), rows.options.end());
  std::string text = Usage(app, command.name) + "\n";
  text += Wrapped(command.summary, 0);
  if (!brief) AppendTo(&text, "\n", Wrapped(command.description, 0));
  AppendTo(&text, "\n", Table(all));
  if (!brief) AppendTo(&text, "\nExample:\n  ", command.example, "\n");
  return text;
}

}  // namespace phraseweld
