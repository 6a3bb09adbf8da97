#include "score/chooser.h"

#include <algorithm>
#include <cmath>
#include <string>
#include <utility>

#include "base/parallel_sort.h"
#include "base/status.h"
#include "score/measures.h"

namespace phraseweld {
namespace {

bool WordsBefore(const TypeTable& types, const std::vector<uint32_t>& a,
                 const std::vector<uint32_t>& b) {
  return std::lexicographical_compare(
      a.begin(), a.end(), b.begin(), b.end(),
      [&](uint32_t x, uint32_t y) { return types.form(x) < types.form(y); });
}

std::vector<uint32_t> WordsOf(const TypeTable& types, uint32_t type) {
  std::vector<uint32_t> words;
  types.AppendWords(type, &words);
  return words;
}

}  // namespace

bool RankOrder::operator()(const Candidate& a, const Candidate& b) const {
  if (a.score != b.score) return a.score > b.score;
  if (a.table.n != b.table.n) return a.table.n > b.table.n;
  if (a.slot == b.slot) return false;
  if (int by_text = types_->Text(types_->SlotWords(a.slot, *codes_))
                        .compare(types_->Text(types_->SlotWords(b.slot, *codes_)));
      by_text != 0) {
    return by_text < 0;
  }
  if (int by_left = types_->Text(a.slot.left).compare(types_->Text(b.slot.left)); by_left != 0) {
    return by_left < 0;
  }
  const std::vector<uint32_t> bridge_a = codes_->Words(a.slot.bridge);
  const std::vector<uint32_t> bridge_b = codes_->Words(b.slot.bridge);
  if (int by_bridge = types_->Text(bridge_a).compare(types_->Text(bridge_b)); by_bridge != 0) {
    return by_bridge < 0;
  }
  const std::vector<uint32_t> left_a = WordsOf(*types_, a.slot.left);
  const std::vector<uint32_t> left_b = WordsOf(*types_, b.slot.left);
  if (left_a != left_b) return WordsBefore(*types_, left_a, left_b);
  if (bridge_a != bridge_b) return WordsBefore(*types_, bridge_a, bridge_b);
  return WordsBefore(*types_, WordsOf(*types_, a.slot.right), WordsOf(*types_, b.slot.right));
}

Chooser::Chooser(const PassOptions& pass, const PhraseRules& rules, size_t never_rulings, int lanes,
                 size_t near_capacity)
    : pass_(pass),
      rules_(rules),
      order_(*rules.types, *rules.codes),
      near_capacity_(near_capacity) {
  for (const Gate& gate : pass.accept) {
    const double least = std::ceil(gate.least);
    if (gate.quantity == Quantity::kOccurrences && least > 1) {
      least_occurrences_ = static_cast<uint64_t>(least);
    }
    if (gate.quantity == Quantity::kDocuments && least > 0) {
      least_documents_ = static_cast<uint64_t>(least);
    }
  }
  ranks_late_ = IsLate(pass.rank_by);
  lanes_.resize(static_cast<size_t>(lanes));
  for (Lane& lane : lanes_) lane.never_used.resize(never_rulings);
}

void Chooser::Consider(int lane_number, const Slot& slot, SlotTable table) {
  Lane& lane = lanes_[static_cast<size_t>(lane_number)];
  const int bridge_words = rules_.codes->Length(slot.bridge);
  const TypeTable& types = *rules_.types;
  if (types.word_count(slot.left) + bridge_words + types.word_count(slot.right) > rules_.longest) {
    return;
  }
  if (rules_.numbers_not_first != nullptr && rules_.numbers_not_first->HasChecked(slot.left)) {
    return;
  }
  if (pass_.margins == Margins::kWords) {
    if (slot.bridge == 0) {
      table.left = (*rules_.token_frequency)[slot.left];
      table.right = (*rules_.token_frequency)[slot.right];
      table.total = rules_.tokens;
    }
    table.all = rules_.tokens;
  }
  Candidate candidate;
  candidate.slot = slot;
  candidate.table = table;
  for (const Gate& gate : pass_.accept) {
    if (gate.quantity == Quantity::kOccurrences || IsLate(gate.quantity)) continue;
    if (Score(gate.quantity, table) >= gate.least) continue;
    if (candidate.failed) return;
    candidate.failed = gate.quantity;
  }
  // A type cannot be in more documents than it has slots.
  if (candidate.failed && table.n < least_documents_) return;
  if (!rules_.never.empty()) {
    auto ruling = rules_.never.find(types.SlotWords(slot, *rules_.codes));
    if (ruling != rules_.never.end()) {
      if (!candidate.failed) lane.never_used[ruling->second] = true;
      return;
    }
  }
  if (!ranks_late_) candidate.score = Score(pass_.rank_by, table);
  if (!candidate.failed) {
    lane.passing.push_back(std::move(candidate));
    return;
  }
  lane.failing.push_back(std::move(candidate));
  if (!ranks_late_ && lane.failing.size() >= 2 * near_capacity_) Trim(&lane);
}

void Chooser::Trim(Lane* lane) {
  if (lane->failing.size() <= near_capacity_) return;
  std::nth_element(lane->failing.begin(),
                   lane->failing.begin() + static_cast<ptrdiff_t>(near_capacity_ - 1),
                   lane->failing.end(), order_);
  lane->failing.resize(near_capacity_);
  lane->worst_kept = lane->failing.back();
}

std::vector<Candidate> Chooser::Pending() {
  std::vector<Candidate> pending;
  bound_.reset();
  for (Lane& lane : lanes_) {
    if (!ranks_late_) Trim(&lane);
    if (lane.worst_kept && (!bound_ || order_(*lane.worst_kept, *bound_))) bound_ = lane.worst_kept;
    pending.insert(pending.end(), std::make_move_iterator(lane.passing.begin()),
                   std::make_move_iterator(lane.passing.end()));
    pending.insert(pending.end(), std::make_move_iterator(lane.failing.begin()),
                   std::make_move_iterator(lane.failing.end()));
    lane.passing.clear();
    lane.failing.clear();
  }
  return pending;
}

// Sorts places in `pending` by the ranks of the candidates there.
absl::Status Chooser::SortByRank(Lanes& lanes, const std::vector<Candidate>& pending,
                                 std::vector<uint32_t>* places) const {
  // Score and n lie side by side here; what they leave tied is sorted by texts that are made once.
  struct Key {
    double score = 0;
    uint64_t n = 0;
    uint32_t place = 0;
    bool TiedWith(const Key& other) const { return score == other.score && n == other.n; }
  };
  std::vector<Key> keys;
  keys.reserve(places->size());
  for (const uint32_t place : *places) {
    keys.push_back({pending[place].score, pending[place].table.n, place});
  }
  PW_RETURN_IF_ERROR(SortInLanes(lanes, &keys, [](const Key& a, const Key& b) {
    if (a.score != b.score) return a.score > b.score;
    return a.n != b.n ? a.n > b.n : a.place < b.place;
  }));
  for (size_t i = 0; i < keys.size(); ++i) (*places)[i] = keys[i].place;
  std::vector<std::pair<size_t, size_t>> ties;
  for (size_t begin = 0, end = 0; begin < keys.size(); begin = end) {
    for (end = begin + 1; end < keys.size() && keys[end].TiedWith(keys[begin]);) ++end;
    if (end - begin > 1) ties.emplace_back(begin, end);
  }
  struct Text {
    std::string text;
    uint32_t place = 0;
  };
  return lanes.ForEach(ties.size(), [&](int, size_t tie) {
    const auto [begin, end] = ties[tie];
    std::vector<Text> texts;
    texts.reserve(end - begin);
    for (size_t i = begin; i < end; ++i) {
      const uint32_t place = (*places)[i];
      texts.push_back(
          {rules_.types->Text(rules_.types->SlotWords(pending[place].slot, *rules_.codes)), place});
    }
    std::sort(texts.begin(), texts.end(), [&](const Text& a, const Text& b) {
      if (const int by_text = a.text.compare(b.text); by_text != 0) return by_text < 0;
      return order_(pending[a.place], pending[b.place]);
    });
    for (size_t i = begin; i < end; ++i) (*places)[i] = texts[i - begin].place;
    return absl::OkStatus();
  });
}

absl::StatusOr<std::optional<Choice>> Chooser::Choose(Lanes& lanes,
                                                      std::vector<Candidate> pending) const {
  std::vector<uint32_t> accepted, near_misses;
  for (size_t place = 0; place < pending.size(); ++place) {
    Candidate& candidate = pending[place];
    int failed = candidate.failed ? 1 : 0;
    for (const Gate& gate : pass_.accept) {
      if (!IsLate(gate.quantity)) continue;
      if (Score(gate.quantity, candidate.table) >= gate.least) continue;
      ++failed;
      candidate.failed = gate.quantity;
    }
    if (ranks_late_) candidate.score = Score(pass_.rank_by, candidate.table);
    if (failed == 0) accepted.push_back(static_cast<uint32_t>(place));
    if (failed == 1) near_misses.push_back(static_cast<uint32_t>(place));
  }
  PW_RETURN_IF_ERROR(SortByRank(lanes, pending, &accepted));
  if (pass_.take && accepted.size() > *pass_.take) accepted.resize(*pass_.take);
  if (near_misses.size() > kMostNearMisses) {
    // Those that tie with the last one that is wanted stay for now.
    const auto before = [&](uint32_t a, uint32_t b) {
      const Candidate &x = pending[a], &y = pending[b];
      return x.score != y.score ? x.score > y.score : x.table.n > y.table.n;
    };
    const auto last = near_misses.begin() + kMostNearMisses - 1;
    std::nth_element(near_misses.begin(), last, near_misses.end(), before);
    const uint32_t bound = *last;
    near_misses.erase(std::remove_if(near_misses.begin(), near_misses.end(),
                                     [&](uint32_t place) { return before(bound, place); }),
                      near_misses.end());
  }
  PW_RETURN_IF_ERROR(SortByRank(lanes, pending, &near_misses));
  if (near_misses.size() > kMostNearMisses) near_misses.resize(kMostNearMisses);
  Choice choice;
  choice.accepted.reserve(accepted.size());
  for (const uint32_t place : accepted) choice.accepted.push_back(pending[place]);
  for (const uint32_t place : near_misses) choice.near_misses.push_back(pending[place]);
  if (bound_ &&
      (choice.near_misses.size() < kMostNearMisses || order_(*bound_, choice.near_misses.back()))) {
    return std::optional<Choice>();
  }
  choice.never_used.resize(lanes_.front().never_used.size());
  for (const Lane& lane : lanes_) {
    for (size_t i = 0; i < lane.never_used.size(); ++i) {
      if (lane.never_used[i]) choice.never_used[i] = true;
    }
  }
  return std::optional<Choice>(std::move(choice));
}

}  // namespace phraseweld
