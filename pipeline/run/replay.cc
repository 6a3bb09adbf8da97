#include "run/replay.h"

#include <algorithm>
#include <map>
#include <optional>
#include <utility>

#include "absl/container/flat_hash_map.h"
#include "base/slot_index.h"
#include "base/status.h"
#include "base/strings.h"
#include "base/types.h"
#include "merge/merger.h"
#include "merge/rulings.h"
#include "run/passes.h"
#include "run/word_tree.h"

namespace phraseweld {
namespace {

constexpr uint32_t kNone = SlotIndex::kAbsent;

TextCounts Sorted(const std::map<std::string, uint64_t>& counts) {
  TextCounts sorted(counts.begin(), counts.end());
  std::stable_sort(sorted.begin(), sorted.end(),
                   [](const auto& a, const auto& b) { return a.second > b.second; });
  return sorted;
}

class Replayer {
 public:
  Replayer(const FinishedRun& run, KeptRuns* runs, uint32_t function_types)
      : run_(run),
        vocabulary_(runs->vocabulary),
        entries_(runs->entries),
        types_(runs->vocabulary.size(), [this](uint32_t word) { return vocabulary_.form(word); }) {
    rules_.codes = BridgeCodes(function_types, run.job.words.bridge);
    if (run.job.words.numbers == Numbers::kNowhere) {
      numbers_.Resize(vocabulary_.size());
      for (uint32_t word = 0; word < vocabulary_.size(); ++word) {
        if (vocabulary_.is_number(word)) numbers_.Set(word);
      }
      rules_.barriers = &numbers_;
    }
  }

  absl::Status JoinRulings();
  ReplayedPass CarryOut(const RunPass& pass, Margins margins,
                        const std::vector<WatchedSlot>& watched);
  void FindPhrase(const std::vector<std::string>& forms);
  TextCounts Ends() const;

 private:
  // A slot of a watched type at the start of a pass.
  struct Seen {
    uint32_t watched;
    uint64_t left_at, right_at;
  };

  uint32_t TypeOf(const std::string& text) const;
  std::optional<Slot> SlotOf(const std::string& left, const std::string& bridge,
                             const std::string& right) const;
  uint32_t Name(uint32_t phrase) {
    named_.try_emplace(types_.Text(phrase), phrase);
    return phrase;
  }
  std::vector<Seen> Count(const std::vector<WatchedSlot>& watched, Margins margins,
                          ReplayedPass* replayed) const;
  uint64_t TokenStart(uint64_t at) const {
    while (IsInside(entries_[at])) --at;
    return at;
  }

  const FinishedRun& run_;
  const Vocabulary& vocabulary_;
  std::vector<Entry>& entries_;
  TypeTable types_;
  absl::flat_hash_map<std::string, uint32_t> named_;  // phrases by their text
  TypeBits numbers_;
  SlotRules rules_;
  std::vector<uint64_t> phrase_at_;  // where the traced phrase's words begin
  size_t phrase_words_ = 0;
};

uint32_t Replayer::TypeOf(const std::string& text) const {
  const auto phrase = named_.find(text);
  return phrase != named_.end() ? phrase->second : vocabulary_.Find(text);
}

// None where the kept runs lack a word of it.
std::optional<Slot> Replayer::SlotOf(const std::string& left, const std::string& bridge,
                                     const std::string& right) const {
  Slot slot;
  slot.left = TypeOf(left);
  slot.right = TypeOf(right);
  if (slot.left == kBreak || slot.right == kBreak) return std::nullopt;
  if (bridge.empty()) return slot;
  uint64_t digits = 0;
  int length = 0;
  for (const std::string_view word : Split(bridge, ' ')) {
    const uint32_t id = vocabulary_.Find(word);
    if (id >= rules_.codes.function_types()) return std::nullopt;
    digits = digits * rules_.codes.function_types() + id;
    ++length;
  }
  slot.bridge = rules_.codes.Code(length, digits);
  return slot;
}

absl::Status Replayer::JoinRulings() {
  PW_ASSIGN_OR_RETURN(std::vector<ResolvedRuling> rulings, ResolveRulings(run_.job));
  std::erase_if(rulings, [](const ResolvedRuling& ruling) { return !ruling.ruling.always; });
  // Longer ones first, then by their text.
  std::stable_sort(
      rulings.begin(), rulings.end(), [](const ResolvedRuling& a, const ResolvedRuling& b) {
        return a.forms.size() != b.forms.size() ? a.forms.size() > b.forms.size()
                                                : Join(a.forms, " ") < Join(b.forms, " ");
      });
  std::vector<RuledPhrase> phrases;
  for (const ResolvedRuling& ruling : rulings) {
    std::vector<uint32_t> words;
    for (const std::string& form : ruling.forms) words.push_back(vocabulary_.Find(form));
    if (std::find(words.begin(), words.end(), kBreak) != words.end()) continue;
    const uint32_t phrase = Name(types_.Intern(words));
    phrases.push_back({std::move(words), phrase});
  }
  if (phrases.empty()) return absl::OkStatus();
  std::vector<uint64_t> joined(phrases.size(), 0);
  RulingJoiner(phrases, rules_.barriers, types_.word_types())
      .Join(entries_.data(), 0, entries_.size(), &joined);
  return absl::OkStatus();
}

std::vector<Replayer::Seen> Replayer::Count(const std::vector<WatchedSlot>& watched,
                                            Margins margins, ReplayedPass* replayed) const {
  std::vector<std::optional<Slot>> slots;
  // What to count at a slot: those watched that share its left side and bridge, and so on.
  absl::flat_hash_map<std::pair<uint64_t, uint32_t>, std::vector<uint32_t>> lefts, rights;
  absl::flat_hash_map<uint64_t, std::vector<uint32_t>> bridges;
  for (uint32_t i = 0; i < watched.size(); ++i) {
    slots.push_back(SlotOf(watched[i].left, watched[i].bridge, watched[i].right));
    if (!slots[i]) continue;
    lefts[{slots[i]->bridge, slots[i]->left}].push_back(i);
    rights[{slots[i]->bridge, slots[i]->right}].push_back(i);
    bridges[slots[i]->bridge].push_back(i);
  }
  std::vector<Seen> seen;
  std::vector<uint64_t> last_document(watched.size(), ~uint64_t{0});
  std::vector<ReplayedSlot>& counts = replayed->slots;
  uint64_t document = 0;
  ScanSlots(
      entries_.data(), 0, entries_.size(), rules_,
      [&](const Slot& slot, uint64_t left_at, uint64_t right_at) {
        const auto bridge = bridges.find(slot.bridge);
        if (bridge == bridges.end()) return;
        for (const uint32_t i : bridge->second) ++counts[i].table.total;
        if (const auto left = lefts.find({slot.bridge, slot.left}); left != lefts.end()) {
          for (const uint32_t i : left->second) {
            ++counts[i].table.left;
            if (slot.right != slots[i]->right) continue;
            ++counts[i].table.n;
            counts[i].table.documents += last_document[i] != document ? 1 : 0;
            last_document[i] = document;
            seen.push_back({i, left_at, right_at});
          }
        }
        if (const auto right = rights.find({slot.bridge, slot.right}); right != rights.end()) {
          for (const uint32_t i : right->second) ++counts[i].table.right;
        }
      },
      [&](uint64_t, Entry mark) { document += mark == kDocumentEnd ? 1 : 0; });
  if (margins == Margins::kSlots) return seen;
  // The textbook form: tokens instead of slots, for neighbours.
  for (uint32_t i = 0; i < watched.size(); ++i) {
    if (!slots[i] || slots[i]->bridge != 0) continue;
    const auto frequency = [&](uint32_t type) {
      return static_cast<uint64_t>(std::count(entries_.begin(), entries_.end(), type));
    };
    counts[i].table.left = frequency(slots[i]->left);
    counts[i].table.right = frequency(slots[i]->right);
  }
  return seen;
}

ReplayedPass Replayer::CarryOut(const RunPass& pass, Margins margins,
                                const std::vector<WatchedSlot>& watched) {
  ReplayedPass replayed;
  replayed.number = pass.head.number;
  replayed.slots.resize(watched.size());
  const std::vector<Seen> seen = Count(watched, margins, &replayed);
  std::vector<AcceptedSlot> accepted;
  absl::flat_hash_map<uint32_t, size_t> best_rank;  // of a phrase's slot types in this pass
  for (const RunSlot& line : pass.accepted) {
    const std::optional<Slot> slot = SlotOf(line.left, line.bridge, line.right);
    if (!slot) continue;
    const uint32_t phrase = types_.Intern(types_.SlotWords(*slot, rules_.codes));
    best_rank.try_emplace(phrase, accepted.size());
    accepted.push_back({*slot, phrase});
  }
  for (const AcceptedSlot& slot : accepted) Name(slot.phrase);
  const SlotIndex index(accepted.size(), types_.size(), rules_.codes,
                        [&](size_t i) -> const Slot& { return accepted[i].slot; });
  std::vector<uint32_t> right_types;
  for (const Seen& slot : seen) right_types.push_back(entries_[slot.right_at]);
  std::vector<uint64_t> joined(accepted.size(), 0);
  Merger(rules_, accepted, types_.word_types())
      .Merge(index, entries_.data(), 0, entries_.size(), &joined, [](const Slot&, const Slot&) {});
  std::vector<std::map<std::string, uint64_t>> yielded_to(watched.size());
  for (size_t i = 0; i < seen.size(); ++i) {
    const Seen& slot = seen[i];
    ReplayedSlot& count = replayed.slots[slot.watched];
    // Its left token begins this slot alone, and its right token ends this slot alone.
    const bool left_taken = IsInside(entries_[slot.left_at]);
    const bool right_inside = IsInside(entries_[slot.right_at]);
    if (!left_taken && right_inside) {
      ++count.joined;
      continue;
    }
    uint32_t taker = kNone;
    if (left_taken) taker = entries_[TokenStart(slot.left_at)];
    if (entries_[slot.right_at] != right_types[i]) {
      const uint32_t right_taker = entries_[slot.right_at];
      if (taker == kNone || best_rank[right_taker] < best_rank[taker]) taker = right_taker;
    }
    if (taker == kNone) continue;
    ++count.yielded;
    ++yielded_to[slot.watched][types_.Text(taker)];
  }
  for (size_t i = 0; i < watched.size(); ++i) replayed.slots[i].yielded_to = Sorted(yielded_to[i]);
  return replayed;
}

void Replayer::FindPhrase(const std::vector<std::string>& forms) {
  std::vector<uint32_t> words;
  for (const std::string& form : forms) words.push_back(vocabulary_.Find(form));
  if (std::find(words.begin(), words.end(), kBreak) != words.end()) return;
  phrase_words_ = words.size();
  WordTree tree;
  tree.Add(words, 0);
  tree.Find(entries_, [&](uint32_t, size_t at, uint32_t, uint32_t break_after) {
    if (break_after == WordTree::kNone) phrase_at_.push_back(at);
  });
}

TextCounts Replayer::Ends() const {
  std::map<std::string, uint64_t> ends;
  for (const uint64_t begin : phrase_at_) {
    std::string text;
    uint64_t last_start = ~uint64_t{0};
    for (uint64_t at = begin; at < begin + phrase_words_; ++at) {
      const uint64_t start = TokenStart(at);
      if (start == last_start) continue;
      last_start = start;
      AppendTo(&text, text.empty() ? "" : " | ", types_.Text(entries_[start]));
    }
    ++ends[text];
  }
  return Sorted(ends);
}

}  // namespace

absl::StatusOr<Replay> ReplayRun(const FinishedRun& run, KeptRuns* runs,
                                 const std::vector<WatchedSlot>& watched,
                                 const std::vector<std::string>& phrase) {
  PW_ASSIGN_OR_RETURN(const std::vector<std::string> function_words, FunctionWordForms(run.job));
  Replayer replayer(run, runs, static_cast<uint32_t>(function_words.size()));
  Replay replay;
  replayer.FindPhrase(phrase);
  PW_RETURN_IF_ERROR(replayer.JoinRulings());
  for (size_t i = 0; i < run.data.passes.size(); ++i) {
    const RunPass& pass = run.data.passes[i];
    if (pass.head.number == 0) continue;
    replay.passes.push_back(replayer.CarryOut(pass, run.options[i].margins, watched));
  }
  replay.ends = replayer.Ends();
  return replay;
}

}  // namespace phraseweld
