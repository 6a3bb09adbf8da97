#include "cli/options.h"

namespace phraseweld {

Command RunCommand(Handler<RunArguments> handler) {
  return {"run", "Carry out a job; the run folder is the result.",
          "Reads the documents that the job file names, mines phrases from them pass by pass, and "
          "leaves the phrases, the audit log and the rewritten corpus in the job's run folder. "
          "An interrupted run leaves nothing behind; started again it starts over.\n\n"
          "Progress goes to standard error: a live line on a terminal, else a line every five "
          "seconds.",
          "phraseweld run ferry-notes.yaml --set limits.threads=4",
          DefineWith<RunArguments>(std::move(handler), [](CLI::App& app, RunArguments& arguments) {
            AddArgument(app, "JOB", arguments.job_file, "The job file (YAML).");
            AddSettings(app, arguments.settings);
            app.add_flag("--fresh", arguments.fresh,
                         "Replace the finished run that the run folder holds.");
            app.add_flag("--quiet", arguments.quiet, "Show no progress.");
          })};
}

}  // namespace phraseweld
