#ifndef PHRASEWELD_DELIVER_SURFACES_H_
#define PHRASEWELD_DELIVER_SURFACES_H_

#include <array>
#include <atomic>
#include <cstdint>
#include <mutex>
#include <string>
#include <string_view>
#include <vector>

#include "absl/container/flat_hash_map.h"
#include "base/types.h"

namespace phraseweld {

// Counts the spellings of phrase tokens. Most tokens are spelt like their type's text, and for
// those one counter a type is all there is. Thread-safe.
class Surfaces {
 public:
  explicit Surfaces(const TypeTable& types);
  void Count(uint32_t type, std::string_view spelling);
  // The most frequent spelling (of equals the first in byte order); the type's text where no token
  // was counted. While no thread counts.
  std::string MostFrequent(uint32_t type) const;
  uint64_t memory() const { return memory_.load(std::memory_order_relaxed); }

 private:
  static constexpr size_t kShards = 64;
  struct Shard {
    std::mutex mutex;
    absl::flat_hash_map<std::string, uint64_t> counts;  // key: the type's 4 bytes, the spelling
    absl::flat_hash_map<uint32_t, std::vector<std::string>> spellings;
  };
  const TypeTable& types_;
  std::string texts_;
  std::vector<uint64_t> text_begins_;
  std::vector<std::atomic<uint64_t>> plain_;
  std::array<Shard, kShards> shards_;
  std::atomic<uint64_t> memory_{0};
};

}  // namespace phraseweld

#endif  // PHRASEWELD_DELIVER_SURFACES_H_
