#include "run/compare.h"

#include <algorithm>
#include <map>
#include <memory>
#include <optional>
#include <string_view>
#include <utility>
#include <vector>

#include "base/status.h"
#include "base/strings.h"
#include "config/job_file.h"
#include "deliver/compare_page.h"
#include "files/streams.h"
#include "run/absence.h"
#include "score/rank_correlation.h"

namespace phraseweld {
namespace {

ComparedRun FactsOf(const FinishedRun& run) {
  const RunManifest& manifest = run.data.manifest;
  ComparedRun facts;
  facts.folder = run.data.folder;
  facts.job = manifest.job;
  facts.version = manifest.version;
  facts.documents = manifest.totals.documents;
  facts.words = manifest.totals.words;
  facts.passes = manifest.totals.passes;
  facts.phrases = run.data.phrases.size();
  facts.words_in_phrases = manifest.totals.words_in_phrases;
  return facts;
}

// Keys that say where results go and how fast they come. What corpus.files stands for shows in the
// inputs.
bool ShapesPhrases(std::string_view key) {
  for (const std::string_view front : {"deliver.", "limits.", "debug."}) {
    if (key.starts_with(front)) return false;
  }
  return key != "job" && key != "run_folder" && key != "corpus.files";
}

std::vector<KeyDifference> KeyDifferences(const Job& left, const Job& right) {
  std::vector<KeyDifference> differences;
  const auto of_left = JobSettings(left), of_right = JobSettings(right);
  std::map<std::string, std::string> unseen(of_right.begin(), of_right.end());
  for (const auto& [key, value] : of_left) {
    const auto found = unseen.find(key);
    if (found == unseen.end()) {
      differences.push_back({key, value, std::nullopt, ShapesPhrases(key)});
      continue;
    }
    if (found->second != value) {
      differences.push_back({key, value, found->second, ShapesPhrases(key)});
    }
    unseen.erase(found);
  }
  for (const auto& [key, value] : of_right) {
    if (unseen.contains(key)) {
      differences.push_back({key, std::nullopt, value, ShapesPhrases(key)});
    }
  }
  return differences;
}

// Fills `inputs` and `input_order_differs`.
void CompareInputs(const RunManifest& left, const RunManifest& right, RunComparison* comparison) {
  std::map<std::string_view, const RunInput*> unseen;
  for (const RunInput& input : right.inputs) unseen[input.name] = &input;
  std::vector<std::string_view> common;
  for (const RunInput& input : left.inputs) {
    const auto found = unseen.find(input.name);
    if (found == unseen.end()) {
      comparison->inputs.push_back({input.name, InputChange::kRemoved, input.stored_bytes, 0});
      continue;
    }
    common.push_back(input.name);
    if (input.xxh3_128 != found->second->xxh3_128) {
      comparison->inputs.push_back(
          {input.name, InputChange::kChanged, input.stored_bytes, found->second->stored_bytes});
    }
    unseen.erase(found);
  }
  size_t next = 0;
  for (const RunInput& input : right.inputs) {
    if (unseen.contains(input.name)) {
      comparison->inputs.push_back({input.name, InputChange::kAdded, 0, input.stored_bytes});
    } else if (next < common.size() && input.name != common[next++]) {
      comparison->input_order_differs = true;
    }
  }
}

ComparedPhrase Row(const FinishedRun& run, const RunPhrase& phrase) {
  ComparedPhrase row;
  row.phrase = phrase.phrase;
  row.words = phrase.words;
  row.pass = phrase.pass;
  row.rank = static_cast<uint64_t>(&phrase - run.data.phrases.data()) + 1;
  row.occurrences = phrase.occurrences;
  row.inside_longer = phrase.inside_longer;
  row.documents = phrase.documents;
  row.scores = phrase.scores;
  return row;
}

bool Changed(const ComparedPhrase& left, const ComparedPhrase& right) {
  if (left.pass != right.pass || left.rank != right.rank || left.occurrences != right.occurrences ||
      left.inside_longer != right.inside_longer || left.documents != right.documents) {
    return true;
  }
  for (const auto& [quantity, value] : left.scores) {
    if (right.Score(quantity).value_or(value) != value) return true;
  }
  return false;
}

uint64_t Distance(uint64_t a, uint64_t b) { return a > b ? a - b : b - a; }

OrderAgreement Agreement(std::string by, const std::vector<double>& left,
                         const std::vector<double>& right) {
  return {std::move(by), left.size(), SpearmanRho(left, right), KendallTauB(left, right)};
}

std::vector<OrderAgreement> Agreements(const std::vector<KeptPhrase>& kept) {
  std::vector<OrderAgreement> agreements;
  std::vector<double> left, right;
  for (const KeptPhrase& phrase : kept) {
    left.push_back(static_cast<double>(phrase.left.made()));
    right.push_back(static_cast<double>(phrase.right.made()));
  }
  agreements.push_back(Agreement("occurrences", left, right));
  for (int i = static_cast<int>(Quantity::kPmi); i < kQuantities; ++i) {
    const auto quantity = static_cast<Quantity>(i);
    left.clear();
    right.clear();
    for (const KeptPhrase& phrase : kept) {
      const std::optional<double> on_left = phrase.left.Score(quantity);
      const std::optional<double> on_right = phrase.right.Score(quantity);
      if (!on_left || !on_right) continue;
      left.push_back(*on_left);
      right.push_back(*on_right);
    }
    if (!left.empty()) {
      agreements.push_back(Agreement(std::string(QuantityName(quantity)), left, right));
    }
  }
  return agreements;
}

}  // namespace

RunComparison CompareFinishedRuns(const FinishedRun& left, const FinishedRun& right) {
  RunComparison comparison;
  comparison.left = FactsOf(left);
  comparison.right = FactsOf(right);
  comparison.keys = KeyDifferences(left.job, right.job);
  CompareInputs(left.data.manifest, right.data.manifest, &comparison);

  WholeDifferences differences;
  differences.corpus = !comparison.inputs.empty() || comparison.input_order_differs;
  std::vector<std::string> keys;
  for (const KeyDifference& key : comparison.keys) {
    if (key.shapes_phrases) keys.push_back(key.key);
  }
  differences.keys = Join(keys, ", ");

  const ComparedSide on_left(left, "left"), on_right(right, "right");
  for (const RunPhrase& phrase : right.data.phrases) {
    if (on_left.trails.Find(phrase.phrase).made != nullptr) continue;
    AbsenceReason reason = ExplainAbsence(phrase, on_right, on_left, differences);
    comparison.gained.push_back({Row(right, phrase), reason.absence, std::move(reason.why)});
  }
  for (const RunPhrase& phrase : left.data.phrases) {
    const RunPhrase* other = on_right.trails.Find(phrase.phrase).made;
    if (other == nullptr) {
      AbsenceReason reason = ExplainAbsence(phrase, on_left, on_right, differences);
      comparison.lost.push_back({Row(left, phrase), reason.absence, std::move(reason.why)});
      continue;
    }
    KeptPhrase kept{Row(left, phrase), Row(right, *other), false};
    kept.changed = Changed(kept.left, kept.right);
    if (kept.changed) ++comparison.kept_changed;
    comparison.kept.push_back(std::move(kept));
  }
  comparison.agreements = Agreements(comparison.kept);
  std::stable_sort(comparison.kept.begin(), comparison.kept.end(),
                   [](const KeptPhrase& a, const KeptPhrase& b) {
                     const uint64_t by_a = Distance(a.left.made(), a.right.made());
                     const uint64_t by_b = Distance(b.left.made(), b.right.made());
                     if (by_a != by_b) return by_a > by_b;
                     if (a.changed != b.changed) return a.changed;
                     const uint64_t rank_a = Distance(a.left.rank, a.right.rank);
                     const uint64_t rank_b = Distance(b.left.rank, b.right.rank);
                     if (rank_a != rank_b) return rank_a > rank_b;
                     return a.left.phrase < b.left.phrase;
                   });
  return comparison;
}

absl::StatusOr<RunComparison> CompareRuns(FileSystem& files, const std::string& left,
                                          const std::string& right) {
  PW_ASSIGN_OR_RETURN(const FinishedRun of_left, LoadFinishedRun(files, left));
  PW_ASSIGN_OR_RETURN(const FinishedRun of_right, LoadFinishedRun(files, right));
  return CompareFinishedRuns(of_left, of_right);
}

absl::Status WriteComparisonPage(FileSystem& files, const RunComparison& comparison,
                                 const std::string& path) {
  PW_ASSIGN_OR_RETURN(const std::unique_ptr<OutputStream> out,
                      OutputStream::Create(files, path, false));
  PW_RETURN_IF_ERROR(out->Append(RenderComparePage(comparison)));
  return out->Finish().status();
}

}  // namespace phraseweld
