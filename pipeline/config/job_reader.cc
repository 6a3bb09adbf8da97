#include "config/job_reader.h"

#include <algorithm>
#include <limits>
#include <set>

#include "base/nearest.h"
#include "base/strings.h"
#include "base/units.h"
#include "base/utf8.h"
#include "config/keys.h"

namespace phraseweld {
namespace {

constexpr std::string_view kPasses = "passes";

// Counts are compared as doubles, which are exact up to here.
constexpr int64_t kMostCount = int64_t{1} << 53;

bool HasControl(std::string_view text) {
  for (size_t at = 0; at < text.size();) {
    const auto point = NextCodePoint(text, &at);
    if (point.has_value() && IsControl(*point)) return true;
  }
  return false;
}

const Key* FindKey(std::string_view path) {
  for (const Key& key : JobKeys()) {
    if (key.path == path) return &key;
  }
  return nullptr;
}

bool IsSection(std::string_view path) {
  const std::string prefix = Concat(path, ".");
  return std::any_of(JobKeys().begin(), JobKeys().end(),
                     [&](const Key& key) { return key.path.starts_with(prefix); });
}

// The names that may stand in the map whose keys' paths start with `prefix`.
std::vector<std::string_view> NamesBelow(std::string_view prefix) {
  std::vector<std::string_view> names;
  for (const Key& key : JobKeys()) {
    std::string_view rest = key.path;
    if (!rest.starts_with(prefix)) continue;
    rest.remove_prefix(prefix.size());
    const std::string_view name = rest.substr(0, rest.find_first_of(".["));
    if (names.empty() || names.back() != name) names.push_back(name);
  }
  return names;
}

class JobReader {
 public:
  JobReader(Faults* faults, JobPlaces* places) : faults_(faults), places_(places) {}

  Job Read(const YamlNode& root) {
    for (const Key& key : JobKeys()) {
      if (!key.path.starts_with(kPassPrefix)) SetDefault(key, nullptr);
    }
    job_.passes = {DefaultPass()};
    places_->function_words = places_->rulings = root.place;
    files_place_ = root.place;
    if (root.is_map() || root.is_null()) {
      ReadMap(root, "", "", nullptr);
    } else {
      const bool no_space = root.is_scalar() && Contains(root.text, ":");
      faults_->Add(root.place, Concat("a job file is a map of keys, not ", root.Described(),
                                      no_space ? "; put a space after the colon" : ""));
    }
    if (!files_given_) {
      faults_->Add(files_place_,
                   "corpus.files is missing: name at least one file, such as files: "
                   "[\"notes/*.txt\"]");
    }
    return std::move(job_);
  }

 private:
  // Defaults go the same way as values, so that the table is all that says them.
  void SetDefault(const Key& key, PassOptions* pass) {
    if (key.default_value.empty()) return;
    Faults unused;
    const YamlNodePtr node =
        ParseYaml(unused.AddSource("default", std::string(key.default_value), false), &unused);
    SetValue(key, *node, key.path, pass);
  }

  PassOptions DefaultPass() {
    PassOptions pass;
    for (const Key& key : JobKeys()) {
      if (key.path.starts_with(kPassPrefix)) SetDefault(key, &pass);
    }
    return pass;
  }

  // `path` is the map's place in the table ("passes[]."), `shown` in this job ("passes.0.").
  void ReadMap(const YamlNode& map, const std::string& path, const std::string& shown,
               PassOptions* pass) {
    std::vector<const YamlNode*> seen;
    for (const auto& [name, value] : map.entries) {
      if (!name->is_scalar()) {
        faults_->Add(name->place, Concat("a key is a plain word, not ", name->Described()));
        continue;
      }
      if (RefuseSecond(*name, seen, shown)) continue;
      seen.push_back(name.get());
      const std::string key_path = Concat(path, name->text);
      const std::string key_shown = Concat(shown, name->text);
      if (const Key* key = FindKey(key_path); key != nullptr) {
        NotePlace(*key, *value);
        if (value->is_null()) {
          faults_->Add(value->place, Concat(key_shown,
                                            " has no value; leave the key out to "
                                            "get the default"));
        } else {
          SetValue(*key, *value, key_shown, pass);
        }
      } else if (key_path == kPasses) {
        ReadPasses(*value);
      } else if (IsSection(key_path)) {
        if (key_path == "corpus") files_place_ = name->place;
        if (value->is_map() || value->is_null()) {
          ReadMap(*value, Concat(key_path, "."), Concat(key_shown, "."), pass);
        } else {
          faults_->Add(value->place,
                       Concat(key_shown, " must be a map of keys, not ", value->Described()));
        }
      } else {
        RefuseUnknown(*name, path, shown);
      }
    }
  }

  bool RefuseSecond(const YamlNode& name, const std::vector<const YamlNode*>& seen,
                    const std::string& shown) {
    const auto first = std::find_if(seen.begin(), seen.end(), [&name](const YamlNode* earlier) {
      return earlier->text == name.text;
    });
    if (first == seen.end()) return false;
    faults_->Add(name.place, Concat("key '", shown, name.text,
                                    "' stands here again, first on "
                                    "line ",
                                    (*first)->place.line, "; keep one of the two"));
    return true;
  }

  void RefuseUnknown(const YamlNode& name, const std::string& path, const std::string& shown) {
    const std::vector<std::string_view> names = NamesBelow(path);
    std::string help = DidYouMean(name.text, names);
    if (help.empty()) {
      // A right key in the wrong place is as frequent as a misspelt one.
      for (const Key& key : JobKeys()) {
        if (key.path.ends_with(Concat(".", name.text))) {
          help = Concat("; did you mean '", key.path, "'?");
        }
      }
    }
    if (help.empty()) help = Concat("; the keys here are ", Join(names, ", "));
    const std::string where = shown.substr(0, shown.size() - (shown.empty() ? 0 : 1));
    faults_->Add(name.place,
                 Concat("unknown key '", name.text, "'", where.empty() ? "" : " in ", where, help));
  }

  void NotePlace(const Key& key, const YamlNode& value) {
    if (key.path == "corpus.files") files_given_ = true;
    if (key.path == "words.function_words") places_->function_words = value.place;
    if (key.path == "phrases.rulings") places_->rulings = value.place;
  }

  void ReadPasses(const YamlNode& list) {
    if (!list.is_list() || list.items.empty()) {
      const std::string is = list.is_list() ? "an empty list" : list.Described();
      faults_->Add(list.place, Concat("passes must be a list of one pass or more, not ", is,
                                      "; leave the key out to get one pass with the "
                                      "defaults"));
      return;
    }
    job_.passes.clear();
    for (const YamlNodePtr& item : list.items) {
      const std::string shown = Concat(kPasses, ".", job_.passes.size());
      PassOptions pass = DefaultPass();
      if (item->is_map()) {
        ReadMap(*item, std::string(kPassPrefix), Concat(shown, "."), &pass);
      } else {
        faults_->Add(item->place, Concat(shown, " must be a map of keys, not ", item->Described()));
      }
      job_.passes.push_back(std::move(pass));
    }
  }

  void SetValue(const Key& key, const YamlNode& value, std::string_view shown, PassOptions* pass) {
    const KeyField field = key.field(job_, pass);
    if (key.kind == KeyKind::kTexts) {
      SetTexts(value, shown, key, std::get<std::vector<std::string>*>(field));
    } else if (key.kind == KeyKind::kGates) {
      SetGates(value, shown, key, std::get<std::vector<Gate>*>(field));
    } else if (!value.is_scalar()) {
      Refuse(key, value, shown, "");
    } else {
      SetScalar(key, value, shown, field);
    }
  }

  void SetScalar(const Key& key, const YamlNode& value, std::string_view shown,
                 const KeyField& field) {
    const std::string& text = value.text;
    switch (key.kind) {
      case KeyKind::kWhole: {
        const auto number = ParseWhole(text, key.least, key.most);
        if (!number.ok()) return Refuse(key, value, shown, "");
        *std::get<int*>(field) = static_cast<int>(*number);
        return;
      }
      case KeyKind::kCount: {
        auto& count = *std::get<std::optional<uint64_t>*>(field);
        if (text == "all") {
          count.reset();
          return;
        }
        const auto number = ParseWhole(text, 1, std::numeric_limits<int64_t>::max());
        if (!number.ok()) return Refuse(key, value, shown, "");
        count = static_cast<uint64_t>(*number);
        return;
      }
      case KeyKind::kSize: {
        const auto bytes = ParseBytes(text);
        if (!bytes.ok()) {
          faults_->Add(value.place, Concat(shown, " must be ", bytes.status().message()));
        } else if (*bytes < static_cast<uint64_t>(key.least)) {
          Refuse(key, value, shown, "");
        } else {
          *std::get<uint64_t*>(field) = *bytes;
        }
        return;
      }
      case KeyKind::kTruth: {
        // The spellings of YAML 1.2's core schema; "yes" and "on" are texts there.
        const bool is_true = text == "true" || text == "True" || text == "TRUE";
        const bool is_false = text == "false" || text == "False" || text == "FALSE";
        if (!is_true && !is_false) return Refuse(key, value, shown, "");
        *std::get<bool*>(field) = is_true;
        return;
      }
      case KeyKind::kChoice: {
        const auto found = std::find(key.choices.begin(), key.choices.end(), text);
        if (found == key.choices.end()) {
          return Refuse(key, value, shown, DidYouMean(text, key.choices));
        }
        std::get<ChoiceField>(field).set(static_cast<int>(found - key.choices.begin()));
        return;
      }
      case KeyKind::kMeasure: {
        const auto quantity = QuantityFromName(text);
        if (!quantity.has_value() || !IsMeasure(*quantity)) {
          constexpr auto kFirst = static_cast<size_t>(Quantity::kPmi);
          const auto measures = absl::MakeConstSpan(kQuantityNames).subspan(kFirst);
          return Refuse(key, value, shown,
                        quantity.has_value() ? "; that is a count" : DidYouMean(text, measures));
        }
        *std::get<Quantity*>(field) = *quantity;
        return;
      }
      default:
        SetText(key, value, shown, std::get<std::string*>(field));
    }
  }

  void SetText(const Key& key, const YamlNode& value, std::string_view shown, std::string* field) {
    if (!key.unset.empty() && value.text == key.unset) {
      field->clear();
      return;
    }
    if (HasControl(value.text)) {
      return Refuse(key, value, shown, "; it holds a control character");
    }
    if (key.check != nullptr && !key.check(value.text).ok()) return Refuse(key, value, shown, "");
    *field = value.text;
  }

  void SetTexts(const YamlNode& value, std::string_view shown, const Key& key,
                std::vector<std::string>* field) {
    if (!value.is_list() || value.items.empty()) {
      if (!value.is_list()) return Refuse(key, value, shown, "");
      faults_->Add(value.place, Concat(shown, " is empty; name at least one"));
      return;
    }
    std::vector<std::string> texts;
    for (const YamlNodePtr& item : value.items) {
      if (!item->is_scalar() || item->text.empty() || HasControl(item->text)) {
        faults_->Add(item->place, Concat(shown,
                                         " must hold texts that are not empty and have no control "
                                         "characters, not ",
                                         item->Described()));
      } else if (std::find(texts.begin(), texts.end(), item->text) != texts.end()) {
        faults_->Add(item->place, Concat(shown, " names ", item->Described(), " twice"));
      } else {
        texts.push_back(item->text);
      }
    }
    *field = std::move(texts);
  }

  void SetGates(const YamlNode& value, std::string_view shown, const Key& key,
                std::vector<Gate>* field) {
    if (!value.is_map()) return Refuse(key, value, shown, "");
    std::vector<Gate> gates;
    std::vector<const YamlNode*> seen;
    for (const auto& [name, least] : value.entries) {
      if (name->is_scalar() && RefuseSecond(*name, seen, Concat(shown, "."))) continue;
      seen.push_back(name.get());
      const auto quantity = name->is_scalar() ? QuantityFromName(name->text) : std::nullopt;
      if (!quantity.has_value()) {
        std::string help = name->is_scalar() ? DidYouMean(name->text, kQuantityNames) : "";
        if (help.empty()) {
          help = Concat("; gates are ", Join(kQuantityNames, ", "));
        }
        faults_->Add(name->place, Concat("unknown gate ", name->Described(), " in ", shown, help));
        continue;
      }
      const std::string gate_shown = Concat(shown, ".", name->text);
      if (const auto number = GateValue(*quantity, *least); number.ok()) {
        gates.push_back({*quantity, *number});
      } else {
        faults_->Add(least->place, Concat(gate_shown, " must be ", number.status().message()));
      }
    }
    std::sort(gates.begin(), gates.end(),
              [](const Gate& left, const Gate& right) { return left.quantity < right.quantity; });
    *field = std::move(gates);
  }

  static absl::StatusOr<double> GateValue(Quantity quantity, const YamlNode& value) {
    if (!value.is_scalar()) {
      return absl::InvalidArgumentError(Concat("a number, not ", value.Described()));
    }
    if (IsMeasure(quantity)) return ParseNumber(value.text);
    const auto count = ParseWhole(value.text, 1, kMostCount);
    if (count.ok()) return static_cast<double>(*count);
    return absl::InvalidArgumentError(
        Concat("a whole number of at least 1, not ", value.Described()));
  }

  void Refuse(const Key& key, const YamlNode& value, std::string_view shown,
              std::string_view help) {
    faults_->Add(value.place,
                 Concat(shown, " must be ", Wanted(key), ", not ", value.Described(), help));
  }

  Faults* faults_;
  JobPlaces* places_;
  Job job_;
  bool files_given_ = false;
  FaultPlace files_place_;
};

}  // namespace

Job ReadJob(const YamlNode& root, Faults* faults, JobPlaces* places) {
  return JobReader(faults, places).Read(root);
}

}  // namespace phraseweld
