#include "words/vocabulary.h"

#include <algorithm>
#include <atomic>
#include <string>
#include <utility>

#include "absl/strings/str_cat.h"
#include "base/shared_texts.h"

namespace phraseweld {
namespace {

constexpr uint64_t kNeverSeen = SharedTexts::kNoNote;

}  // namespace

class Vocabulary::Impl {
 public:
  void Intern(absl::Span<Sighting> sightings) {
    std::vector<std::string_view> forms;
    forms.reserve(sightings.size());
    for (const Sighting& sighting : sightings) forms.push_back(sighting.form);
    forms_.AddAll(forms, [&](uint32_t i, uint32_t id, uint64_t note) {
      if (id == SharedTexts::kNone) full_ = true;
      sightings[i].id = id == SharedTexts::kNone ? 0 : id;
      return std::min(note, sightings[i].place << 1 | (sightings[i].number ? 1u : 0u));
    });
  }

  absl::StatusOr<HugeVector<uint32_t>> Finish(const std::vector<std::string>& reserved) {
    const std::vector<std::string_view> forms(reserved.begin(), reserved.end());
    std::vector<uint32_t> reserved_ids(forms.size(), 0);
    forms_.AddAll(forms, [&](uint32_t i, uint32_t id, uint64_t note) {
      if (id == SharedTexts::kNone) full_ = true;
      reserved_ids[i] = id;
      return note;
    });
    const uint64_t form_count = forms_.size();
    if (full_ || form_count > kMostTypes) {
      return absl::ResourceExhaustedError(absl::StrCat(
          "the corpus has more distinct words than a run can number, which is at most ", kMostTypes,
          "; mine it in parts"));
    }
    HugeVector<uint32_t> finals(forms_.id_limit(), kBreak);
    order_.reserve(form_count);
    for (const uint32_t id : reserved_ids) {
      if (finals[id] != kBreak) continue;
      finals[id] = static_cast<uint32_t>(order_.size());
      order_.push_back(id);
    }
    AppendByPlace(finals);
    for (uint32_t id = 0; id < order_.size(); ++id) {
      finals[order_[id]] = id;
      const uint64_t note = forms_.note(order_[id]);
      const bool number = note != kNeverSeen && (note & 1) != 0;
      forms_.set_note(order_[id], uint64_t{id} << 1 | (number ? 1u : 0u));
    }
    return finals;
  }

  uint32_t size() const { return static_cast<uint32_t>(order_.size()); }

  std::string_view form(uint32_t id) const { return forms_.text(order_[id]); }

  void Expect(absl::Span<const uint32_t> ids) const {
    for (const uint32_t id : ids) __builtin_prefetch(&order_[id]);
    std::vector<uint32_t> provisional;
    provisional.reserve(ids.size());
    for (const uint32_t id : ids) provisional.push_back(order_[id]);
    forms_.Expect(provisional);
  }

  bool is_number(uint32_t id) const { return (forms_.note(order_[id]) & 1) != 0; }

  uint32_t Find(std::string_view form) const {
    const uint32_t id = forms_.Find(form);
    return id == SharedTexts::kNone ? kBreak : static_cast<uint32_t>(forms_.note(id) >> 1);
  }

  uint64_t memory() const {
    return sizeof(*this) + order_.capacity() * sizeof(uint32_t) + forms_.memory();
  }

 private:
  // Calls use(provisional id) for each form that has no final id yet.
  template <typename Use>
  void ForAllUnnumbered(const HugeVector<uint32_t>& finals, Use use) const {
    for (uint32_t shard = 0; shard < SharedTexts::kShards; ++shard) {
      forms_.ForEachOfShard(shard, [&](uint32_t id) {
        if (finals[id] == kBreak) use(id);
      });
    }
  }

  // Appends to order_ the forms without final ids by their places. Sorts bucket by bucket, each an
  // equal share of the places, so that beside the result only one bucket's keys are in memory.
  void AppendByPlace(const HugeVector<uint32_t>& finals) {
    constexpr size_t kBuckets = 4096;
    uint64_t last = 0;
    ForAllUnnumbered(finals, [&](uint32_t id) { last = std::max(last, forms_.note(id)); });
    const uint64_t width = last / kBuckets + 1;
    std::vector<uint32_t> ends(kBuckets + 1, static_cast<uint32_t>(order_.size()));
    ForAllUnnumbered(finals, [&](uint32_t id) { ++ends[forms_.note(id) / width + 1]; });
    const uint32_t first = ends[0];
    for (size_t bucket = 1; bucket <= kBuckets; ++bucket) ends[bucket] += ends[bucket - 1] - first;
    order_.resize(ends[kBuckets]);
    ForAllUnnumbered(finals, [&](uint32_t id) { order_[ends[forms_.note(id) / width]++] = id; });
    std::vector<std::pair<uint64_t, uint32_t>> keys;
    uint32_t begin = first;
    for (size_t bucket = 0; bucket < kBuckets; ++bucket) {
      keys.clear();
      for (uint32_t at = begin; at < ends[bucket]; ++at) {
        keys.emplace_back(forms_.note(order_[at]), order_[at]);
      }
      std::sort(keys.begin(), keys.end(), [this](const auto& a, const auto& b) {
        return a.first != b.first ? a.first < b.first
                                  : forms_.text(a.second) < forms_.text(b.second);
      });
      for (const auto& [place, id] : keys) order_[begin++] = id;
    }
  }

  // A form's note is (its smallest place) * 2 + (whether it was a number there), which compares as
  // places do; after Finish() its final id * 2 + whether it is a number.
  SharedTexts forms_;
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

void Vocabulary::Expect(absl::Span<const uint32_t> ids) const { impl_->Expect(ids); }

bool Vocabulary::is_number(uint32_t id) const { return impl_->is_number(id); }

uint32_t Vocabulary::Find(std::string_view form) const { return impl_->Find(form); }

uint64_t Vocabulary::memory() const { return impl_->memory(); }

}  // namespace phraseweld
