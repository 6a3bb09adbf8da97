#ifndef PHRASEWELD_CLI_HANDLE_GRADE_H_
#define PHRASEWELD_CLI_HANDLE_GRADE_H_

#include "absl/status/status.h"
#include "cli/commands.h"
#include "cli/console.h"

namespace phraseweld {

// `grade`: the report as text or JSON on console.out, progress on console.err.
absl::Status HandleGrade(const GradeArguments& arguments, Console& console);

}  // namespace phraseweld

#endif  // PHRASEWELD_CLI_HANDLE_GRADE_H_
