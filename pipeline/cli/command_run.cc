#include "cli/options.h"

namespace phraseweld {

Command RunCommand(Handler<RunArguments> handler) {
  return {"run", "Carry out a job, or go on with an interrupted one.",
          "Reads the documents that the job file names, mines phrases from them pass by pass, and "
          "leaves the phrases, the audit log and the rewritten corpus in the job's run folder. "
          "Started again after an interruption, it goes on after the last whole pass.\n\n"
          "Progress goes to standard error: a live line on a terminal, else a line every five "
          "seconds.",
          "phraseweld run ferry-notes.yaml --set limits.threads=4",
          DefineWith<RunArguments>(std::move(handler), [](CLI::App& app, RunArguments& arguments) {
            AddArgument(app, "JOB", arguments.job_file, "The job file (YAML).");
            AddSettings(app, arguments.settings);
            app.add_flag("--fresh", arguments.fresh,
                         "Start anew, dropping what an interrupted run left behind.");
            app.add_flag("--quiet", arguments.quiet, "Show no progress.");
          })};
}

}  // namespace phraseweld
