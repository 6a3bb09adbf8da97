#include "cli/options.h"

namespace phraseweld {

Command RestoreCommand(Handler<RestoreArguments> handler) {
  return {"restore", "Undo a rewritten file, byte for byte.",
          "Takes the phrases in a file of a run's rewritten corpus apart again. Beside FILE must "
          "stand FILE.joints.zst, which the run has put there.",
          "phraseweld restore runs/ferry-notes/corpus/march.jsonl -o march.jsonl",
          DefineWith<RestoreArguments>(
              std::move(handler), [](CLI::App& app, RestoreArguments& arguments) {
                AddArgument(app, "FILE", arguments.file, "The rewritten file.");
                AddOption(app, "-o,--output", "FILE", arguments.output,
                          "Write there instead of to standard output.");
              })};
}

}  // namespace phraseweld
