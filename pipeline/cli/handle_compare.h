#ifndef PHRASEWELD_CLI_HANDLE_COMPARE_H_
#define PHRASEWELD_CLI_HANDLE_COMPARE_H_

#include "absl/status/status.h"
#include "cli/commands.h"
#include "cli/console.h"

namespace phraseweld {

// `compare`: the comparison as text or JSON on console.out, and as a page where one is asked for.
absl::Status HandleCompare(const CompareArguments& arguments, Console& console);

}  // namespace phraseweld

#endif  // PHRASEWELD_CLI_HANDLE_COMPARE_H_
