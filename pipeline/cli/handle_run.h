#ifndef PHRASEWELD_CLI_HANDLE_RUN_H_
#define PHRASEWELD_CLI_HANDLE_RUN_H_

#include "absl/status/status.h"
#include "cli/commands.h"
#include "cli/console.h"

namespace phraseweld {

// `run`: progress on console.err, the summary on console.out.
absl::Status HandleRun(const RunArguments& arguments, Console& console);
// `check`: the resolved job and what it will need, on console.out.
absl::Status HandleCheck(const CheckArguments& arguments, Console& console);
// `restore`: the source's bytes on console.out, or in a file.
absl::Status HandleRestore(const RestoreArguments& arguments, Console& console);

}  // namespace phraseweld

#endif  // PHRASEWELD_CLI_HANDLE_RUN_H_
