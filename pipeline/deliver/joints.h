#ifndef PHRASEWELD_DELIVER_JOINTS_H_
#define PHRASEWELD_DELIVER_JOINTS_H_

#include <cstdint>
#include <functional>
#include <memory>
#include <string>
#include <string_view>

#include "absl/status/statusor.h"
#include "files/file_system.h"
#include "files/streams.h"

namespace phraseweld {

// The file of joints beside a rewritten file: which gap each inserted joiner stands for. It is one
// zstd stream of
//   "PWJ1"  varint length of the joiner  the joiner as it stands in the rewritten file
//   a record a joint: varint (distance << 2 | kind), where distance is the number of bytes of the
//     rewritten file between the end of the joint before (or the start of the file) and this
//     joiner; kind 0: the gap was one space; kind 1: varint length and the bytes of the gap follow
//   varint (distance << 2 | 2): the end, with the bytes after the last joint
//   varint size of the source; 16 bytes: XXH3-128 of the source, high half first, big-endian.
// A varint has 7 bits a byte, the low ones first.
class JointsWriter {
 public:
  static absl::StatusOr<std::unique_ptr<JointsWriter>> Create(FileSystem& files,
                                                              const std::string& path,
                                                              std::string_view joiner);
  // The rewritten file has `bytes` bytes up to the next joiner.
  void Skip(uint64_t bytes) { distance_ += bytes; }
  // A joiner stands here for `gap`. Write errors come out of Finish().
  void Joint(std::string_view gap);
  // Bytes of the source file, in order.
  void Source(std::string_view bytes);
  absl::StatusOr<OutputDigest> Finish();

 private:
  explicit JointsWriter(std::unique_ptr<OutputStream> out) : out_(std::move(out)) {}
  void FlushIfLarge();

  std::unique_ptr<OutputStream> out_;
  std::string buffer_;
  uint64_t distance_ = 0;
  uint64_t source_bytes_ = 0;
  Hasher source_hash_;
  absl::Status failure_;
};

// Undoes a rewrite: reads `path` and `path`.joints.zst (without a .zst at the end of `path`) and
// hands the source's bytes to `append` in order. DataLoss where the two files do not fit together
// or the result has another size or hash than the source had. Returns the source's digest.
absl::StatusOr<OutputDigest> RestoreFile(
    FileSystem& files, const std::string& path,
    const std::function<absl::Status(std::string_view)>& append);

// "a/b.txt.joints.zst" for "a/b.txt" and for "a/b.txt.zst".
std::string JointsPath(std::string_view rewritten_path);

}  // namespace phraseweld

#endif  // PHRASEWELD_DELIVER_JOINTS_H_
