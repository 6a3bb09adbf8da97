#include "config/rulings.h"

#include <array>
#include <map>
#include <optional>
#include <string_view>
#include <utility>

#include "absl/strings/ascii.h"
#include "base/nearest.h"
#include "base/strings.h"
#include "config/yaml_tree.h"

namespace phraseweld {
namespace {

constexpr std::array<std::string_view, 3> kEntryKeys = {"never", "always", "reason"};
constexpr std::string_view kShape =
    "{never: \"some words\", reason: \"why\"} or {always: \"some words\", reason: \"why\"}";

std::string Comparable(std::string_view phrase) {
  std::string text = AsciiLower(phrase);
  absl::RemoveExtraAsciiWhitespace(&text);
  return text;
}

std::string_view KindName(const Ruling& ruling) { return ruling.always ? "always" : "never"; }

// The entry's key `name`, a text that is not blank; null and perhaps a fault where it has none.
struct EntryTexts {
  std::array<const YamlNode*, kEntryKeys.size()> keys{};
  std::array<const YamlNode*, kEntryKeys.size()> values{};
};

EntryTexts ReadKeys(const YamlNode& entry, Faults* faults, bool* ok) {
  EntryTexts texts;
  for (const auto& [name, value] : entry.entries) {
    size_t which = 0;
    while (which < kEntryKeys.size() && !(name->is_scalar() && name->text == kEntryKeys[which])) {
      ++which;
    }
    std::string problem;
    if (which == kEntryKeys.size()) {
      problem = Concat("unknown key ", name->Described(), " in a ruling",
                       name->is_scalar() ? DidYouMean(name->text, kEntryKeys) : "",
                       "; an entry is ", kShape);
    } else if (texts.keys[which] != nullptr) {
      problem = Concat("key '", name->text, "' stands here again, first on line ",
                       texts.keys[which]->place.line, "; start a new entry with '- '");
    }
    if (!problem.empty()) {
      faults->Add(name->place, std::move(problem));
      *ok = false;
      continue;
    }
    texts.keys[which] = name.get();
    texts.values[which] = value.get();
    const bool is_reason = kEntryKeys[which] == "reason";
    const bool blank = value->is_scalar() && Comparable(value->text).empty();
    if (!value->is_scalar() || (blank && !is_reason)) {
      faults->Add(value->place, Concat(name->text, " must be a text, not ",
                                       blank ? "a blank one" : value->Described()));
      *ok = false;
    }
  }
  return texts;
}

std::optional<Ruling> ReadEntry(const YamlNode& entry, const std::string& path, Faults* faults) {
  if (!entry.is_map()) {
    faults->Add(entry.place, Concat("a ruling is a map, ", kShape, ", not ", entry.Described()));
    return std::nullopt;
  }
  bool ok = true;
  const EntryTexts texts = ReadKeys(entry, faults, &ok);
  if (!ok) return std::nullopt;
  const auto [never, always, reason] = texts.values;
  if ((never == nullptr) == (always == nullptr)) {
    faults->Add(entry.place, never == nullptr
                                 ? Concat("a ruling needs 'never' or 'always'; it is ", kShape)
                                 : "a ruling says 'never' or 'always', not both");
    return std::nullopt;
  }
  Ruling ruling;
  ruling.always = always != nullptr;
  ruling.phrase = (ruling.always ? always : never)->text;
  ruling.reason = reason != nullptr ? reason->text : "";
  ruling.file = path;
  ruling.line = static_cast<int>(texts.keys[ruling.always ? 1 : 0]->place.line);
  return ruling;
}

}  // namespace

std::vector<Ruling> ReadRulings(FileSystem& files, const std::string& path, const FaultPlace& named_at,
                                Faults* faults) {
  auto text = ReadWhole(files, path);
  if (!text.ok()) {
    faults->Add(named_at, Concat("phrases.rulings: ", text.status().message(),
                                 "; a relative path starts at the working directory"));
    return {};
  }
  const YamlNodePtr root = ParseYaml(faults->AddSource(path, *std::move(text), true), faults);
  if (root == nullptr || root->is_null()) return {};
  if (!root->is_list()) {
    faults->Add(root->place, Concat("a rulings file is a list, each entry '- ", kShape, "', not ",
                                    root->Described()));
    return {};
  }
  std::vector<Ruling> rulings;
  std::map<std::string, size_t> by_text;  // position of the first ruling with the text
  for (const YamlNodePtr& entry : root->items) {
    std::optional<Ruling> ruling = ReadEntry(*entry, path, faults);
    if (!ruling.has_value()) continue;
    const auto [first, is_new] = by_text.emplace(Comparable(ruling->phrase), rulings.size());
    if (!is_new && rulings[first->second].always != ruling->always) {
      const Ruling& other = rulings[first->second];
      faults->Add(entry->place, Concat("'", first->first, "' is ruled '", KindName(*ruling),
                                       "' on line ", ruling->line, " and '", KindName(other),
                                       "' on line ", other.line, "; keep one of the two"));
      continue;
    }
    rulings.push_back(*std::move(ruling));
  }
  return rulings;
}

}  // namespace phraseweld
