#include "files/pattern.h"

#include <glob.h>

#include <algorithm>
#include <cerrno>

#include "absl/strings/str_cat.h"

namespace phraseweld {
namespace {

// Called by glob(3) for a folder that it cannot open; not 0 ends the search. A folder that is not
// there only means that nothing matches.
int StopAtUnreadable(const char* /*path*/, int error) {
  return error == ENOENT || error == ENOTDIR ? 0 : 1;
}

}  // namespace

bool IsPattern(const std::string& pattern) {
  return pattern.find_first_of("*?[\\") != std::string::npos;
}

absl::StatusOr<std::vector<std::string>> ExpandPattern(const std::string& pattern) {
  glob_t found{};
  const int result = glob(pattern.c_str(), GLOB_NOSORT, StopAtUnreadable, &found);
  std::vector<std::string> paths(found.gl_pathv, found.gl_pathv + found.gl_pathc);
  globfree(&found);
  if (result == GLOB_ABORTED) {
    return absl::PermissionDeniedError(
        absl::StrCat("cannot expand ", pattern,
                     ": a folder on its way cannot be listed; check its permissions"));
  }
  if (result == GLOB_NOSPACE) {
    return absl::ResourceExhaustedError(absl::StrCat("cannot expand ", pattern, ": out of memory"));
  }
  std::sort(paths.begin(), paths.end());
  return paths;
}

}  // namespace phraseweld
