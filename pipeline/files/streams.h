#ifndef PHRASEWELD_FILES_STREAMS_H_
#define PHRASEWELD_FILES_STREAMS_H_

#include <cstdint>
#include <memory>
#include <string>
#include <string_view>

#include "absl/status/statusor.h"
#include "base/hash.h"
#include "files/file_system.h"

namespace phraseweld {

// XXH3-128 of a stream of bytes.
class Hasher {
 public:
  Hasher();
  ~Hasher();
  Hasher(const Hasher&) = delete;
  Hasher& operator=(const Hasher&) = delete;
  void Update(std::string_view bytes);
  Hash128 Value() const;

 private:
  void* state_;
};

// Reads a file as it is, or decompressed when its path ends in .zst or .gz ("-": standard input, as
// it is). Concatenated frames and members are one stream. A stream that is cut or damaged is a
// DataLoss error that says so, with the path and the offset of the compressed byte.
class InputStream {
 public:
  static absl::StatusOr<std::unique_ptr<InputStream>> Open(FileSystem& files,
                                                           const std::string& path);
  virtual ~InputStream() = default;
  // Up to `size` bytes; 0 at the end and only there.
  virtual absl::StatusOr<size_t> Read(char* buffer, size_t size) = 0;
  // Of the stored bytes read so far (all of them once Read() has returned 0).
  virtual uint64_t stored_bytes() const = 0;
  virtual Hash128 stored_hash() const = 0;
};

struct OutputDigest {
  uint64_t bytes = 0;  // as stored
  Hash128 hash;
};

// When a finished file is known to be on the disk: when Finish() returns, or once its folder is
// committed as a whole (RunFolderWriter), which lets the disk work while the run goes on.
enum class OnDisk { kWhenFinished, kWhenCommitted };

// Writes a file, through zstd when asked; counts and hashes what is stored. The bytes stored depend
// on the bytes appended alone, not on how they were cut into calls. They go to `path`.part, which
// takes the name `path` in Finish() once it is whole; a stream destroyed before that removes it.
// Only where `path` is a device or a pipe are they written to it as they come. After an error every
// later call returns that error.
class OutputStream {
 public:
  static absl::StatusOr<std::unique_ptr<OutputStream>> Create(
      FileSystem& files, const std::string& path, bool compress_zstd,
      OnDisk on_disk = OnDisk::kWhenFinished);
  virtual ~OutputStream() = default;
  virtual absl::Status Append(std::string_view bytes) = 0;
  // Ends the stream and gives the file its name. Nothing may be appended after.
  virtual absl::StatusOr<OutputDigest> Finish() = 0;
};

// Hash and size of a file as stored.
absl::StatusOr<OutputDigest> DigestFile(FileSystem& files, const std::string& path);

}  // namespace phraseweld

#endif  // PHRASEWELD_FILES_STREAMS_H_
