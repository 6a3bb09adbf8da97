#include "base/text_shard.h"

#include <array>
#include <cstring>

namespace phraseweld {
namespace {

constexpr size_t kLeastSlots = 64;

}  // namespace

uint32_t TextShard::Add(std::string_view text, uint64_t hash) {
  const uint32_t found = Find(text, hash);
  if (found != kNone || size_ == most_texts_) return found;
  const uint32_t offset = Store(text);
  if (offset == kNone) return kNone;
  if ((uint64_t{size_} + 1) * 8 > slots_.size() * 7) Grow();
  const uint32_t index = size_++;
  if (index % kChunk == 0) {
    records_.push_back(reinterpret_cast<Record*>(pool_->Take(kChunk * sizeof(Record))));
  }
  record(index) = {kNeverSeen, offset};
  Place({static_cast<uint32_t>(hash), index});
  return index;
}

uint32_t TextShard::Find(std::string_view text, uint64_t hash) const {
  if (slots_.empty()) return kNone;
  const auto wanted = static_cast<uint32_t>(hash);
  const size_t mask = slots_.size() - 1;
  for (size_t slot = wanted & mask; slots_[slot].index != kNone; slot = (slot + 1) & mask) {
    if (slots_[slot].hash == wanted && this->text(slots_[slot].index) == text) {
      return slots_[slot].index;
    }
  }
  return kNone;
}

void TextShard::Expect(absl::Span<const uint64_t> hashes) const {
  if (slots_.empty()) return;
  const size_t mask = slots_.size() - 1;
  for (const uint64_t hash : hashes) __builtin_prefetch(&slots_[hash & mask]);
  // Each finds its text by a slot, a record and the bytes; most of them in the first slot they try.
  std::array<uint32_t, kMostExpected> likely;
  size_t found = 0;
  for (const uint64_t hash : hashes) {
    const Slot& slot = slots_[hash & mask];
    if (slot.index == kNone || slot.hash != static_cast<uint32_t>(hash)) continue;
    likely[found++] = slot.index;
    ExpectRecord(slot.index);
  }
  for (size_t i = 0; i < found; ++i) ExpectText(likely[i]);
}

std::string_view TextShard::text(uint32_t index) const {
  const char* at = BytesAt(record(index).offset);
  size_t length = 0;
  int shift = 0;
  for (; static_cast<unsigned char>(*at) >= 0x80; ++at, shift += 7) {
    length |= static_cast<size_t>(*at & 0x7F) << shift;
  }
  length |= static_cast<size_t>(*at++) << shift;
  return {at, length};
}

uint64_t TextShard::memory() const {
  return slots_.capacity() * sizeof(Slot) + records_.size() * kChunk * sizeof(Record) +
         arena_bytes_ + (records_.capacity() + arena_.capacity()) * sizeof(void*);
}

uint32_t TextShard::Store(std::string_view text) {
  char length[10];
  size_t length_bytes = 0;
  size_t rest = text.size();
  for (; rest >= 0x80; rest >>= 7) length[length_bytes++] = static_cast<char>(rest | 0x80);
  length[length_bytes++] = static_cast<char>(rest);
  const size_t bytes = length_bytes + text.size();
  if (arena_used_ + bytes > kArenaBytes) {
    const size_t blocks = (bytes + kArenaBytes - 1) / kArenaBytes;
    if ((arena_.size() + blocks) * kArenaBytes > kNone) return kNone;
    arena_.push_back(pool_->Take(blocks * kArenaBytes));
    arena_bytes_ += blocks * kArenaBytes;
    arena_used_ = 0;
  }
  const size_t block = arena_.size() - 1;
  const size_t offset = block * kArenaBytes + arena_used_;
  char* at = arena_[block] + arena_used_;
  std::memcpy(at, length, length_bytes);
  std::memcpy(at + length_bytes, text.data(), text.size());
  arena_used_ += bytes;
  while (arena_.size() * kArenaBytes < offset + bytes) arena_.push_back(nullptr);
  if (arena_.size() - 1 != block) arena_used_ = kArenaBytes;
  return static_cast<uint32_t>(offset);
}

void TextShard::Place(Slot entry) {
  const size_t mask = slots_.size() - 1;
  size_t slot = entry.hash & mask;
  while (slots_[slot].index != kNone) slot = (slot + 1) & mask;
  slots_[slot] = entry;
}

void TextShard::Grow() {
  HugeVector<Slot> old(slots_.empty() ? kLeastSlots : slots_.size() * 2);
  old.swap(slots_);
  for (const Slot& entry : old) {
    if (entry.index != kNone) Place(entry);
  }
}

}  // namespace phraseweld
