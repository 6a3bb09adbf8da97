#include "absl/strings/str_join.h"
#include "cli/options.h"

namespace phraseweld {

Command TraceCommand(Handler<TraceArguments> handler) {
  return {"trace", "Tell the life of one phrase.",
          "For a phrase that was made: in which passes, out of what, on which counts and scores. "
          "For one that was not: which gate turned it away.",
          "phraseweld trace runs/ferry-notes terms of service",
          [handler = std::move(handler)](CLI::App& app) -> Command::Action {
            auto arguments = std::make_shared<TraceArguments>();
            auto words = std::make_shared<std::vector<std::string>>();
            AddArgument(app, "RUN", arguments->run_folder, "The folder of a finished run.");
            AddArguments(app, "PHRASE", *words, "The phrase, in quotes or as several arguments.");
            app.add_flag("--json", arguments->json, "Answer in JSON.");
            return [handler, arguments, words](Console& console) {
              arguments->phrase = absl::StrJoin(*words, " ");
              return handler(*arguments, console);
            };
          }};
}

}  // namespace phraseweld
