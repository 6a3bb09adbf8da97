#include "words/vocabulary.h"

#include <algorithm>
#include <array>
#include <atomic>
#include <mutex>
#include <string>
#include <utility>

#include "absl/hash/hash.h"
#include "absl/strings/str_cat.h"
#include "words/form_shard.h"

namespace phraseweld {
namespace {

// Enough that two threads of a few seldom want the same one.
constexpr uint32_t kShardBits = 6;
constexpr uint32_t kShards = 1u << kShardBits;
// The most for which provisional ids stay tokens.
constexpr uint32_t kMostFormsOfShard = kInside >> kShardBits;

uint64_t HashOf(std::string_view form) { return absl::Hash<std::string_view>()(form); }

uint32_t ShardOf(uint64_t hash) { return static_cast<uint32_t>(hash >> (64 - kShardBits)); }

}  // namespace

class Vocabulary::Impl {
 public:
  Impl() : Impl(std::make_index_sequence<kShards>()) {}

  void Intern(absl::Span<Sighting> sightings) {
    // Sorted by shard: one lock, and one wait for memory, for all of a shard.
    std::array<uint32_t, kShards + 1> ends{};
    std::vector<uint64_t> hashes;
    hashes.reserve(sightings.size());
    for (const Sighting& sighting : sightings) {
      hashes.push_back(HashOf(sighting.form));
      ++ends[ShardOf(hashes.back()) + 1];
    }
    for (uint32_t shard = 0; shard < kShards; ++shard) ends[shard + 1] += ends[shard];
    std::vector<uint32_t> order(sightings.size());
    std::vector<uint64_t> sorted(sightings.size());
    std::array<uint32_t, kShards + 1> next = ends;
    for (uint32_t i = 0; i < sightings.size(); ++i) {
      const uint32_t at = next[ShardOf(hashes[i])]++;
      order[at] = i;
      sorted[at] = hashes[i];
    }
    for (uint32_t shard = 0; shard < kShards; ++shard) {
      InternInShard(shard,
                    absl::MakeSpan(order).subspan(ends[shard], ends[shard + 1] - ends[shard]),
                    absl::MakeSpan(sorted).subspan(ends[shard]), sightings);
    }
  }

  absl::StatusOr<HugeVector<uint32_t>> Finish(const std::vector<std::string>& reserved) {
    std::vector<uint32_t> reserved_ids;
    for (const std::string& form : reserved) {
      const uint64_t hash = HashOf(form);
      const uint32_t index = shards_[ShardOf(hash)].forms.Add(form, hash);
      if (index == FormShard::kNone) full_ = true;
      reserved_ids.push_back(index << kShardBits | ShardOf(hash));
    }
    uint64_t form_count = 0;
    uint32_t largest_shard = 0;
    for (const Shard& shard : shards_) {
      form_count += shard.forms.size();
      largest_shard = std::max(largest_shard, shard.forms.size());
    }
    if (full_ || form_count > kMostTypes) {
      return absl::ResourceExhaustedError(absl::StrCat(
          "the corpus has more distinct words than a run can number, which is at most ", kMostTypes,
          "; mine it in parts"));
    }
    HugeVector<uint32_t> finals(size_t{largest_shard} << kShardBits, kBreak);
    order_.reserve(form_count);
    for (const uint32_t id : reserved_ids) {
      if (finals[id] != kBreak) continue;
      finals[id] = static_cast<uint32_t>(order_.size());
      order_.push_back(id);
    }
    AppendByPlace(finals);
    for (uint32_t id = 0; id < order_.size(); ++id) {
      finals[order_[id]] = id;
      const uint64_t note = Note(order_[id]);
      const bool number = note != FormShard::kNeverSeen && (note & 1) != 0;
      shards_[order_[id] % kShards].forms.set_note(order_[id] >> kShardBits,
                                                   uint64_t{id} << 1 | (number ? 1u : 0u));
    }
    return finals;
  }

  uint32_t size() const { return static_cast<uint32_t>(order_.size()); }

  std::string_view form(uint32_t id) const { return FormOf(order_[id]); }

  bool is_number(uint32_t id) const { return (Note(order_[id]) & 1) != 0; }

  uint32_t Find(std::string_view form) const {
    const uint64_t hash = HashOf(form);
    const FormShard& forms = shards_[ShardOf(hash)].forms;
    const uint32_t index = forms.Find(form, hash);
    return index == FormShard::kNone ? kBreak : static_cast<uint32_t>(forms.note(index) >> 1);
  }

  uint64_t memory() const {
    uint64_t bytes = sizeof(*this) + order_.capacity() * sizeof(uint32_t);
    for (const Shard& shard : shards_) {
      const std::lock_guard<std::mutex> lock(shard.mutex);
      bytes += shard.forms.memory();
    }
    return bytes;
  }

 private:
  struct alignas(64) Shard {
    mutable std::mutex mutex;
    // A form's note is (its smallest place) * 2 + (whether it was a number there), which compares
    // as places do; after Finish() its final id * 2 + whether it is a number.
    FormShard forms;
    explicit Shard(HugePool* pool) : forms(kMostFormsOfShard, pool) {}
  };

  template <size_t... kNumbers>
  explicit Impl(std::index_sequence<kNumbers...>) : shards_{((void)kNumbers, Shard(&pool_))...} {}

  // Interns sightings[i] for each i of `order`; hashes[k] is the hash of the one at order[k].
  void InternInShard(uint32_t number, absl::Span<const uint32_t> order,
                     absl::Span<const uint64_t> hashes, absl::Span<Sighting> sightings) {
    if (order.empty()) return;
    Shard& shard = shards_[number];
    const std::lock_guard<std::mutex> lock(shard.mutex);
    for (size_t k = 0; k < order.size(); ++k) {
      if (k % FormShard::kMostExpected == 0) {
        shard.forms.Expect(
            hashes.subspan(k, std::min<size_t>(FormShard::kMostExpected, order.size() - k)));
      }
      Sighting& sighting = sightings[order[k]];
      const uint32_t index = shard.forms.Add(sighting.form, hashes[k]);
      if (index == FormShard::kNone) {
        full_ = true;
        continue;
      }
      const uint64_t note = sighting.place << 1 | (sighting.number ? 1u : 0u);
      if (note < shard.forms.note(index)) shard.forms.set_note(index, note);
      sighting.id = index << kShardBits | number;
    }
  }

  uint64_t Note(uint32_t provisional) const {
    return shards_[provisional % kShards].forms.note(provisional >> kShardBits);
  }
  std::string_view FormOf(uint32_t provisional) const {
    return shards_[provisional % kShards].forms.form(provisional >> kShardBits);
  }

  // Calls use(provisional id) for each form that has no final id yet.
  template <typename Use>
  void ForAllUnnumbered(const HugeVector<uint32_t>& finals, Use use) const {
    for (uint32_t shard = 0; shard < kShards; ++shard) {
      for (uint32_t index = 0; index < shards_[shard].forms.size(); ++index) {
        const uint32_t id = index << kShardBits | shard;
        if (finals[id] == kBreak) use(id);
      }
    }
  }

  // Appends to order_ the forms without final ids by their places. Sorts bucket by bucket, each an
  // equal share of the places, so that beside the result only one bucket's keys are in memory.
  void AppendByPlace(const HugeVector<uint32_t>& finals) {
    constexpr size_t kBuckets = 4096;
    uint64_t last = 0;
    ForAllUnnumbered(finals, [&](uint32_t id) { last = std::max(last, Note(id)); });
    const uint64_t width = last / kBuckets + 1;
    std::vector<uint32_t> ends(kBuckets + 1, static_cast<uint32_t>(order_.size()));
    ForAllUnnumbered(finals, [&](uint32_t id) { ++ends[Note(id) / width + 1]; });
    const uint32_t first = ends[0];
    for (size_t bucket = 1; bucket <= kBuckets; ++bucket) ends[bucket] += ends[bucket - 1] - first;
    order_.resize(ends[kBuckets]);
    ForAllUnnumbered(finals, [&](uint32_t id) { order_[ends[Note(id) / width]++] = id; });
    std::vector<std::pair<uint64_t, uint32_t>> keys;
    uint32_t begin = first;
    for (size_t bucket = 0; bucket < kBuckets; ++bucket) {
      keys.clear();
      for (uint32_t at = begin; at < ends[bucket]; ++at) {
        keys.emplace_back(Note(order_[at]), order_[at]);
      }
      std::sort(keys.begin(), keys.end(), [this](const auto& a, const auto& b) {
        return a.first != b.first ? a.first < b.first : FormOf(a.second) < FormOf(b.second);
      });
      for (const auto& [place, id] : keys) order_[begin++] = id;
    }
  }

  HugePool pool_;
  std::array<Shard, kShards> shards_;
  std::atomic<bool> full_ = false;
  std::vector<uint32_t> order_;  // final id -> provisional id
};

Vocabulary::Vocabulary() : impl_(std::make_unique<Impl>()) {}

Vocabulary::~Vocabulary() = default;

void Vocabulary::Intern(absl::Span<Sighting> sightings) { impl_->Intern(sightings); }

uint32_t Vocabulary::Intern(std::string_view form, uint64_t place, bool number) {
  Sighting sighting{form, place, number};
  impl_->Intern(absl::MakeSpan(&sighting, 1));
  return sighting.id;
}

absl::StatusOr<HugeVector<uint32_t>> Vocabulary::Finish(const std::vector<std::string>& reserved) {
  return impl_->Finish(reserved);
}

uint32_t Vocabulary::size() const { return impl_->size(); }

std::string_view Vocabulary::form(uint32_t id) const { return impl_->form(id); }

bool Vocabulary::is_number(uint32_t id) const { return impl_->is_number(id); }

uint32_t Vocabulary::Find(std::string_view form) const { return impl_->Find(form); }

uint64_t Vocabulary::memory() const { return impl_->memory(); }

}  // namespace phraseweld
