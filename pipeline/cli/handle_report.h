#ifndef PHRASEWELD_CLI_HANDLE_REPORT_H_
#define PHRASEWELD_CLI_HANDLE_REPORT_H_

#include "absl/status/status.h"
#include "cli/commands.h"
#include "cli/console.h"

namespace phraseweld {

// `report`: makes the page and names its file on console.out; remarks and progress on
// console.err.
absl::Status HandleReport(const ReportArguments& arguments, Console& console);

}  // namespace phraseweld

#endif  // PHRASEWELD_CLI_HANDLE_REPORT_H_
