#ifndef PHRASEWELD_CLI_CONSOLE_H_
#define PHRASEWELD_CLI_CONSOLE_H_

#include <functional>
#include <ostream>

namespace phraseweld {

// What a command talks to. Results go to `out`; progress, remarks and errors to `err`.
struct Console {
  std::ostream* out;
  std::ostream* err;
  bool err_is_terminal = false;
  std::function<int()> width;  // columns of the terminal behind `err`, at the time of the call
};

}  // namespace phraseweld

#endif  // PHRASEWELD_CLI_CONSOLE_H_
