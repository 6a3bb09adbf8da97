#include "deliver/inventory.h"

#include <algorithm>
#include <array>
#include <optional>
#include <string>

#include "absl/strings/str_cat.h"
#include "base/json.h"
#include "base/parallel_sort.h"
#include "base/status.h"

namespace phraseweld {
namespace {

void AppendDerivation(std::string* out, const Derivation& derivation,
                      const InventoryContext& context) {
  const TypeTable& types = *context.types;
  const bool ruled = !derivation.slot.has_value();
  *out += '{';
  AppendJsonCount(out, "pass", static_cast<uint64_t>(derivation.pass));
  AppendJsonString(out, "left", ruled ? "" : types.Text(derivation.slot->left));
  AppendJsonString(out, "bridge",
                   ruled ? "" : types.Text(context.codes->Words(derivation.slot->bridge)));
  AppendJsonString(out, "right", ruled ? "" : types.Text(derivation.slot->right));
  AppendJsonCount(out, "joined", derivation.joined);
  *out += '}';
}

// The texts of a phrase's scores, each worked out once.
class ScoreTexts {
 public:
  ScoreTexts(const ScoreWriter& scores, const std::optional<SlotTable>& table)
      : scores_(scores), table_(table) {}
  // Empty where the phrase has no scores.
  const std::string& Of(Quantity quantity) {
    std::string& text = texts_[static_cast<size_t>(quantity)];
    if (table_ && text.empty()) text = scores_.format(scores_.score(quantity, *table_));
    return text;
  }

 private:
  const ScoreWriter& scores_;
  const std::optional<SlotTable>& table_;
  std::array<std::string, kQuantities> texts_;
};

void AppendLine(const PhraseRecord& phrase, const InventoryContext& context, ScoreTexts* scores,
                std::string* out) {
  *out += '{';
  AppendJsonString(out, "phrase", phrase.text);
  AppendJsonCount(out, "words", static_cast<uint64_t>(phrase.words));
  AppendJsonCount(out, "pass", static_cast<uint64_t>(phrase.made_of.front().pass));
  AppendJsonCount(out, "occurrences", phrase.occurrences);
  AppendJsonCount(out, "inside_longer", phrase.inside_longer);
  AppendJsonCount(out, "documents", phrase.documents);
  AppendJsonString(out, "surface", phrase.surface);
  AppendJsonKey(out, "made_of");
  *out += '[';
  for (size_t i = 0; i < phrase.made_of.size(); ++i) {
    if (i > 0) *out += ',';
    AppendDerivation(out, phrase.made_of[i], context);
  }
  *out += ']';
  AppendJsonKey(out, "scores");
  *out += '{';
  if (phrase.scored) {
    for (Quantity quantity : context.shown(phrase.scored_pass)) {
      AppendJsonKey(out, QuantityName(quantity));
      *out += scores->Of(quantity);
    }
  }
  *out += '}';
  if (!phrase.reason.empty()) AppendJsonString(out, "reason", phrase.reason);
  *out += "}\n";
}

void AppendRow(const PhraseRecord& phrase, ScoreTexts* scores, std::string* out) {
  absl::StrAppend(out, phrase.text, "\t", phrase.words, "\t", phrase.made_of.front().pass, "\t",
                  phrase.occurrences, "\t");
  absl::StrAppend(out, phrase.inside_longer, "\t", phrase.documents, "\t", phrase.surface);
  for (Quantity quantity : {Quantity::kPmi, Quantity::kNpmi, Quantity::kG2}) {
    *out += '\t';
    *out += scores->Of(quantity);
  }
  *out += '\n';
}

}  // namespace

absl::Status SortInventory(Lanes& lanes, const TypeTable& types,
                           std::vector<PhraseRecord>* phrases) {
  // Most pairs are told apart by what lies side by side here.
  struct Key {
    uint64_t made = 0;
    uint64_t text = 0;  // its first eight bytes, as they compare
    uint32_t phrase = 0;
  };
  std::vector<Key> keys;
  keys.reserve(phrases->size());
  for (const PhraseRecord& phrase : *phrases) {
    uint64_t text = 0;
    for (size_t i = 0; i < 8; ++i) {
      text = text << 8 | (i < phrase.text.size() ? static_cast<unsigned char>(phrase.text[i]) : 0u);
    }
    keys.push_back(
        {phrase.occurrences + phrase.inside_longer, text, static_cast<uint32_t>(keys.size())});
  }
  const auto before = [&](const Key& key_a, const Key& key_b) {
    if (key_a.made != key_b.made) return key_a.made > key_b.made;
    if (key_a.text != key_b.text) return key_a.text < key_b.text;
    const PhraseRecord &a = (*phrases)[key_a.phrase], &b = (*phrases)[key_b.phrase];
    if (int by_text = a.text.compare(b.text); by_text != 0) return by_text < 0;
    std::vector<uint32_t> words_a, words_b;
    types.AppendWords(a.type, &words_a);
    types.AppendWords(b.type, &words_b);
    return std::lexicographical_compare(
        words_a.begin(), words_a.end(), words_b.begin(), words_b.end(),
        [&](uint32_t x, uint32_t y) { return types.form(x) < types.form(y); });
  };
  PW_RETURN_IF_ERROR(SortInLanes(lanes, &keys, before));
  std::vector<PhraseRecord> sorted;
  sorted.reserve(keys.size());
  for (const Key& key : keys) sorted.push_back(std::move((*phrases)[key.phrase]));
  *phrases = std::move(sorted);
  return absl::OkStatus();
}

void AppendInventory(const PhraseRecord& phrase, const InventoryContext& context, std::string* line,
                     std::string* row) {
  ScoreTexts scores(context.scores, phrase.scored);
  AppendLine(phrase, context, &scores, line);
  AppendRow(phrase, &scores, row);
}

}  // namespace phraseweld
