#include "cli/commands.h"
#include "cli/handle_run.h"

namespace phraseweld {

Handlers ProgramHandlers() {
  Handlers handlers;
  handlers.run = HandleRun;
  handlers.check = HandleCheck;
  handlers.restore = HandleRestore;
  return handlers;
}

}  // namespace phraseweld
