#ifndef PHRASEWELD_CLI_HANDLE_TRACE_H_
#define PHRASEWELD_CLI_HANDLE_TRACE_H_

#include "absl/status/status.h"
#include "cli/commands.h"
#include "cli/console.h"

namespace phraseweld {

// `trace`: the life of a phrase as text or JSON on console.out, progress on console.err.
absl::Status HandleTrace(const TraceArguments& arguments, Console& console);

}  // namespace phraseweld

#endif  // PHRASEWELD_CLI_HANDLE_TRACE_H_
