#include <algorithm>
#include <map>
#include <string>
#include <utility>
#include <vector>

#include "absl/container/flat_hash_map.h"
#include "base/json.h"
#include "base/status.h"
#include "base/strings.h"
#include "run/verify_records.h"
#include "score/measures.h"

namespace phraseweld {
namespace {

// One way in which a phrase was made, as recounted.
struct Made {
  size_t pass = 0;
  std::string left, bridge, right;
  uint64_t joined = 0;
  const SlotTable* table = nullptr;  // null in pass 0
};

// A phrase that the inventory should have.
struct Row {
  std::string text;
  std::vector<std::string> forms;
  const PhraseRecount* phrase = nullptr;
  std::vector<Made> made_of;
  std::string reason;
};

std::vector<Row> ExpectedRows(const ClaimedRun& run, const RecountRules& rules,
                              const Recounter& recounter) {
  std::map<uint32_t, Row> by_type;
  const auto row_of = [&](uint32_t type) -> Row& {
    Row& row = by_type[type];
    row.text = recounter.Text(type);
    row.forms = recounter.Forms(type);
    row.phrase = &recounter.phrase(type);
    return row;
  };
  for (size_t i = 0; i < run.always.size(); ++i) {
    const RuledRecount& ruled = recounter.rulings().ruled[i];
    if (ruled.joined == 0) continue;
    Row& row = row_of(ruled.phrase);
    row.made_of.push_back({0, "", "", "", ruled.joined, nullptr});
    row.reason = run.always[i]->ruling.reason;
  }
  for (size_t pass = 0; pass < run.passes.size(); ++pass) {
    const std::vector<SlotRecount>& accepted = recounter.passes()[pass].accepted;
    for (size_t i = 0; i < accepted.size(); ++i) {
      if (accepted[i].joined == 0) continue;
      const RecountSlot& forms = rules.passes[pass].accepted[i];
      row_of(accepted[i].phrase)
          .made_of.push_back({pass + 1, Join(forms.left, " "), Join(forms.bridge, " "),
                              Join(forms.right, " "), accepted[i].joined, &accepted[i].table});
    }
  }
  std::vector<Row> rows;
  for (auto& [type, row] : by_type) rows.push_back(std::move(row));
  std::sort(rows.begin(), rows.end(), [](const Row& a, const Row& b) {
    if (a.phrase->made != b.phrase->made) return a.phrase->made > b.phrase->made;
    return a.text != b.text ? a.text < b.text : a.forms < b.forms;
  });
  return rows;
}

// The first way of making it that has counts; null where it was only ruled.
const Made* Scored(const Row& row) {
  for (const Made& made : row.made_of) {
    if (made.table != nullptr) return &made;
  }
  return nullptr;
}

std::string JsonLine(const ClaimedRun& run, const Row& row) {
  const PhraseRecount& phrase = *row.phrase;
  std::string line = "{";
  AppendJsonString(&line, "phrase", row.text);
  AppendJsonCount(&line, "words", row.forms.size());
  AppendJsonCount(&line, "pass", row.made_of.front().pass);
  AppendJsonCount(&line, "occurrences", phrase.occurrences);
  AppendJsonCount(&line, "inside_longer", phrase.made - phrase.occurrences);
  AppendJsonCount(&line, "documents", phrase.documents);
  AppendJsonString(&line, "surface", phrase.surface);
  AppendJsonKey(&line, "made_of");
  std::string ways;
  for (const Made& made : row.made_of) {
    std::string way = "{";
    AppendJsonCount(&way, "pass", made.pass);
    AppendJsonString(&way, "left", made.left);
    AppendJsonString(&way, "bridge", made.bridge);
    AppendJsonString(&way, "right", made.right);
    AppendJsonCount(&way, "joined", made.joined);
    AppendTo(&ways, ways.empty() ? "" : ",", way, "}");
  }
  AppendTo(&line, "[", ways, "]");
  AppendJsonKey(&line, "scores");
  std::string scores = "{";
  if (const Made* scored = Scored(row)) {
    for (const Quantity quantity : ShownMeasures(run.options[scored->pass - 1])) {
      AppendJsonKey(&scores, QuantityName(quantity));
      scores += FormatScore(Score(quantity, *scored->table));
    }
  }
  AppendTo(&line, scores, "}");
  if (!row.reason.empty()) AppendJsonString(&line, "reason", row.reason);
  return line + "}";
}

std::string TableLine(const Row& row) {
  std::string line =
      Concat(row.text, "\t", row.forms.size(), "\t", row.made_of.front().pass, "\t",
             row.phrase->occurrences, "\t", row.phrase->made - row.phrase->occurrences, "\t",
             row.phrase->documents, "\t", row.phrase->surface);
  const Made* scored = Scored(row);
  for (const Quantity quantity : {Quantity::kPmi, Quantity::kNpmi, Quantity::kG2}) {
    line += '\t';
    if (scored != nullptr) line += FormatScore(Score(quantity, *scored->table));
  }
  return line + "\n";
}

// Compares the lines of the inventory with those that it should have. Phrases that are missing or
// too many, or stand in another order, are told as such.
class InventoryCheck {
 public:
  InventoryCheck(const FolderCheck& check, const ClaimedRun& run, const std::vector<Row>& rows)
      : check_(check), run_(run), rows_(rows), path_(InFolder(check, "inventory.jsonl")) {
    for (const RunPhrase& phrase : run.data.phrases) ++found_left_[phrase.phrase];
    for (const Row& row : rows) ++expected_left_[row.text];
  }

  absl::Status Check() {
    PW_ASSIGN_OR_RETURN(const std::string bytes, ReadWhole(check_.files, path_));
    const std::vector<std::string_view> lines = Split(bytes, '\n');
    const std::vector<RunPhrase>& found = run_.data.phrases;
    size_t i = 0, j = 0;
    while (i < found.size() && j < rows_.size()) {
      if (found[i].phrase == rows_[j].text) {
        --found_left_[found[i].phrase];
        --expected_left_[rows_[j].text];
        Compare(i++, lines, rows_[j++]);
      } else if (expected_left_[found[i].phrase] == 0) {
        TellExtra(i++);
      } else if (found_left_[rows_[j].text] == 0) {
        TellMissing(j++);
      } else {
        check_.faults->Add(Place(i), "phrase in this place", Shown(found[i].phrase),
                           Shown(rows_[j].text));
        CompareUnordered(i, lines, j);
        return absl::OkStatus();
      }
    }
    while (i < found.size()) TellExtra(i++);
    while (j < rows_.size()) TellMissing(j++);
    return absl::OkStatus();
  }

 private:
  void Compare(size_t i, const std::vector<std::string_view>& lines, const Row& row) {
    CompareJsonLines(Place(i), lines[i], JsonLine(run_, row), check_.faults);
  }
  void CompareUnordered(size_t i, const std::vector<std::string_view>& lines, size_t j) {
    absl::flat_hash_map<std::string, std::vector<size_t>> rows;
    for (size_t row = rows_.size(); row > j; --row) rows[rows_[row - 1].text].push_back(row - 1);
    for (; i < run_.data.phrases.size(); ++i) {
      std::vector<size_t>& same = rows[run_.data.phrases[i].phrase];
      if (same.empty()) {
        TellExtra(i);
        continue;
      }
      Compare(i, lines, rows_[same.back()]);
      same.pop_back();
    }
    for (; j < rows_.size(); ++j) {
      std::vector<size_t>& left = rows[rows_[j].text];
      if (!left.empty() && left.back() == j) {
        TellMissing(j);
        left.pop_back();
      }
    }
  }
  void TellExtra(size_t i) {
    check_.faults->Add(Place(i), "phrase", Shown(run_.data.phrases[i].phrase),
                       "none, for no pass made it");
  }
  void TellMissing(size_t j) {
    check_.faults->Add(path_, Concat("place ", j + 1), "no line",
                       Concat(Shown(rows_[j].text), ", made ", rows_[j].phrase->made, " times"));
  }
  std::string Place(size_t i) const { return Concat(path_, ":", i + 1); }

  const FolderCheck& check_;
  const ClaimedRun& run_;
  const std::vector<Row>& rows_;
  const std::string path_;
  absl::flat_hash_map<std::string, uint64_t> found_left_, expected_left_;  // not yet paired
};

}  // namespace

absl::Status CheckInventory(const FolderCheck& check, const ClaimedRun& run,
                            const RecountRules& rules, const Recounter& recounter) {
  const std::vector<Row> rows = ExpectedRows(run, rules, recounter);
  check.report->phrases = rows.size();
  PW_RETURN_IF_ERROR(InventoryCheck(check, run, rows).Check());
  ByteComparer table(check.files, InFolder(check, "inventory.tsv"), "", check.faults);
  table.Next(
      "phrase\twords\tpass\toccurrences\tinside_longer\tdocuments\tsurface\tpmi\tnpmi\tg2\n");
  for (const Row& row : rows) table.Next(TableLine(row));
  table.Finish();
  return absl::OkStatus();
}

void CheckTotals(const FolderCheck& check, const ClaimedRun& run, const Recounter& recounter,
                 uint64_t bad_lines) {
  const std::string path = InFolder(check, "manifest.json");
  const ManifestTotals& totals = run.data.manifest.totals;
  const auto expect = [&](std::string_view what, uint64_t found, uint64_t expected) {
    if (found != expected) check.faults->Add(path, what, Concat(found), Concat(expected));
  };
  uint64_t phrases = 0, words_in_phrases = 0, saved = 0;
  for (size_t i = 0; i < recounter.phrases(); ++i) {
    const PhraseRecount& phrase = recounter.phrase(recounter.phrase_type(i));
    if (phrase.made == 0) continue;
    ++phrases;
    words_in_phrases += phrase.occurrences * phrase.words.size();
    saved += phrase.occurrences * (phrase.words.size() - 1);
  }
  expect("totals.documents", totals.documents, recounter.documents());
  expect("totals.words", totals.words, recounter.words());
  expect("totals.word_types", totals.word_types, recounter.word_types());
  expect("totals.passes", totals.passes, run.passes.size());
  expect("totals.phrases", totals.phrases, phrases);
  expect("totals.tokens_out", totals.tokens_out, recounter.tokens_out());
  expect("totals.words_in_phrases", totals.words_in_phrases, words_in_phrases);
  expect("totals.bad_lines", totals.bad_lines, bad_lines);
  // Each token of a phrase of k words stands for k words.
  expect("totals.tokens_out, as words less what the phrases' occurrences save", totals.tokens_out,
         recounter.words() - saved);
  if (run.data.manifest.job != run.job.job) {
    check.faults->Add(path, "job", Shown(run.data.manifest.job), Shown(run.job.job));
  }
}

}  // namespace phraseweld
