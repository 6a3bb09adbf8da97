#ifndef PHRASEWELD_CLI_HANDLE_VERIFY_H_
#define PHRASEWELD_CLI_HANDLE_VERIFY_H_

#include "absl/status/status.h"
#include "cli/commands.h"
#include "cli/console.h"

namespace phraseweld {

// `verify`: progress on console.err, what was proved on console.out; the faults are the status.
absl::Status HandleVerify(const VerifyArguments& arguments, Console& console);

}  // namespace phraseweld

#endif  // PHRASEWELD_CLI_HANDLE_VERIFY_H_
