#include "deliver/surfaces.h"

#include <algorithm>
#include <cstring>
#include <functional>

#include "base/parallel_sort.h"
#include "base/status.h"

namespace phraseweld {
namespace {

constexpr size_t kTypeBytes = sizeof(uint32_t);
// Spellings that are passed on together.
constexpr size_t kMostWaiting = 1024;
constexpr size_t kMostWaitingBytes = size_t{1} << 16;

uint32_t TypeOf(std::string_view key) {
  uint32_t type = 0;
  std::memcpy(&type, key.data(), kTypeBytes);
  return type;
}

}  // namespace

bool Surfaces::IsPlain(std::string_view word) {
  for (const char byte : word) {
    const bool letter = byte >= 'a' && byte <= 'z', digit = byte >= '0' && byte <= '9';
    if (!letter && !digit) return false;
  }
  return true;
}

void Surfaces::Counter::Count(uint32_t type, std::string_view spelling) {
  char type_bytes[kTypeBytes];
  std::memcpy(type_bytes, &type, kTypeBytes);
  bytes_.append(type_bytes, kTypeBytes);
  bytes_ += spelling;
  ends_.push_back(bytes_.size());
  if (ends_.size() >= kMostWaiting || bytes_.size() >= kMostWaitingBytes) Flush();
}

void Surfaces::Counter::Flush() {
  std::vector<std::string_view> keys;
  keys.reserve(ends_.size());
  const std::string_view bytes = bytes_;
  size_t begin = 0;
  for (const size_t end : ends_) {
    keys.push_back(bytes.substr(begin, end - begin));
    begin = end;
  }
  surfaces_->spellings_.AddAll(keys, [this](uint32_t, uint32_t id, uint64_t note) {
    if (id == SharedTexts::kNone) surfaces_->full_ = true;
    return note == SharedTexts::kNoNote ? 1 : note + 1;
  });
  // One of many megabytes is no reason to hold so many from now on.
  if (bytes_.capacity() > 4 * kMostWaitingBytes) bytes_ = std::string();
  bytes_.clear();
  ends_.clear();
}

absl::Status Surfaces::Settle(Lanes& lanes) {
  if (full_)
    return absl::ResourceExhaustedError("the phrases have more spellings than a run counts");
  // The type above, the id below.
  std::vector<std::vector<uint64_t>> lists(SharedTexts::kShards);
  PW_RETURN_IF_ERROR(lanes.ForEach(lists.size(), [&](int, size_t shard) {
    spellings_.ForEachOfShard(static_cast<uint32_t>(shard), [&](uint32_t id) {
      lists[shard].push_back(uint64_t{TypeOf(spellings_.text(id))} << 32 | id);
    });
    return absl::OkStatus();
  }));
  ids_.clear();
  ids_.reserve(spellings_.size());
  for (std::vector<uint64_t>& list : lists) {
    ids_.insert(ids_.end(), list.begin(), list.end());
    list = {};
  }
  PW_RETURN_IF_ERROR(SortInLanes(lanes, &ids_, std::less<uint64_t>()));
  begins_.assign(types_.size() - types_.word_types() + 1, 0);
  for (const uint64_t id : ids_) ++begins_[(id >> 32) - types_.word_types() + 1];
  for (size_t phrase = 1; phrase < begins_.size(); ++phrase) begins_[phrase] += begins_[phrase - 1];
  return absl::OkStatus();
}

std::string Surfaces::MostFrequent(uint32_t type, const std::string& text) const {
  const uint32_t phrase = type - types_.word_types();
  const auto spelling_of = [&](uint32_t i) {
    return spellings_.text(static_cast<uint32_t>(ids_[i])).substr(kTypeBytes);
  };
  const auto count_of = [&](uint32_t i) { return spellings_.note(static_cast<uint32_t>(ids_[i])); };
  uint64_t most = tokens_[type];
  for (uint32_t i = begins_[phrase]; i < begins_[phrase + 1]; ++i) {
    if (spelling_of(i) != text) most -= count_of(i);
  }
  std::string_view best = text;
  for (uint32_t i = begins_[phrase]; i < begins_[phrase + 1]; ++i) {
    const std::string_view spelling = spelling_of(i);
    const uint64_t count = count_of(i);
    if (count > most || (count == most && spelling < best)) {
      best = spelling;
      most = count;
    }
  }
  return std::string(best);
}

}  // namespace phraseweld
