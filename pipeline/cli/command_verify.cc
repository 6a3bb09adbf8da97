#include "cli/options.h"

namespace phraseweld {

Command VerifyCommand(Handler<VerifyArguments> handler) {
  return {"verify", "Prove a finished run from its source.",
          "Counts every figure of the audit log again, undoes the rewritten corpus and compares "
          "it with the source byte for byte. Names what differs, up to 20 faults, and exits "
          "with 1 if there are any.",
          "phraseweld verify runs/ferry-notes",
          DefineWith<VerifyArguments>(
              std::move(handler), [](CLI::App& app, VerifyArguments& arguments) {
                AddArgument(app, "RUN", arguments.run_folder, "The folder of a finished run.");
              })};
}

}  // namespace phraseweld
