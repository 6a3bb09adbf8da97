#ifndef PHRASEWELD_BASE_TEXT_SHARD_H_
#define PHRASEWELD_BASE_TEXT_SHARD_H_

#include <cstdint>
#include <string_view>
#include <vector>

#include "absl/types/span.h"
#include "base/huge_pages.h"

namespace phraseweld {

// A share of many texts: a hash table, and their bytes one after another. Costs 12 bytes a text, 9
// to 20 for its place in the table, 1 to 5 for its length, and its bytes. Not thread-safe, but for
// const members.
class TextShard {
 public:
  static constexpr uint32_t kNone = 0xFFFFFFFFu;
  static constexpr uint64_t kNeverSeen = ~uint64_t{0};

  // Holds at most `most_texts` texts and 4 GiB of their bytes.
  // `pool` gives the memory of records and texts, and outlives the shard.
  TextShard(uint32_t most_texts, HugePool* pool) : most_texts_(most_texts), pool_(pool) {}

  // The index of `text`, whose hash is `hash`; added, never seen yet, where it is new. Indexes
  // count from 0 in the order of adding. kNone where the text is new and the shard full.
  uint32_t Add(std::string_view text, uint64_t hash);
  // The index of `text`, or kNone.
  uint32_t Find(std::string_view text, uint64_t hash) const;
  // Asks memory for what Add() and Find() will read of texts with these hashes; that takes less
  // time for many at once than the waiting for each.
  static constexpr size_t kMostExpected = 32;
  void Expect(absl::Span<const uint64_t> hashes) const;
  // The same for note() and, when that has come, for text().
  void ExpectRecord(uint32_t index) const { __builtin_prefetch(&record(index)); }
  void ExpectText(uint32_t index) const { __builtin_prefetch(BytesAt(record(index).offset)); }

  uint32_t size() const { return size_; }
  std::string_view text(uint32_t index) const;
  // 8 bytes at the caller's disposal, kNeverSeen at first.
  uint64_t note(uint32_t index) const { return record(index).note; }
  void set_note(uint32_t index, uint64_t note) { record(index).note = note; }

  // Bytes allocated.
  uint64_t memory() const;

 private:
  // Records come in chunks, so that growing never holds two copies: 1024 texts, 12 KiB.
  static constexpr uint32_t kChunk = 1024;
  // 16 KiB: 64 shards that have just begun one waste 1 MiB at most.
  static constexpr uint32_t kArenaBytes = 1u << 14;

  struct Slot {
    uint32_t hash = 0;  // its low half: the slot to begin at, and a test before the text's
    uint32_t index = kNone;
  };

  // Packed, since the four bytes of padding would be a tenth of what a text costs.
  struct [[gnu::packed]] Record {
    uint64_t note;
    uint32_t offset;  // of the text in the arena
  };

  Record& record(uint32_t index) { return records_[index / kChunk][index % kChunk]; }
  const Record& record(uint32_t index) const { return records_[index / kChunk][index % kChunk]; }

  const char* BytesAt(uint32_t offset) const {
    return arena_[offset / kArenaBytes] + offset % kArenaBytes;
  }

  // Returns the arena offset of a copy of `text`, kNone where there is none left.
  uint32_t Store(std::string_view text);
  void Place(Slot entry);
  void Grow();

  HugeVector<Slot> slots_;  // open addressing, linear probing; a power of two, at most 7/8 full
  uint32_t size_ = 0;
  std::vector<Record*> records_;
  // A text is its length in base 128, then its bytes. Blocks are kArenaBytes long; a text that is
  // longer takes several block numbers, of which the first has it all and the others have nothing.
  std::vector<char*> arena_;
  size_t arena_used_ = kArenaBytes;  // of the last block
  uint64_t arena_bytes_ = 0;
  uint32_t most_texts_;
  HugePool* pool_;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_BASE_TEXT_SHARD_H_
