#ifndef PHRASEWELD_BASE_STATUS_H_
#define PHRASEWELD_BASE_STATUS_H_

#include <utility>

#include "absl/status/status.h"
#include "absl/status/statusor.h"

// Abseil's 2022 release ships no such macros. Each returns from the enclosing function when the
// expression is not OK.
#define PW_CONCAT_INNER(a, b) a##b
#define PW_CONCAT(a, b) PW_CONCAT_INNER(a, b)

// A counter rather than the line names the variable, so that one may stand in a lambda inside another.
#define PW_RETURN_IF_ERROR(expression) \
  PW_RETURN_IF_ERROR_INNER(PW_CONCAT(pw_status_, __COUNTER__), expression)
#define PW_RETURN_IF_ERROR_INNER(status, expression)  \
  do {                                                \
    if (auto status = (expression); !status.ok()) return status; \
  } while (false)

#define PW_ASSIGN_OR_RETURN(target, expression) \
  PW_ASSIGN_OR_RETURN_INNER(PW_CONCAT(pw_statusor_, __COUNTER__), target, expression)
#define PW_ASSIGN_OR_RETURN_INNER(statusor, target, expression) \
  auto statusor = (expression);                                 \
  if (!statusor.ok()) return std::move(statusor).status();      \
  target = *std::move(statusor)

#endif  // PHRASEWELD_BASE_STATUS_H_
