#ifndef PHRASEWELD_FILES_COMPRESSED_INPUT_H_
#define PHRASEWELD_FILES_COMPRESSED_INPUT_H_

#include <memory>
#include <string>

#include "absl/status/statusor.h"
#include "files/streams.h"

namespace phraseweld {

// The decompressing kinds of InputStream. `path` names the file in errors.
absl::StatusOr<std::unique_ptr<InputStream>> OpenZstdInput(const std::string& path,
                                                           std::unique_ptr<ReadFile> file);
absl::StatusOr<std::unique_ptr<InputStream>> OpenGzipInput(const std::string& path,
                                                           std::unique_ptr<ReadFile> file);

}  // namespace phraseweld

#endif  // PHRASEWELD_FILES_COMPRESSED_INPUT_H_
