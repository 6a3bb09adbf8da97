// What is made from the table of keys: the resolved job, its settings one by one, the reference.

#include <string>
#include <string_view>
#include <utility>
#include <vector>

#include "absl/strings/ascii.h"
#include "base/strings.h"
#include "base/units.h"
#include "config/job_file.h"
#include "config/keys.h"

namespace phraseweld {
namespace {

// With a backslash before each of the characters `special`.
std::string Escaped(std::string_view text, std::string_view special) {
  std::string escaped;
  for (const char c : text) {
    if (special.find(c) != std::string_view::npos) escaped.push_back('\\');
    escaped.push_back(c);
  }
  return escaped;
}

// YAML's double-quoted style. Texts hold no control characters.
std::string Quoted(std::string_view text) { return Concat("\"", Escaped(text, "\\\""), "\""); }

// Quoted unless every YAML reader takes it for a text as it is.
std::string TextYaml(std::string_view text) {
  constexpr std::string_view kOtherMeanings[] = {"true", "false", "null", "yes", "no",
                                                 "on",   "off",   "y",    "n"};
  bool plain = !text.empty() && absl::ascii_isalpha(static_cast<unsigned char>(text[0]));
  for (const char c : text) {
    plain = plain && (absl::ascii_isalnum(static_cast<unsigned char>(c)) ||
                      Contains("_./-", std::string_view(&c, 1)));
  }
  for (const std::string_view other : kOtherMeanings) {
    plain = plain && AsciiLower(text) != other;
  }
  return plain ? std::string(text) : Quoted(text);
}

std::string ValueYaml(const Key& key, const KeyField& field) {
  switch (key.kind) {
    case KeyKind::kWhole:
      return Concat(*std::get<int*>(field));
    case KeyKind::kCount: {
      const auto& count = *std::get<std::optional<uint64_t>*>(field);
      return count.has_value() ? Concat(*count) : "all";
    }
    case KeyKind::kSize:
      return FormatBytes(*std::get<uint64_t*>(field));
    case KeyKind::kTruth:
      return *std::get<bool*>(field) ? "true" : "false";
    case KeyKind::kChoice:
      return std::string(key.choices[static_cast<size_t>(std::get<ChoiceField>(field).get())]);
    case KeyKind::kMeasure:
      return std::string(QuantityName(*std::get<Quantity*>(field)));
    case KeyKind::kText: {
      const std::string& text = *std::get<std::string*>(field);
      return text.empty() && !key.unset.empty() ? std::string(key.unset) : TextYaml(text);
    }
    case KeyKind::kTexts: {
      std::vector<std::string> texts;
      for (const std::string& text : *std::get<std::vector<std::string>*>(field)) {
        texts.push_back(TextYaml(text));
      }
      return Concat("[", Join(texts, ", "), "]");
    }
    case KeyKind::kGates: {
      std::vector<std::string> gates;
      for (const Gate& gate : *std::get<std::vector<Gate>*>(field)) {
        gates.push_back(Concat(QuantityName(gate.quantity), ": ", FormatNumber(gate.least)));
      }
      return Concat("{", Join(gates, ", "), "}");
    }
  }
  return "";
}

// Readers of Markdown end a cell at a bar, in code too.
std::string Cell(std::string_view text) { return Escaped(text, "|"); }

std::string ValuesCell(const Key& key) {
  if (key.kind == KeyKind::kChoice) {
    return Concat("`", Join(key.choices, "`, `"), "`");
  }
  return Cell(Wanted(key));
}

std::string DefaultCell(const Key& key) {
  if (!key.default_words.empty()) return std::string(key.default_words);
  return Concat("`", key.default_value, "`");
}

}  // namespace

std::string WriteJobYaml(const Job& job) {
  Job copy = job;  // the table hands out places to write to
  std::string text;
  std::string_view section;
  const auto append_passes = [&copy, &text] {
    AppendTo(&text, "passes:\n");
    for (PassOptions& pass : copy.passes) {
      std::string_view lead = "  - ";
      for (const Key& key : JobKeys()) {
        if (!key.path.starts_with(kPassPrefix)) continue;
        AppendTo(&text, lead, key.path.substr(kPassPrefix.size()), ": ",
                 ValueYaml(key, key.field(copy, &pass)), "\n");
        lead = "    ";
      }
    }
  };
  for (const Key& key : JobKeys()) {
    const size_t dot = key.path.find('.');
    const std::string_view key_section =
        dot == std::string_view::npos ? std::string_view() : key.path.substr(0, dot);
    const bool starts_section = key_section != section;
    section = key_section;
    if (key.path.starts_with(kPassPrefix)) {
      if (starts_section) append_passes();
      continue;
    }
    if (starts_section) AppendTo(&text, section, ":\n");
    AppendTo(&text, section.empty() ? "" : "  ",
             section.empty() ? key.path : key.path.substr(dot + 1), ": ",
             ValueYaml(key, key.field(copy, nullptr)), "\n");
  }
  return text;
}

std::vector<std::pair<std::string, std::string>> JobSettings(const Job& job) {
  Job copy = job;
  std::vector<std::pair<std::string, std::string>> settings;
  const auto append = [&settings](const Key& key, const std::string& path, const KeyField& field) {
    if (key.kind != KeyKind::kGates) {
      settings.emplace_back(path, ValueYaml(key, field));
      return;
    }
    for (const Gate& gate : *std::get<std::vector<Gate>*>(field)) {
      settings.emplace_back(Concat(path, ".", QuantityName(gate.quantity)),
                            FormatNumber(gate.least));
    }
  };
  bool passes_done = false;
  for (const Key& key : JobKeys()) {
    if (!key.path.starts_with(kPassPrefix)) {
      append(key, std::string(key.path), key.field(copy, nullptr));
      continue;
    }
    if (passes_done) continue;
    passes_done = true;
    for (size_t i = 0; i < copy.passes.size(); ++i) {
      for (const Key& pass_key : JobKeys()) {
        if (!pass_key.path.starts_with(kPassPrefix)) continue;
        append(pass_key, Concat("passes.", i, ".", pass_key.path.substr(kPassPrefix.size())),
               pass_key.field(copy, &copy.passes[i]));
      }
    }
  }
  return settings;
}

std::string JobReferenceMarkdown() {
  std::string text = "| key | value | default | meaning |\n|---|---|---|---|\n";
  for (const Key& key : JobKeys()) {
    AppendTo(&text, "| `", key.path, "` | ", ValuesCell(key), " | ", DefaultCell(key), " | ",
             Cell(key.meaning), " |\n");
  }
  return text;
}

}  // namespace phraseweld
