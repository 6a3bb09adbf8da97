#ifndef PHRASEWELD_FILES_STORED_INPUT_H_
#define PHRASEWELD_FILES_STORED_INPUT_H_

#include <cstdint>
#include <memory>
#include <string>
#include <utility>

#include "absl/status/statusor.h"
#include "files/file_system.h"
#include "files/streams.h"

namespace phraseweld {

// A file read as it is stored, counted and hashed on the way.
class StoredInput {
 public:
  StoredInput(std::string path, std::unique_ptr<ReadFile> file)
      : path_(std::move(path)), file_(std::move(file)) {}

  absl::StatusOr<size_t> Read(char* buffer, size_t size) {
    absl::StatusOr<size_t> got = file_->Read(buffer, size);
    if (got.ok()) {
      hasher_.Update({buffer, *got});
      bytes_ += *got;
    }
    return got;
  }

  const std::string& path() const { return path_; }
  uint64_t bytes() const { return bytes_; }
  Hash128 hash() const { return hasher_.Value(); }

 private:
  std::string path_;
  std::unique_ptr<ReadFile> file_;
  Hasher hasher_;
  uint64_t bytes_ = 0;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_FILES_STORED_INPUT_H_
