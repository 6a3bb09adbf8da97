#include "run/passing_folder.h"

#include <cstdlib>
#include <filesystem>

#include "base/strings.h"

namespace phraseweld {

PassingFolder::~PassingFolder() {
  // Nothing hangs on what is left in a folder for passing things.
  if (!path_.empty()) files_.RemoveAll(path_).IgnoreError();
}

absl::StatusOr<std::string> PassingFolder::Path() {
  if (!path_.empty()) return path_;
  std::error_code error;
  const std::filesystem::path parent = std::filesystem::temp_directory_path(error);
  std::string pattern = (parent / "phraseweld-XXXXXX").string();
  if (error || mkdtemp(pattern.data()) == nullptr) {
    return absl::UnavailableError(
        Concat("cannot make a folder below ", parent.string(), "; set TMPDIR to where one can be"));
  }
  path_ = pattern;
  return path_;
}

}  // namespace phraseweld
