#include "run/trace_splits.h"

#include <algorithm>
#include <utility>

#include "base/strings.h"
#include "run/job_options.h"
#include "run/passes.h"
#include "run/trace_reasons.h"
#include "score/measures.h"
#include "words/splitter.h"

namespace phraseweld {
namespace {

void FillGates(const FinishedRun& run, size_t pass, const RunSlot* line, TraceSlot* slot) {
  for (const Gate& gate : run.data.passes[pass].head.accept) {
    const double value = line != nullptr ? FinishedRun::Value(*line, gate.quantity)
                                         : Score(gate.quantity, slot->table);
    slot->gates.push_back({gate.quantity, value, gate.least});
  }
}

}  // namespace

PartTrails::PartTrails(const FinishedRun& run, const std::vector<std::string>& forms) {
  for (size_t begin = 0; begin < forms.size(); ++begin) {
    std::string text = forms[begin];
    for (size_t end = begin + 1; end < forms.size(); ++end) {
      AppendTo(&text, " ", forms[end]);
      trails_.try_emplace(text);
    }
  }
  const auto find = [this](const std::string& text) {
    const auto trail = trails_.find(text);
    return trail == trails_.end() ? nullptr : &trail->second;
  };
  for (const RunPhrase& phrase : run.data.phrases) {
    if (PhraseTrail* trail = find(phrase.phrase)) trail->made = &phrase;
  }
  for (size_t i = 0; i < run.data.passes.size(); ++i) {
    for (const RunSlot& slot : run.data.passes[i].accepted) {
      if (PhraseTrail* trail = find(slot.phrase)) trail->accepted.push_back({i, &slot});
    }
    for (const RunSlot& slot : run.data.passes[i].near_misses) {
      if (PhraseTrail* trail = find(slot.phrase)) trail->near_misses.push_back({i, &slot});
    }
  }
}

const PhraseTrail& PartTrails::Find(const std::string& text) const {
  const auto trail = trails_.find(text);
  return trail == trails_.end() ? none_ : trail->second;
}

TraceSlot LoggedSlot(const FinishedRun& run, const PhraseTrail::Line& line, TraceOrigin origin) {
  const RunPassHead& head = run.data.passes[line.pass].head;
  TraceSlot slot;
  slot.origin = origin;
  slot.pass = head.number;
  slot.pass_name = head.name;
  slot.rank = line.slot->rank;
  slot.left = line.slot->left;
  slot.bridge = line.slot->bridge;
  slot.right = line.slot->right;
  slot.table = line.slot->table;
  slot.expected = line.slot->expected;
  slot.scores = line.slot->scores;
  slot.joined = line.slot->joined;
  slot.yielded = line.slot->yielded;
  FillGates(run, line.pass, line.slot, &slot);
  return slot;
}

SplitTracer::SplitTracer(const FinishedRun& run, const std::vector<std::string>& forms,
                         const PartTrails& trails)
    : run_(run), forms_(forms), trails_(trails) {
  // A list that the run could be made with has no faults.
  if (auto words = FunctionWordForms(run.job); words.ok()) {
    function_words_.insert(words->begin(), words->end());
  }
  WordSplitter splitter(WordOptionsOf(run.job), SplitPath::kExact);
  std::vector<WordSpan> spans;
  for (const std::string& form : forms) {
    splitter.Split(form, &spans);
    numbers_.push_back(!spans.empty() && spans[0].number);
  }
  for (size_t left_end = 1; left_end < forms.size(); ++left_end) {
    for (size_t right_begin = left_end; right_begin < forms.size(); ++right_begin) {
      AddSplit(left_end, right_begin);
      const bool may_grow = IsFunctionWord(forms[right_begin]) &&
                            right_begin - left_end < static_cast<size_t>(run.job.words.bridge);
      if (!may_grow) break;
    }
  }
  for (const Split& split : splits_) {
    for (size_t i = 0; i < run.data.passes.size(); ++i) {
      const int number = run.data.passes[i].head.number;
      if (!split.missing.empty() || number < split.first_pass) continue;
      wants_all_ = wants_all_ || !SlotsOf(i, split.bridge);
    }
  }
}

std::string SplitTracer::Text(size_t begin, size_t end) const {
  return Join(absl::MakeConstSpan(forms_).subspan(begin, end - begin), " ");
}

void SplitTracer::AddSplit(size_t left_end, size_t right_begin) {
  Split split;
  split.left_end = left_end;
  split.right_begin = right_begin;
  split.left = Text(0, left_end);
  split.bridge = Text(left_end, right_begin);
  split.right = Text(right_begin, forms_.size());
  const std::pair<size_t, size_t> sides[] = {{0, left_end}, {right_begin, forms_.size()}};
  for (const auto& [begin, end] : sides) {
    if (end - begin == 1) {
      if (IsFunctionWord(forms_[begin])) return;
      continue;
    }
    const std::string text = Text(begin, end);
    const PhraseTrail& trail = trails_.Find(text);
    if (trail.made != nullptr) {
      split.first_pass = std::max(split.first_pass, trail.made->pass + 1);
      continue;
    }
    // No slot makes what begins or ends with a function word.
    if (IsFunctionWord(forms_[begin]) || IsFunctionWord(forms_[end - 1])) return;
    split.missing.push_back(text);
  }
  splits_.push_back(std::move(split));
}

std::vector<TracePart> SplitTracer::Parts() const {
  std::vector<TracePart> parts;
  for (const std::string& form : forms_) {
    TracePart& part = parts.emplace_back();
    part.text = form;
    part.word = true;
    part.function_word = IsFunctionWord(form);
  }
  for (size_t words = 2; words < forms_.size(); ++words) {
    for (size_t begin = 0; begin + words <= forms_.size(); ++begin) {
      if (IsFunctionWord(forms_[begin]) || IsFunctionWord(forms_[begin + words - 1])) continue;
      TracePart part;
      part.text = Text(begin, begin + words);
      const PhraseTrail& trail = trails_.Find(part.text);
      if (trail.made != nullptr) {
        part.pass = trail.made->pass;
        part.times = trail.made->made();
      }
      parts.push_back(std::move(part));
    }
  }
  return parts;
}

std::vector<std::vector<std::string>> SplitTracer::Sides() const {
  std::vector<std::vector<std::string>> sides;
  for (const Split& split : splits_) {
    if (!split.missing.empty()) continue;
    sides.emplace_back(forms_.begin(), forms_.begin() + static_cast<ptrdiff_t>(split.left_end));
    sides.emplace_back(forms_.begin() + static_cast<ptrdiff_t>(split.right_begin), forms_.end());
  }
  return sides;
}

std::vector<WatchedSlot> SplitTracer::Watched() const {
  std::vector<WatchedSlot> watched;
  for (const Split& split : splits_) {
    if (split.missing.empty()) watched.push_back({split.left, split.bridge, split.right});
  }
  return watched;
}

void SplitTracer::UseNumbers(const Vocabulary& vocabulary) {
  for (size_t i = 0; i < forms_.size(); ++i) {
    const uint32_t word = vocabulary.Find(forms_[i]);
    if (word != kBreak) numbers_[i] = vocabulary.is_number(word);
  }
}

// The number of slots with a bridge, or of what else the pass holds a slot type's counts against.
std::optional<uint64_t> SplitTracer::SlotsOf(size_t pass, const std::string& bridge) const {
  const RunPass& logged = run_.data.passes[pass];
  const bool bridges = !function_words_.empty() && run_.job.words.bridge > 0;
  if (bridge.empty() && run_.options[pass].margins == Margins::kWords) return logged.head.tokens_in;
  if (bridge.empty() && !bridges) return logged.head.slots;
  for (const auto* lines : {&logged.accepted, &logged.near_misses}) {
    for (const RunSlot& line : *lines) {
      if (line.bridge == bridge) return line.table.total;
    }
  }
  return std::nullopt;
}

std::string SplitTracer::RuledOut(const Split& split) const {
  const Job& job = run_.job;
  if (forms_.size() > static_cast<size_t>(job.phrases.longest)) {
    return Concat("longer than phrases.longest: ", job.phrases.longest);
  }
  const bool left_is_number = split.left_end == 1 && numbers_[0];
  if (job.words.numbers == Numbers::kNotFirst && left_is_number) {
    return Concat("a number may not stand first: '", forms_[0], "' (words.numbers: not_first)");
  }
  for (size_t i = 0; i < forms_.size(); ++i) {
    if (numbers_[i] && job.words.numbers == Numbers::kNowhere) {
      return Concat("a number may stand nowhere: '", forms_[i], "' (words.numbers: nowhere)");
    }
  }
  if (split.missing.empty()) return "";
  return Concat("no pass made '", Join(split.missing, "' and none '"), "'");
}

TraceSlot SplitTracer::Recounted(size_t pass, const Split& split,
                                 const ReplayedSlot& counts) const {
  const RunPassHead& head = run_.data.passes[pass].head;
  TraceSlot slot;
  slot.pass = head.number;
  slot.pass_name = head.name;
  slot.left = split.left;
  slot.bridge = split.bridge;
  slot.right = split.right;
  slot.table = counts.table;
  const std::optional<uint64_t> slots = SlotsOf(pass, split.bridge);
  if (slots) slot.table.total = *slots;
  slot.table.all = run_.options[pass].margins == Margins::kWords ? head.tokens_in : head.slots;
  if (slot.table.n == 0) return slot;
  slot.expected = Round9(Expected(slot.table));
  for (const Quantity quantity : ShownMeasures(run_.options[pass])) {
    slot.scores.emplace_back(quantity, Score(quantity, slot.table));
  }
  FillGates(run_, pass, nullptr, &slot);
  return slot;
}

std::vector<TraceSplit> SplitTracer::Splits(const Replay* replay) const {
  std::vector<TraceSplit> traced;
  size_t watched = 0;
  for (const Split& split : splits_) {
    TraceSplit result;
    result.left = split.left;
    result.bridge = split.bridge;
    result.right = split.right;
    result.why = RuledOut(split);
    if (!split.missing.empty()) {
      traced.push_back(std::move(result));
      continue;
    }
    const PhraseTrail& trail = trails_.Find(Join(forms_, " "));
    size_t replayed = 0;
    for (size_t i = 0; i < run_.data.passes.size(); ++i) {
      const int number = run_.data.passes[i].head.number;
      if (number == 0) continue;
      const ReplayedSlot* const counts =
          replay != nullptr ? &replay->passes[replayed++].slots[watched] : nullptr;
      if (number < split.first_pass) continue;
      std::optional<TraceSlot> slot;
      for (const bool accepted : {true, false}) {
        for (const PhraseTrail::Line& line : accepted ? trail.accepted : trail.near_misses) {
          if (line.pass != i || line.slot->left != split.left ||
              line.slot->bridge != split.bridge || line.slot->right != split.right) {
            continue;
          }
          slot = LoggedSlot(run_, line, accepted ? TraceOrigin::kAccepted : TraceOrigin::kNearMiss);
        }
      }
      if (!slot && counts != nullptr) slot = Recounted(i, split, *counts);
      if (!slot) continue;
      if (counts != nullptr) slot->yielded_to = counts->yielded_to;
      slot->why = WhyNot(*slot, run_.options[i]);
      result.passes.push_back(*std::move(slot));
    }
    ++watched;
    traced.push_back(std::move(result));
  }
  return traced;
}

std::string SplitTracer::StandsAgainst() const {
  if (!splits_.empty()) return "";
  for (const std::string* end : {&forms_.front(), &forms_.back()}) {
    if (IsFunctionWord(*end)) {
      return Concat("a phrase may not begin or end with a function word: '", *end, "'");
    }
  }
  return Concat("more function words in a row than words.bridge: ", run_.job.words.bridge);
}

}  // namespace phraseweld
