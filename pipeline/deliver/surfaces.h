#ifndef PHRASEWELD_DELIVER_SURFACES_H_
#define PHRASEWELD_DELIVER_SURFACES_H_

#include <array>
#include <cstdint>
#include <mutex>
#include <string>
#include <string_view>
#include <vector>

#include "absl/container/flat_hash_map.h"
#include "base/types.h"

namespace phraseweld {

// Counts the spellings of phrase tokens. Most tokens are spelt like their type's text; those are
// not counted but are what is left of all its tokens. Thread-safe.
class Surfaces {
 public:
  // `tokens`: of each type, in the corpus.
  Surfaces(const TypeTable& types, const std::vector<uint64_t>& tokens)
      : types_(types), tokens_(tokens) {}

  // Whether a word is its own form whatever the job's options: ASCII, and neither a capital letter
  // nor a mark. A token of such words with a blank in every gap is spelt like its text.
  static bool IsPlain(std::string_view word);
  // For every token that is not spelt like its text, and at will for others.
  void Count(uint32_t type, std::string_view spelling);
  // The most frequent spelling (of equals the first in byte order); the type's text where it has no
  // token. While no thread counts.
  std::string MostFrequent(uint32_t type) const;

 private:
  static constexpr size_t kShards = 64;
  struct Shard {
    std::mutex mutex;
    absl::flat_hash_map<uint32_t, absl::flat_hash_map<std::string, uint64_t>> spellings;
  };
  const TypeTable& types_;
  const std::vector<uint64_t>& tokens_;
  std::array<Shard, kShards> shards_;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_DELIVER_SURFACES_H_
