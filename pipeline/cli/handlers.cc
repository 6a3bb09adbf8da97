#include "cli/commands.h"
#include "cli/handle_compare.h"
#include "cli/handle_grade.h"
#include "cli/handle_report.h"
#include "cli/handle_run.h"
#include "cli/handle_trace.h"
#include "cli/handle_verify.h"

namespace phraseweld {

Handlers ProgramHandlers() {
  Handlers handlers;
  handlers.run = HandleRun;
  handlers.check = HandleCheck;
  handlers.verify = HandleVerify;
  handlers.restore = HandleRestore;
  handlers.trace = HandleTrace;
  handlers.report = HandleReport;
  handlers.grade = HandleGrade;
  handlers.compare = HandleCompare;
  return handlers;
}

}  // namespace phraseweld
