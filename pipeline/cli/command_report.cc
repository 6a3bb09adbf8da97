#include "cli/options.h"

namespace phraseweld {

Command ReportCommand(Handler<ReportArguments> handler) {
  return {"report", "Make a page for reading a run in a browser.",
          "Writes one HTML file that needs nothing else: the phrases with their scores, what each "
          "was made of, contexts from the corpus, and the rulings.",
          "phraseweld report runs/ferry-notes -o ferry-notes.html",
          DefineWith<ReportArguments>(
              std::move(handler), [](CLI::App& app, ReportArguments& arguments) {
                AddArgument(app, "RUN", arguments.run_folder, "The folder of a finished run.");
                AddOption(app, "-o,--output", "FILE", arguments.output,
                          "Write there instead of to report.html in the run folder.");
              })};
}

}  // namespace phraseweld
