#ifndef PHRASEWELD_FILES_ENTRY_ARRAY_H_
#define PHRASEWELD_FILES_ENTRY_ARRAY_H_

#include <atomic>
#include <cstdint>
#include <memory>
#include <string>

#include "absl/status/statusor.h"
#include "absl/types/span.h"
#include "base/entry.h"
#include "files/file_system.h"

namespace phraseweld {

// The corpus as one flat array of entries: in memory, or in a scratch file that is mapped once it
// is whole. With a file, the pages that a scan has touched can be given back (Release), so that the
// resident part stays small whatever the length.
class EntryArray {
 public:
  // In memory, for at most `capacity` entries. The memory is reserved at once and used as it fills.
  static absl::StatusOr<std::unique_ptr<EntryArray>> InMemory(uint64_t capacity);
  // In the scratch file `path`.
  static absl::StatusOr<std::unique_ptr<EntryArray>> OnFile(FileSystem& files,
                                                            const std::string& path);
  ~EntryArray();
  EntryArray(const EntryArray&) = delete;
  EntryArray& operator=(const EntryArray&) = delete;

  // Thread-safe for ranges that do not overlap; before Seal().
  absl::Status Write(uint64_t at, absl::Span<const Entry> entries);
  // Ends the writing: the array has `size` entries from now on and data() is valid.
  absl::Status Seal(uint64_t size);

  Entry* data() { return data_; }
  const Entry* data() const { return data_; }
  uint64_t size() const { return size_; }
  bool on_file() const { return scratch_ != nullptr; }
  // Gives back the resident pages of [begin, end); their content stays. Nothing in memory.
  void Release(uint64_t begin, uint64_t end);

 private:
  EntryArray() = default;
  Entry* data_ = nullptr;
  uint64_t size_ = 0;
  uint64_t mapped_bytes_ = 0;
  uint64_t capacity_ = 0;
  std::unique_ptr<ScratchFile> scratch_;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_FILES_ENTRY_ARRAY_H_
