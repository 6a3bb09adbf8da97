#ifndef PHRASEWELD_CLI_CLI_H_
#define PHRASEWELD_CLI_CLI_H_

#include <string>
#include <vector>

#include "absl/status/status.h"
#include "cli/commands.h"
#include "cli/console.h"

namespace phraseweld {

inline constexpr int kExitDone = 0;
inline constexpr int kExitFailed = 1;
inline constexpr int kExitWrongUse = 2;
inline constexpr int kExitInterrupted = 130;  // 128 and the number of SIGINT, as shells have it

// InvalidArgument: wrong use; Cancelled: interrupted; any other error: failed.
int ExitCode(const absl::Status& status);

// Reads a command line (without the program's name) and carries it out; returns the exit code.
// What is wrong is told on `console.err`, with the nearest right command or option.
int RunCommandLine(const std::vector<std::string>& arguments, const Handlers& handlers,
                   Console& console);

// The program: RunCommandLine() with its own handlers, on the standard streams.
int Main(int argc, char** argv);

}  // namespace phraseweld

#endif  // PHRASEWELD_CLI_CLI_H_
