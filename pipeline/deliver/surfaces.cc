#include "deliver/surfaces.h"

namespace phraseweld {

bool Surfaces::IsPlain(std::string_view word) {
  for (const char byte : word) {
    const bool letter = byte >= 'a' && byte <= 'z', digit = byte >= '0' && byte <= '9';
    if (!letter && !digit) return false;
  }
  return true;
}

void Surfaces::Count(uint32_t type, std::string_view spelling) {
  Shard& shard = shards_[type % kShards];
  std::lock_guard<std::mutex> lock(shard.mutex);
  ++shard.spellings[type][absl::string_view(spelling.data(), spelling.size())];
}

std::string Surfaces::MostFrequent(uint32_t type) const {
  const Shard& shard = shards_[type % kShards];
  const std::string text = types_.Text(type);
  const auto spellings = shard.spellings.find(type);
  if (spellings == shard.spellings.end()) return text;
  uint64_t most = tokens_[type];
  for (const auto& [spelling, count] : spellings->second) {
    if (spelling != text) most -= count;
  }
  std::string best = text;
  for (const auto& [spelling, count] : spellings->second) {
    if (count > most || (count == most && spelling < best)) {
      best = spelling;
      most = count;
    }
  }
  return best;
}

}  // namespace phraseweld
