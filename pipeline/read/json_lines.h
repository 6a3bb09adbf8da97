#ifndef PHRASEWELD_READ_JSON_LINES_H_
#define PHRASEWELD_READ_JSON_LINES_H_

#include <simdjson.h>

#include <cstring>
#include <memory>
#include <string>
#include <string_view>
#include <utility>

#include "base/status.h"
#include "base/strings.h"
#include "files/file_system.h"
#include "read/json_fields.h"

namespace phraseweld {

inline absl::Status FaultOfLine(std::string_view path, uint64_t line, std::string_view fault) {
  return absl::DataLossError(Concat(path, ":", line, ": ", fault,
                                    "; the run folder is damaged, so make it anew or take it from "
                                    "a copy"));
}

// The lines of a file of the run folder, each parsed as a JSON object.
class JsonLinesFile {
 public:
  static absl::StatusOr<std::unique_ptr<JsonLinesFile>> Open(FileSystem& files,
                                                             const std::string& path) {
    PW_ASSIGN_OR_RETURN(const FileInfo info, files.Stat(path));
    if (!info.exists || info.is_directory) {
      return absl::NotFoundError(
          Concat(path, ": there is no such file, so this is no finished run folder"));
    }
    PW_ASSIGN_OR_RETURN(std::unique_ptr<ReadFile> file, files.OpenRead(path));
    return std::unique_ptr<JsonLinesFile>(new JsonLinesFile(path, std::move(file)));
  }

  // The next line, good until the next call; false at the end.
  absl::StatusOr<bool> Next(simdjson::dom::object* object) {
    begin_ = next_;
    size_t searched = begin_;
    const char* feed = nullptr;
    while (true) {
      const char* const from = buffer_.data() + searched;
      feed = static_cast<const char*>(std::memchr(from, '\n', filled_ - searched));
      if (feed != nullptr || ended_) break;
      searched = filled_ - begin_;
      PW_RETURN_IF_ERROR(Fill());
    }
    if (feed == nullptr && begin_ == filled_) return false;
    ++line_;
    if (feed == nullptr) return Fault("the line has no end: the file is cut");
    const auto end = static_cast<size_t>(feed - buffer_.data());
    next_ = end + 1;
    const auto error =
        parser_.parse(buffer_.data() + begin_, end - begin_, false).get_object().get(*object);
    if (error != simdjson::SUCCESS) {
      return Fault(Concat("this is no JSON object (", simdjson::error_message(error), ")"));
    }
    return true;
  }

  absl::Status Fault(std::string_view fault) const { return FaultOfLine(path_, line_, fault); }
  const std::string& path() const { return path_; }
  uint64_t line() const { return line_; }

 private:
  JsonLinesFile(std::string path, std::unique_ptr<ReadFile> file)
      : path_(std::move(path)), file_(std::move(file)) {
    buffer_.resize(kBuffer + simdjson::SIMDJSON_PADDING);
  }

  // Moves the line at hand to the front and reads on behind it.
  absl::Status Fill() {
    std::memmove(buffer_.data(), buffer_.data() + begin_, filled_ - begin_);
    filled_ -= begin_;
    begin_ = 0;
    if (filled_ + simdjson::SIMDJSON_PADDING == buffer_.size()) {
      buffer_.resize(2 * filled_ + simdjson::SIMDJSON_PADDING);
    }
    PW_ASSIGN_OR_RETURN(const size_t got,
                        file_->Read(buffer_.data() + filled_,
                                    buffer_.size() - simdjson::SIMDJSON_PADDING - filled_));
    ended_ = got == 0;
    filled_ += got;
    return absl::OkStatus();
  }

  static constexpr size_t kBuffer = size_t{1} << 18;  // stays in the second-level cache

  std::string path_;
  std::unique_ptr<ReadFile> file_;
  std::string buffer_;
  size_t filled_ = 0;  // bytes of the file in the buffer
  size_t begin_ = 0;   // of the line at hand
  size_t next_ = 0;    // of the line after it
  bool ended_ = false;
  uint64_t line_ = 0;  // from 1
  simdjson::dom::parser parser_;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_READ_JSON_LINES_H_
