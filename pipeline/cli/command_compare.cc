#include "cli/options.h"

namespace phraseweld {

Command CompareCommand(Handler<CompareArguments> handler) {
  return {"compare", "Show what two runs share and where they differ.",
          "Goes through the phrases of both runs: those in both, those in one only, and those "
          "whose counts or scores have changed.",
          "phraseweld compare runs/may runs/june --html changes.html",
          DefineWith<CompareArguments>(
              std::move(handler), [](CLI::App& app, CompareArguments& arguments) {
                AddArgument(app, "RUN", arguments.left_run, "The folder of the one run.");
                AddArgument(app, "OTHER", arguments.right_run, "The folder of the other run.");
                app.add_flag("--json", arguments.json, "Answer in JSON.");
                AddOption(app, "--html", "FILE", arguments.html, "Write a page there as well.");
              })};
}

}  // namespace phraseweld
