#include <algorithm>
#include <cmath>
#include <optional>
#include <string>
#include <vector>

#include "absl/strings/str_format.h"
#include "base/json.h"
#include "base/strings.h"
#include "base/units.h"
#include "run/compare.h"
#include "run/text_table.h"
#include "score/measures.h"

namespace phraseweld {
namespace {

std::string Arrow(uint64_t left, uint64_t right) {
  return left == right ? FormatCount(left) : Concat(FormatCount(left), " → ", FormatCount(right));
}

std::string Correlation(const std::optional<double>& value) {
  return value ? absl::StrFormat("%.3f", *value) : "–";
}

void AppendLeftOut(std::string* text, size_t all, size_t most) {
  if (all > most) AppendTo(text, "  … and ", FormatCount(all - most), " more (--json has all)\n");
}

void AppendOneSided(std::string* text, std::string_view title,
                    const std::vector<OneSidedPhrase>& phrases, size_t most) {
  AppendTitle(text, Concat(title, ": ", FormatCount(phrases.size())));
  for (size_t i = 0; i < std::min(most, phrases.size()); ++i) {
    const ComparedPhrase& phrase = phrases[i].phrase;
    TextTable row({phrase.phrase, Concat(FormatCount(phrase.made()), " occ."),
                   Concat(FormatCount(phrase.documents), " doc."), Concat("pass ", phrase.pass)});
    *text += row.Text();
    *text += WrappedText(phrases[i].why, 6);
  }
  AppendLeftOut(text, phrases.size(), most);
}

void AppendKept(std::string* text, const RunComparison& comparison, size_t most) {
  AppendTitle(text, Concat("Kept: ", FormatCount(comparison.kept.size()), ", of which ",
                           FormatCount(comparison.kept_changed), " changed"));
  TextTable table({"", "occurrences", "documents", "pass", "rank", "pmi"});
  size_t rows = 0;
  for (const KeptPhrase& kept : comparison.kept) {
    if (!kept.changed || rows == most) break;
    ++rows;
    std::string pmi;
    const auto left = kept.left.Score(Quantity::kPmi), right = kept.right.Score(Quantity::kPmi);
    // Two decimals of a difference that they do not show would be a zero with a sign.
    if (left && right && std::abs(*right - *left) >= 0.005) {
      pmi = absl::StrFormat("%+.2f", *right - *left);
    }
    table.Add({kept.left.phrase, Arrow(kept.left.made(), kept.right.made()),
               Arrow(kept.left.documents, kept.right.documents),
               Arrow(static_cast<uint64_t>(kept.left.pass), static_cast<uint64_t>(kept.right.pass)),
               Arrow(kept.left.rank, kept.right.rank), pmi});
  }
  if (!table.empty()) *text += table.Text();
  AppendLeftOut(text, comparison.kept_changed, most);
  if (comparison.kept.empty()) return;
  AppendTitle(text, "Agreement on their order (1: the same, -1: backwards)");
  TextTable agreements({"by", "phrases", "Spearman", "Kendall tau-b"});
  for (const OrderAgreement& agreement : comparison.agreements) {
    agreements.Add({agreement.by, FormatCount(agreement.phrases), Correlation(agreement.spearman),
                    Correlation(agreement.kendall)});
  }
  *text += agreements.Text();
}

std::string RunLine(std::string_view side, const ComparedRun& run) {
  return WrappedText(
      Concat(side, " ", run.folder, ": ", FormatCount(run.phrases), " phrases, ",
             FormatCount(run.documents), " documents, ", FormatCount(run.words), " words, ",
             Percent(static_cast<double>(run.words_in_phrases), static_cast<double>(run.words)),
             " of them inside phrases"),
      0);
}

std::string InputLine(const InputDifference& input) {
  const std::string_view change = kInputChangeNames[static_cast<size_t>(input.change)];
  std::string sizes = input.change == InputChange::kAdded ? FormatCount(input.right_bytes)
                      : input.change == InputChange::kRemoved
                          ? FormatCount(input.left_bytes)
                          : Arrow(input.left_bytes, input.right_bytes);
  return WrappedText(Concat(change, " ", input.name, ": ", sizes, " bytes"), 2);
}

void AppendKey(std::string* out, const KeyDifference& key) {
  *out += WrappedText(
      Concat(key.key, ": ", key.left.value_or("(none)"), " → ", key.right.value_or("(none)"),
             key.shapes_phrases ? "" : "  (no effect on the phrases)"),
      2);
}

// JSON.

std::string RunJson(const ComparedRun& run) {
  std::string out = "{";
  AppendJsonString(&out, "run", run.folder);
  AppendJsonString(&out, "job", run.job);
  AppendJsonString(&out, "version", run.version);
  AppendJsonCount(&out, "documents", run.documents);
  AppendJsonCount(&out, "words", run.words);
  AppendJsonCount(&out, "passes", run.passes);
  AppendJsonCount(&out, "phrases", run.phrases);
  AppendJsonCount(&out, "words_in_phrases", run.words_in_phrases);
  return out + "}";
}

// What a phrase is in one run, without its text.
void AppendFacts(std::string* out, const ComparedPhrase& phrase) {
  AppendJsonCount(out, "pass", static_cast<uint64_t>(phrase.pass));
  AppendJsonCount(out, "rank", phrase.rank);
  AppendJsonCount(out, "occurrences", phrase.occurrences);
  AppendJsonCount(out, "inside_longer", phrase.inside_longer);
  AppendJsonCount(out, "documents", phrase.documents);
  AppendJsonKey(out, "scores");
  *out += '{';
  for (const auto& [quantity, value] : phrase.scores) {
    AppendJsonKey(out, QuantityName(quantity));
    *out += FormatScore(value);
  }
  *out += '}';
}

void AppendOneSidedJson(std::string* out, const OneSidedPhrase& phrase) {
  *out += '{';
  AppendJsonString(out, "phrase", phrase.phrase.phrase);
  AppendJsonCount(out, "words", static_cast<uint64_t>(phrase.phrase.words));
  AppendFacts(out, phrase.phrase);
  AppendJsonString(out, "absence", kAbsenceNames[static_cast<size_t>(phrase.absence)]);
  AppendJsonString(out, "why", phrase.why);
  *out += '}';
}

void AppendKeptJson(std::string* out, const KeptPhrase& kept) {
  *out += '{';
  AppendJsonString(out, "phrase", kept.left.phrase);
  AppendJsonCount(out, "words", static_cast<uint64_t>(kept.left.words));
  AppendJsonKey(out, "changed");
  *out += kept.changed ? "true" : "false";
  for (const auto* side : {&kept.left, &kept.right}) {
    AppendJsonKey(out, side == &kept.left ? "left" : "right");
    *out += '{';
    AppendFacts(out, *side);
    *out += '}';
  }
  *out += '}';
}

void AppendOptional(std::string* out, std::string_view key,
                    const std::optional<std::string>& text) {
  AppendJsonKey(out, key);
  if (text) {
    AppendJsonString(out, *text);
  } else {
    *out += "null";
  }
}

void AppendOptional(std::string* out, std::string_view key, const std::optional<double>& value) {
  AppendJsonKey(out, key);
  *out += value ? FormatScore(*value) : "null";
}

}  // namespace

std::string ComparisonText(const RunComparison& comparison, size_t most) {
  std::string text = RunLine("left ", comparison.left) + RunLine("right", comparison.right);
  AppendTitle(&text, "Corpus");
  for (const InputDifference& input : comparison.inputs) text += InputLine(input);
  if (comparison.input_order_differs) text += "  the inputs stand in another order\n";
  if (comparison.inputs.empty() && !comparison.input_order_differs) {
    text += "  the same inputs, to the byte\n";
  }
  AppendTitle(&text, "Job");
  for (const KeyDifference& key : comparison.keys) AppendKey(&text, key);
  if (comparison.keys.empty()) text += "  every key has the same value\n";
  AppendOneSided(&text, "Gained", comparison.gained, most);
  AppendOneSided(&text, "Lost", comparison.lost, most);
  AppendKept(&text, comparison, most);
  return text;
}

std::string ComparisonJson(const RunComparison& comparison) {
  std::string out = "{";
  AppendJsonKey(&out, "left");
  out += RunJson(comparison.left);
  AppendJsonKey(&out, "right");
  out += RunJson(comparison.right);
  AppendJsonList(&out, "keys", comparison.keys, [&out](const KeyDifference& key) {
    out += '{';
    AppendJsonString(&out, "key", key.key);
    AppendOptional(&out, "left", key.left);
    AppendOptional(&out, "right", key.right);
    AppendJsonKey(&out, "shapes_phrases");
    out += key.shapes_phrases ? "true}" : "false}";
  });
  AppendJsonList(&out, "inputs", comparison.inputs, [&out](const InputDifference& input) {
    out += '{';
    AppendJsonString(&out, "name", input.name);
    AppendJsonString(&out, "change", kInputChangeNames[static_cast<size_t>(input.change)]);
    AppendJsonCount(&out, "left_bytes", input.left_bytes);
    AppendJsonCount(&out, "right_bytes", input.right_bytes);
    out += '}';
  });
  AppendJsonKey(&out, "input_order_differs");
  out += comparison.input_order_differs ? "true" : "false";
  AppendJsonList(&out, "agreement", comparison.agreements, [&out](const OrderAgreement& agreement) {
    out += '{';
    AppendJsonString(&out, "by", agreement.by);
    AppendJsonCount(&out, "phrases", agreement.phrases);
    AppendOptional(&out, "spearman", agreement.spearman);
    AppendOptional(&out, "kendall_tau_b", agreement.kendall);
    out += '}';
  });
  const auto one_sided = [&out](const OneSidedPhrase& phrase) {
    out += '\n';
    AppendOneSidedJson(&out, phrase);
  };
  AppendJsonList(&out, "gained", comparison.gained, one_sided);
  AppendJsonList(&out, "lost", comparison.lost, one_sided);
  AppendJsonList(&out, "kept", comparison.kept, [&out](const KeptPhrase& kept) {
    out += '\n';
    AppendKeptJson(&out, kept);
  });
  return out + "}\n";
}

}  // namespace phraseweld
