#ifndef PHRASEWELD_FILES_PATTERN_H_
#define PHRASEWELD_FILES_PATTERN_H_

#include <string>
#include <vector>

#include "absl/status/statusor.h"

namespace phraseweld {

// Whether `pattern` has one of the characters that ExpandPattern() gives a meaning: * ? [ and \.
bool IsPattern(const std::string& pattern);

// The paths that a POSIX shell pattern (*, ?, [...]; a backslash takes a character's meaning away)
// stands for, in byte order whatever the locale; none is no error. A folder on its way that cannot
// be listed is one.
absl::StatusOr<std::vector<std::string>> ExpandPattern(const std::string& pattern);

}  // namespace phraseweld

#endif  // PHRASEWELD_FILES_PATTERN_H_
