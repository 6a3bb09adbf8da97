#ifndef PHRASEWELD_BASE_SHARED_TEXTS_H_
#define PHRASEWELD_BASE_SHARED_TEXTS_H_

#include <algorithm>
#include <array>
#include <cstdint>
#include <mutex>
#include <string_view>
#include <utility>
#include <vector>

#include "absl/types/span.h"
#include "base/entry.h"
#include "base/huge_pages.h"
#include "base/text_shard.h"

namespace phraseweld {

// Distinct texts that threads add to together. Each has an id, which depends on the order of adding
// and leaves gaps, and a note of eight bytes.
class SharedTexts {
 public:
  // Enough that two threads of a few seldom want the same one.
  static constexpr uint32_t kShardBits = 6;
  static constexpr uint32_t kShards = 1u << kShardBits;
  static constexpr uint32_t kNone = TextShard::kNone;
  static constexpr uint64_t kNoNote = TextShard::kNeverSeen;

  SharedTexts() : SharedTexts(std::make_index_sequence<kShards>()) {}

  // Thread-safe. Adds texts that are new and, in some order, sets the note of each text to
  // note_of(i, id, note), where `note` is what it was, kNoNote at first. For a new text that finds
  // no room the id is kNone and the note goes nowhere. Many texts at once take less time: they are
  // sorted by shard, and there is one lock and one wait for memory for all of a shard.
  template <typename NoteOf>
  void AddAll(absl::Span<const std::string_view> texts, NoteOf&& note_of) {
    std::array<uint32_t, kShards + 1> ends{};
    std::vector<uint64_t> hashes;
    hashes.reserve(texts.size());
    for (const std::string_view text : texts) {
      hashes.push_back(HashOf(text));
      ++ends[ShardOf(hashes.back()) + 1];
    }
    for (uint32_t shard = 0; shard < kShards; ++shard) ends[shard + 1] += ends[shard];
    std::vector<uint32_t> order(texts.size());
    std::vector<uint64_t> sorted(texts.size());
    std::array<uint32_t, kShards + 1> next = ends;
    for (uint32_t i = 0; i < texts.size(); ++i) {
      const uint32_t at = next[ShardOf(hashes[i])]++;
      order[at] = i;
      sorted[at] = hashes[i];
    }
    for (uint32_t number = 0; number < kShards; ++number) {
      if (ends[number] == ends[number + 1]) continue;
      Shard& shard = shards_[number];
      const std::lock_guard<std::mutex> lock(shard.mutex);
      for (uint32_t at = ends[number]; at < ends[number + 1]; ++at) {
        if ((at - ends[number]) % TextShard::kMostExpected == 0) {
          const uint32_t end = std::min<uint32_t>(ends[number + 1], at + TextShard::kMostExpected);
          shard.texts.Expect(absl::MakeSpan(sorted).subspan(at, end - at));
        }
        const uint32_t index = shard.texts.Add(texts[order[at]], sorted[at]);
        if (index == kNone) {
          note_of(order[at], kNone, kNoNote);
          continue;
        }
        const uint64_t before = shard.texts.note(index);
        const uint64_t note = note_of(order[at], index << kShardBits | number, before);
        // Writing what is there would take the line away from the other processors.
        if (note != before) shard.texts.set_note(index, note);
      }
    }
  }

  // All of the below: while no thread adds.

  // kNone where the text is not there.
  uint32_t Find(std::string_view text) const;
  std::string_view text(uint32_t id) const {
    return shards_[id % kShards].texts.text(id >> kShardBits);
  }
  uint64_t note(uint32_t id) const { return shards_[id % kShards].texts.note(id >> kShardBits); }
  void set_note(uint32_t id, uint64_t note) {
    shards_[id % kShards].texts.set_note(id >> kShardBits, note);
  }
  // Asks memory for what text() and note() will read.
  void Expect(absl::Span<const uint32_t> ids) const;

  uint64_t size() const;
  // All ids are below it.
  uint32_t id_limit() const;
  // Calls use(id) for each text of a shard, by the order of adding.
  template <typename Use>
  void ForEachOfShard(uint32_t shard, Use&& use) const {
    for (uint32_t index = 0; index < shards_[shard].texts.size(); ++index) {
      use(index << kShardBits | shard);
    }
  }

  // Bytes allocated; thread-safe at any time.
  uint64_t memory() const;

 private:
  // The most for which ids stay tokens.
  static constexpr uint32_t kMostTextsOfShard = kInside >> kShardBits;

  struct alignas(64) Shard {
    mutable std::mutex mutex;
    TextShard texts;
    explicit Shard(HugePool* pool) : texts(kMostTextsOfShard, pool) {}
  };

  template <size_t... kNumbers>
  explicit SharedTexts(std::index_sequence<kNumbers...>)
      : shards_{((void)kNumbers, Shard(&pool_))...} {}

  static uint64_t HashOf(std::string_view text);
  static uint32_t ShardOf(uint64_t hash) {
    return static_cast<uint32_t>(hash >> (64 - kShardBits));
  }

  HugePool pool_;
  std::array<Shard, kShards> shards_;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_BASE_SHARED_TEXTS_H_
