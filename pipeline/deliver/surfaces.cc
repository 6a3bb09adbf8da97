#include "deliver/surfaces.h"

namespace phraseweld {
namespace {

std::string Key(uint32_t type, std::string_view spelling) {
  std::string key(reinterpret_cast<const char*>(&type), sizeof(type));
  key += spelling;
  return key;
}

}  // namespace

Surfaces::Surfaces(const TypeTable& types)
    : types_(types), plain_(types.size() - types.word_types()) {
  text_begins_.reserve(plain_.size() + 1);
  for (uint32_t type = types.word_types(); type < types.size(); ++type) {
    text_begins_.push_back(texts_.size());
    texts_ += types.Text(type);
  }
  text_begins_.push_back(texts_.size());
  memory_ = texts_.capacity() + plain_.size() * 16;
}

void Surfaces::Count(uint32_t type, std::string_view spelling) {
  const uint32_t phrase = type - types_.word_types();
  const std::string_view text(texts_.data() + text_begins_[phrase],
                              text_begins_[phrase + 1] - text_begins_[phrase]);
  if (spelling == text) {
    plain_[phrase].fetch_add(1, std::memory_order_relaxed);
    return;
  }
  Shard& shard = shards_[type % kShards];
  std::lock_guard<std::mutex> lock(shard.mutex);
  auto [place, is_new] = shard.counts.try_emplace(Key(type, spelling), 0);
  ++place->second;
  if (is_new) {
    shard.spellings[type].emplace_back(spelling);
    memory_.fetch_add(2 * spelling.size() + 120, std::memory_order_relaxed);
  }
}

std::string Surfaces::MostFrequent(uint32_t type) const {
  std::string best = types_.Text(type);
  uint64_t most = plain_[type - types_.word_types()].load(std::memory_order_relaxed);
  const Shard& shard = shards_[type % kShards];
  auto spellings = shard.spellings.find(type);
  if (spellings == shard.spellings.end()) return best;
  for (const std::string& spelling : spellings->second) {
    const uint64_t count = shard.counts.at(Key(type, spelling));
    if (count > most || (count == most && spelling < best)) {
      best = spelling;
      most = count;
    }
  }
  return best;
}

}  // namespace phraseweld
