#include "merge/merger.h"

namespace phraseweld {
namespace {

constexpr uint32_t kNone = SlotIndex::kAbsent;

struct Link {
  Slot slot;
  uint64_t left_at = 0, right_at = 0;
  uint32_t rank = kNone;
  bool merged = false;
  uint32_t left_becomes = kBreak;  // type of the merged token that took the left one in
};

// The links of one run, as far as they can still matter.
class Chain {
 public:
  Chain(Entry* stream, const std::vector<AcceptedSlot>& accepted, uint32_t word_types,
        std::vector<uint64_t>* joined, const OnSlotChange& on_change)
      : stream_(stream), accepted_(accepted), word_types_(word_types), joined_(joined),
        on_change_(on_change) {}

  void Add(const Link& link) {
    if (links_.empty() && link.rank == kNone) {
      SettleLast(kBreak);
      last_ = link;
      has_last_ = true;
      return;
    }
    if (links_.empty() && has_last_) {
      links_.push_back(last_);
      stretch_ = 1;
    }
    links_.push_back(link);
    Decide();
    if (stretch_ == links_.size() && !links_.back().merged) Flush(true);
  }

  void End() {
    if (!links_.empty()) {
      TakeEverySecond(links_.size());
      Flush(false);
    }
    SettleLast(kBreak);
    has_last_ = false;
  }

  uint64_t changed() const { return changed_; }

 private:
  // links_[stretch_, end) is a descent of which nothing is decided yet; all before is.
  void Decide() {
    const size_t newest = links_.size() - 1;
    const bool descends = stretch_ < newest && links_[newest].rank < links_[newest - 1].rank;
    if (stretch_ < newest && !descends) TakeEverySecond(newest);
    if (stretch_ == newest) {
      const bool beside_merged = newest > 0 && links_[newest - 1].merged;
      if (links_[newest].rank == kNone || beside_merged) stretch_ = newest + 1;
    }
  }

  void TakeEverySecond(size_t end) {
    for (size_t i = end; i > stretch_; i = i >= stretch_ + 2 ? i - 2 : stretch_) {
      links_[i - 1].merged = true;
    }
    stretch_ = end;
  }

  uint32_t Phrase(const Link& link) const { return accepted_[link.rank].phrase; }

  void Flush(bool keep_last) {
    has_last_ = false;
    for (size_t i = 0; i < links_.size(); ++i) {
      Link& link = links_[i];
      if (link.merged) {
        ++(*joined_)[link.rank];
        JoinToken(stream_, link.left_at, link.right_at, Phrase(link), word_types_);
        changed_ += 2;
        continue;
      }
      if (i > 0) link.left_becomes = links_[i - 1].merged ? Phrase(links_[i - 1]) : kBreak;
      last_ = link;
      has_last_ = true;
      if (i + 1 < links_.size()) {
        SettleLast(links_[i + 1].merged ? Phrase(links_[i + 1]) : kBreak);
        has_last_ = false;
      }
    }
    if (!keep_last) {
      SettleLast(kBreak);
      has_last_ = false;
    }
    links_.clear();
    stretch_ = 0;
  }

  // Reports what became of the last unmerged slot, now that its right neighbour is known.
  void SettleLast(uint32_t right_becomes) {
    if (!has_last_ || (last_.left_becomes == kBreak && right_becomes == kBreak)) return;
    Slot after = last_.slot;
    if (last_.left_becomes != kBreak) after.left = last_.left_becomes;
    if (right_becomes != kBreak) after.right = right_becomes;
    on_change_(last_.slot, after);
  }

  Entry* stream_;
  const std::vector<AcceptedSlot>& accepted_;
  const uint32_t word_types_;
  std::vector<uint64_t>* joined_;
  const OnSlotChange& on_change_;
  std::vector<Link> links_;
  size_t stretch_ = 0;
  Link last_;
  bool has_last_ = false;
  uint64_t changed_ = 0;
};

}  // namespace

void JoinToken(Entry* stream, uint64_t left_at, uint64_t right_at, uint32_t phrase,
               uint32_t word_types) {
  const Entry left = stream[left_at];
  if (left >= word_types) {
    // A phrase of k words holds the ids of at most k-1 phrases, so one of its places is free.
    uint64_t place = left_at + 1;
    while ((stream[place] & ~kInside) >= word_types) ++place;
    stream[place] = left | kInside;
  }
  for (uint64_t at = left_at + 1; at <= right_at; ++at) stream[at] |= kInside;
  stream[left_at] = phrase;
}

uint64_t Merger::Merge(Entry* stream, uint64_t begin, uint64_t end, std::vector<uint64_t>* joined,
                       const OnSlotChange& on_change) const {
  Chain chain(stream, accepted_, word_types_, joined, on_change);
  ScanSlots(
      stream, begin, end, rules_,
      [&](const Slot& slot, uint64_t left_at, uint64_t right_at) {
        Link link;
        link.slot = slot;
        link.left_at = left_at;
        link.right_at = right_at;
        link.rank = index_.Find(slot);
        chain.Add(link);
      },
      [&](uint64_t, Entry) { chain.End(); });
  chain.End();
  return chain.changed();
}

}  // namespace phraseweld
