#include "run/verify_records.h"

#include <algorithm>
#include <map>
#include <optional>
#include <set>
#include <string>
#include <tuple>
#include <utility>
#include <vector>

#include "base/json.h"
#include "base/status.h"
#include "base/strings.h"
#include "score/measures.h"

namespace phraseweld {
namespace {

constexpr size_t kMostNearMisses = 200;  // section 8 of the semantics

void AppendScores(std::string* line, const PassOptions& options, const SlotTable& table) {
  AppendJsonKey(line, "scores");
  *line += '{';
  for (const Quantity quantity : ShownMeasures(options)) {
    AppendJsonKey(line, QuantityName(quantity));
    *line += FormatScore(Score(quantity, table));
  }
  *line += '}';
}

// The lines of a file; one that lacks its line feed is a fault.
absl::StatusOr<std::vector<std::string>> LinesOf(const FolderCheck& check,
                                                 const std::string& path) {
  PW_ASSIGN_OR_RETURN(const std::string bytes, ReadWhole(check.files, path));
  std::vector<std::string> lines;
  for (size_t begin = 0; begin < bytes.size();) {
    const size_t end = bytes.find('\n', begin);
    if (end == std::string::npos) {
      check.faults->Add(path, "the end", Shown(std::string_view(bytes).substr(begin)),
                        "a line feed");
    }
    lines.push_back(bytes.substr(begin, end - begin));
    begin = end == std::string::npos ? bytes.size() : end + 1;
  }
  return lines;
}

// An empty expected line stands for one that is a fault of another kind.
void CompareLines(const FolderCheck& check, const std::string& path,
                  const std::vector<std::string>& found, const std::vector<std::string>& expected) {
  for (size_t i = 0; i < std::min(found.size(), expected.size()); ++i) {
    CompareJsonLines(Concat(path, ":", i + 1), found[i], expected[i], check.faults);
  }
  if (found.size() != expected.size()) {
    check.faults->Add(path, "lines", Concat(found.size()), Concat(expected.size()));
  }
}

// A slot type of a pass as recounted, with what its line shows.
struct JudgedSlot {
  const SlotRecount* count = nullptr;
  std::string text;  // of the phrase
  std::string left_text, bridge_text, right_text;
  RecountSlot forms;
  double score = 0;  // of rank_by
  std::vector<Quantity> failed;
};

// The order of section 6.
bool RanksFirst(const JudgedSlot& a, const JudgedSlot& b) {
  if (a.score != b.score) return a.score > b.score;
  if (a.count->table.n != b.count->table.n) return a.count->table.n > b.count->table.n;
  const auto key = [](const JudgedSlot& slot) {
    return std::tie(slot.text, slot.left_text, slot.bridge_text, slot.forms.left, slot.forms.bridge,
                    slot.forms.right);
  };
  return key(a) < key(b);
}

class PassCheck {
 public:
  PassCheck(const FolderCheck& check, const ClaimedRun& run, const Recounter& recounter,
            size_t pass, const RecountPass& rules)
      : check_(check),
        run_(run),
        recounter_(recounter),
        log_(*run.passes[pass]),
        options_(run.options[pass]),
        number_(pass + 1),
        path_(run.logs[pass + (run.pass_zero != nullptr ? 1 : 0)]),
        recount_(recounter.passes()[pass]) {
    for (const auto& [forms, counts, slots] :
         {std::tie(rules.accepted, recount_.accepted, accepted_),
          std::tie(rules.watched, recount_.watched, near_misses_)}) {
      for (size_t i = 0; i < counts.size(); ++i) slots.push_back(Judge(forms[i], counts[i]));
    }
    for (const ResolvedRuling& ruling : run.rulings) {
      if (!ruling.ruling.always) never_[ruling.forms] = &ruling.ruling;
    }
  }

  absl::Status Check() {
    PW_ASSIGN_OR_RETURN(const std::vector<std::string> found, LinesOf(check_, path_));
    CompareLines(check_, path_, found, Lines());
    CheckRules();
    return absl::OkStatus();
  }

 private:
  JudgedSlot Judge(const RecountSlot& forms, const SlotRecount& count) const {
    JudgedSlot slot;
    slot.count = &count;
    slot.text = recounter_.Text(count.phrase);
    slot.left_text = Join(forms.left, " ");
    slot.bridge_text = Join(forms.bridge, " ");
    slot.right_text = Join(forms.right, " ");
    slot.forms = forms;
    if (count.table.n == 0) return slot;  // which has no scores
    slot.score = Score(options_.rank_by, count.table);
    for (const Gate& gate : options_.accept) {
      if (!(Score(gate.quantity, count.table) >= gate.least)) slot.failed.push_back(gate.quantity);
    }
    return slot;
  }

  std::vector<std::string> Lines() const {
    std::vector<std::string> lines;
    std::string& head = lines.emplace_back("{\"kind\":\"pass\"");
    AppendJsonCount(&head, "pass", number_);
    AppendJsonString(&head, "name", options_.name);
    AppendJsonCount(&head, "tokens_in", recount_.tokens_in);
    AppendJsonCount(&head, "types_in", recount_.types_in);
    AppendJsonCount(&head, "slots", recount_.slots);
    AppendJsonCount(&head, "slot_types", log_.head.slot_types);
    AppendJsonString(&head, "rank_by", QuantityName(options_.rank_by));
    AppendJsonKey(&head, "accept");
    head += '{';
    for (const Gate& gate : options_.accept) {
      AppendJsonKey(&head, QuantityName(gate.quantity));
      head += FormatScore(gate.least);
    }
    head += "}}";
    for (size_t i = 0; i < accepted_.size(); ++i) {
      lines.push_back(SlotLine("accepted", RankOf(log_.accepted, i), accepted_[i], std::nullopt));
    }
    for (size_t i = 0; i < near_misses_.size(); ++i) {
      const JudgedSlot& slot = near_misses_[i];
      const std::optional<Quantity> failed =
          slot.failed.empty() ? log_.near_misses[i].failed : slot.failed.front();
      lines.push_back(SlotLine("near_miss", RankOf(log_.near_misses, i), slot, failed));
    }
    std::string& balance = lines.emplace_back("{\"kind\":\"balance\"");
    AppendJsonCount(&balance, "pass", number_);
    AppendJsonCount(&balance, "tokens_in", recount_.tokens_in);
    AppendJsonCount(&balance, "accepted", accepted_.size());
    AppendJsonCount(&balance, "joined", recount_.joined);
    AppendJsonCount(&balance, "words_absorbed", recount_.words_absorbed);
    AppendJsonCount(&balance, "tokens_out", recount_.tokens_out);
    balance += '}';
    return lines;
  }

  // Ranks count from 1. Where a line is missing that is one fault, not one for each line after it.
  static uint64_t RankOf(const std::vector<RunSlot>& slots, size_t i) {
    return i == 0 ? 1 : slots[i - 1].rank + 1;
  }

  std::string SlotLine(std::string_view kind, uint64_t rank, const JudgedSlot& slot,
                       std::optional<Quantity> failed) const {
    const SlotTable& table = slot.count->table;
    if (table.n == 0) return "";
    std::string line = "{";
    AppendJsonString(&line, "kind", kind);
    AppendJsonCount(&line, "rank", rank);
    AppendJsonString(&line, "phrase", slot.text);
    AppendJsonString(&line, "left", slot.left_text);
    AppendJsonString(&line, "bridge", slot.bridge_text);
    AppendJsonString(&line, "right", slot.right_text);
    AppendJsonCount(&line, "n", table.n);
    AppendJsonCount(&line, "left_slots", table.left);
    AppendJsonCount(&line, "right_slots", table.right);
    AppendJsonCount(&line, "slots", table.total);
    AppendJsonKey(&line, "expected");
    line += FormatScore(Round9(Expected(table)));
    AppendJsonCount(&line, "documents", table.documents);
    AppendScores(&line, options_, table);
    AppendJsonCount(&line, "joined", slot.count->joined);
    AppendJsonCount(&line, "yielded", slot.count->yielded);
    AppendJsonKey(&line, "first");
    std::string place = "{";
    AppendJsonString(&place, "document", slot.count->first.document);
    AppendJsonString(&place, "passage", slot.count->first.passage);
    AppendJsonCount(&place, "byte", slot.count->first.byte);
    AppendTo(&line, place, "}");
    if (failed.has_value()) AppendJsonString(&line, "failed", QuantityName(*failed));
    line += '}';
    return line;
  }

  // What must hold of the recounted numbers themselves.
  void CheckRules() {
    for (size_t i = 0; i < accepted_.size(); ++i) {
      const std::string place = Place(i);
      CheckSlot(place, accepted_[i]);
      for (const Quantity gate : accepted_[i].failed) TellGate(place, accepted_[i], gate);
      const SlotRecount& count = *accepted_[i].count;
      if (count.joined + count.yielded != count.table.n) {
        check_.faults->Add(place, "joined + yielded", Concat(count.joined + count.yielded),
                           Concat(count.table.n));
      }
    }
    for (size_t i = 0; i < near_misses_.size(); ++i) {
      const std::string place = Place(accepted_.size() + i);
      const JudgedSlot& slot = near_misses_[i];
      CheckSlot(place, slot);
      if (slot.count->table.n == 0) continue;
      if (slot.failed.size() != 1 || slot.failed.front() == Quantity::kOccurrences) {
        std::vector<std::string> names;
        for (const Quantity gate : slot.failed) names.emplace_back(QuantityName(gate));
        check_.faults->Add(place, "gates that this near miss fails",
                           names.empty() ? "none" : Join(names, ", "), "one, and not occurrences");
      }
    }
    if (near_misses_.size() > kMostNearMisses) {
      check_.faults->Add(path_, "near misses", Concat(near_misses_.size()),
                         Concat("at most ", kMostNearMisses));
    }
    if (options_.take.has_value() && accepted_.size() > *options_.take) {
      check_.faults->Add(path_, "accepted types", Concat(accepted_.size()),
                         Concat("at most ", *options_.take, ", for take"));
    }
    CheckOrder(accepted_, 0);
    CheckOrder(near_misses_, accepted_.size());
    if (recount_.tokens_in - recount_.words_absorbed != recount_.tokens_out) {
      check_.faults->Add(path_, "tokens_in - words_absorbed",
                         Concat(recount_.tokens_in - recount_.words_absorbed),
                         Concat(recount_.tokens_out));
    }
  }

  // The rules that hold for accepted types and near misses alike.
  void CheckSlot(const std::string& place, const JudgedSlot& slot) {
    const auto key = std::tie(slot.forms.left, slot.forms.bridge, slot.forms.right);
    if (!seen_.emplace(key).second) {
      check_.faults->Add(Concat(place, ": ", Shown(slot.text), " stands twice in this pass"));
    }
    if (slot.count->table.n == 0) {
      check_.faults->Add(place, Concat("slots of ", Shown(slot.text)), "this line", "none");
    }
    const std::vector<std::string> forms = recounter_.Forms(slot.count->phrase);
    const auto longest = static_cast<size_t>(run_.job.phrases.longest);
    if (forms.size() > longest) {
      check_.faults->Add(place, Concat("words of ", Shown(slot.text)), Concat(forms.size()),
                         Concat("at most ", longest));
    }
    if (run_.job.words.numbers == Numbers::kNotFirst && slot.forms.left.size() == 1 &&
        recounter_.IsNumber(slot.forms.left[0])) {
      check_.faults->Add(Concat(place, ": ", Shown(slot.text), " begins with a number"));
    }
    if (const auto ruling = never_.find(forms); ruling != never_.end()) {
      check_.faults->Add(Concat(place, ": ", Shown(slot.text), " is ruled never in ",
                                ruling->second->file, ":", ruling->second->line));
    }
  }

  void TellGate(const std::string& place, const JudgedSlot& slot, Quantity quantity) {
    for (const Gate& gate : options_.accept) {
      if (gate.quantity != quantity) continue;
      check_.faults->Add(place,
                         Concat(QuantityName(quantity), " of the accepted ", Shown(slot.text)),
                         FormatScore(Score(quantity, slot.count->table)),
                         Concat("at least ", FormatScore(gate.least)));
    }
  }

  void CheckOrder(const std::vector<JudgedSlot>& slots, size_t line) {
    for (size_t i = 1; i < slots.size(); ++i) {
      if (!RanksFirst(slots[i], slots[i - 1])) continue;
      check_.faults->Add(Place(line + i), "order",
                         Concat(Shown(slots[i].text), " behind ", Shown(slots[i - 1].text)),
                         "it before that one");
    }
  }

  // Of a type; the first stands on line 2.
  std::string Place(size_t type) const { return Concat(path_, ":", type + 2); }

  const FolderCheck& check_;
  const ClaimedRun& run_;
  const Recounter& recounter_;
  const RunPass& log_;
  const PassOptions& options_;
  const uint64_t number_;
  const std::string& path_;
  const PassRecount& recount_;
  std::vector<JudgedSlot> accepted_, near_misses_;
  std::map<std::vector<std::string>, const Ruling*> never_;
  std::set<std::tuple<std::vector<std::string>, std::vector<std::string>, std::vector<std::string>>>
      seen_;
};

std::vector<std::string> RulingLines(const ClaimedRun& run, const Recounter& recounter) {
  const RulingsRecount& recount = recounter.rulings();
  std::vector<std::string> lines;
  std::string& head = lines.emplace_back("{\"kind\":\"pass\",\"pass\":0,\"name\":\"rulings\"");
  AppendJsonCount(&head, "tokens_in", recount.tokens_in);
  AppendJsonCount(&head, "types_in", recount.types_in);
  head += '}';
  for (size_t i = 0; i < run.always.size(); ++i) {
    std::string& line = lines.emplace_back("{\"kind\":\"ruled\"");
    AppendJsonString(&line, "phrase", Join(run.always[i]->forms, " "));
    AppendJsonCount(&line, "joined", recount.ruled[i].joined);
    AppendJsonCount(&line, "documents", recount.ruled[i].documents);
    const std::string& reason = run.always[i]->ruling.reason;
    if (!reason.empty()) AppendJsonString(&line, "reason", reason);
    line += '}';
  }
  std::string& balance = lines.emplace_back("{\"kind\":\"balance\",\"pass\":0");
  AppendJsonCount(&balance, "tokens_in", recount.tokens_in);
  AppendJsonCount(&balance, "accepted", run.always.size());
  AppendJsonCount(&balance, "joined", recount.joined);
  AppendJsonCount(&balance, "words_absorbed", recount.words_absorbed);
  AppendJsonCount(&balance, "tokens_out", recount.tokens_out);
  balance += '}';
  return lines;
}

}  // namespace

absl::Status CheckAudit(const FolderCheck& check, const ClaimedRun& run, const RecountRules& rules,
                        const Recounter& recounter) {
  if (run.pass_zero != nullptr) {
    PW_ASSIGN_OR_RETURN(const std::vector<std::string> found, LinesOf(check, run.logs[0]));
    CompareLines(check, run.logs[0], found, RulingLines(run, recounter));
  }
  for (size_t i = 0; i < run.passes.size(); ++i) {
    PW_RETURN_IF_ERROR(PassCheck(check, run, recounter, i, rules.passes[i]).Check());
    const PassRecount& recount = recounter.passes()[i];
    check.report->accepted += recount.accepted.size();
    check.report->near_misses += recount.watched.size();
    check.report->merges += recount.joined;
  }
  check.report->merges += recounter.rulings().joined;
  check.report->passes = run.passes.size();
  return absl::OkStatus();
}

}  // namespace phraseweld
