#include "files/streams.h"

#include <xxhash.h>

#include <utility>
#include <vector>

#include "base/status.h"
#include "files/compressed_input.h"
#include "files/stored_input.h"

namespace phraseweld {
namespace {

class PlainInput : public InputStream {
 public:
  PlainInput(std::string path, std::unique_ptr<ReadFile> file)
      : stored_(std::move(path), std::move(file)) {}
  absl::StatusOr<size_t> Read(char* buffer, size_t size) override {
    return stored_.Read(buffer, size);
  }
  uint64_t stored_bytes() const override { return stored_.bytes(); }
  Hash128 stored_hash() const override { return stored_.hash(); }

 private:
  StoredInput stored_;
};

}  // namespace

Hasher::Hasher() : state_(XXH3_createState()) {
  XXH3_128bits_reset(static_cast<XXH3_state_t*>(state_));
}

Hasher::~Hasher() { XXH3_freeState(static_cast<XXH3_state_t*>(state_)); }

void Hasher::Update(std::string_view bytes) {
  XXH3_128bits_update(static_cast<XXH3_state_t*>(state_), bytes.data(), bytes.size());
}

Hash128 Hasher::Value() const {
  const XXH128_hash_t value = XXH3_128bits_digest(static_cast<const XXH3_state_t*>(state_));
  return {.high = value.high64, .low = value.low64};
}

absl::StatusOr<std::unique_ptr<InputStream>> InputStream::Open(FileSystem& files,
                                                               const std::string& path) {
  PW_ASSIGN_OR_RETURN(std::unique_ptr<ReadFile> file, files.OpenRead(path));
  if (path.ends_with(".zst")) return OpenZstdInput(path, std::move(file));
  if (path.ends_with(".gz")) return OpenGzipInput(path, std::move(file));
  return std::make_unique<PlainInput>(path, std::move(file));
}

absl::StatusOr<OutputDigest> DigestFile(FileSystem& files, const std::string& path) {
  // Large enough that the calls cost nothing, small enough for the second-level cache.
  constexpr size_t kStep = size_t{256} << 10;
  PW_ASSIGN_OR_RETURN(std::unique_ptr<ReadFile> file, files.OpenRead(path));
  StoredInput stored(path, std::move(file));
  std::vector<char> buffer(kStep);
  while (true) {
    PW_ASSIGN_OR_RETURN(const size_t got, stored.Read(buffer.data(), buffer.size()));
    if (got == 0) return OutputDigest{.bytes = stored.bytes(), .hash = stored.hash()};
  }
}

}  // namespace phraseweld
