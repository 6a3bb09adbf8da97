#ifndef PHRASEWELD_RUN_PASSING_FOLDER_H_
#define PHRASEWELD_RUN_PASSING_FOLDER_H_

#include <string>

#include "absl/status/statusor.h"
#include "files/file_system.h"

namespace phraseweld {

// A folder for the time that it lives, in the system's folder for such things.
class PassingFolder {
 public:
  explicit PassingFolder(FileSystem& files) : files_(files) {}
  ~PassingFolder();
  PassingFolder(const PassingFolder&) = delete;
  PassingFolder& operator=(const PassingFolder&) = delete;
  absl::StatusOr<std::string> Path();  // made when it is first asked for

 private:
  FileSystem& files_;
  std::string path_;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_PASSING_FOLDER_H_
