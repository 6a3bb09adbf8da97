#include "cli/options.h"

namespace phraseweld {

Command CheckCommand(Handler<CheckArguments> handler) {
  return {
      "check", "Say what a job would do and need, without running it.",
      "Reads the job file and looks at its inputs. Prints the job with every default filled "
      "in, and the memory and disk that a run will need. Every mistake in the job file is "
      "reported at once.",
      "phraseweld check ferry-notes.yaml --set 'corpus.files=[\"notes/*.jsonl.zst\"]'",
      DefineWith<CheckArguments>(std::move(handler), [](CLI::App& app, CheckArguments& arguments) {
        AddArgument(app, "JOB", arguments.job_file, "The job file (YAML).");
        AddSettings(app, arguments.settings);
      })};
}

}  // namespace phraseweld
