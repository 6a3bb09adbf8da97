#include "base/shared_texts.h"

#include "absl/hash/hash.h"

namespace phraseweld {

uint64_t SharedTexts::HashOf(std::string_view text) { return absl::Hash<std::string_view>()(text); }

uint32_t SharedTexts::Find(std::string_view text) const {
  const uint64_t hash = HashOf(text);
  const uint32_t index = shards_[ShardOf(hash)].texts.Find(text, hash);
  return index == kNone ? kNone : index << kShardBits | ShardOf(hash);
}

void SharedTexts::Expect(absl::Span<const uint32_t> ids) const {
  for (const uint32_t id : ids) shards_[id % kShards].texts.ExpectRecord(id >> kShardBits);
  for (const uint32_t id : ids) shards_[id % kShards].texts.ExpectText(id >> kShardBits);
}

uint64_t SharedTexts::size() const {
  uint64_t size = 0;
  for (const Shard& shard : shards_) size += shard.texts.size();
  return size;
}

uint32_t SharedTexts::id_limit() const {
  uint32_t largest = 0;
  for (const Shard& shard : shards_) largest = std::max(largest, shard.texts.size());
  return largest << kShardBits;
}

uint64_t SharedTexts::memory() const {
  uint64_t bytes = sizeof(*this);
  for (const Shard& shard : shards_) {
    const std::lock_guard<std::mutex> lock(shard.mutex);
    bytes += shard.texts.memory();
  }
  return bytes;
}

}  // namespace phraseweld
