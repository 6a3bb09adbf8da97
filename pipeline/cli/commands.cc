#include "cli/commands.h"

namespace phraseweld {

std::vector<Command> CommandTable(const Handlers& handlers) {
  std::vector<Command> table;
  if (handlers.run) table.push_back(RunCommand(handlers.run));
  if (handlers.check) table.push_back(CheckCommand(handlers.check));
  if (handlers.verify) table.push_back(VerifyCommand(handlers.verify));
  if (handlers.restore) table.push_back(RestoreCommand(handlers.restore));
  if (handlers.trace) table.push_back(TraceCommand(handlers.trace));
  if (handlers.report) table.push_back(ReportCommand(handlers.report));
  if (handlers.grade) table.push_back(GradeCommand(handlers.grade));
  if (handlers.compare) table.push_back(CompareCommand(handlers.compare));
  return table;
}

}  // namespace phraseweld
