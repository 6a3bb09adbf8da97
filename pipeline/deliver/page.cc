#include "deliver/page.h"

#include <algorithm>
#include <array>
#include <iterator>
#include <string_view>

#include "absl/container/flat_hash_map.h"
#include "absl/strings/str_cat.h"
#include "absl/strings/str_format.h"
#include "base/hash.h"
#include "base/utf8.h"
#include "deliver/page_template.h"
#include "files/streams.h"

namespace phraseweld {
namespace {

// JSON that can stand in an HTML script element: without "<" nothing in it can end the element or
// open a comment (HTML Standard, "Restrictions for contents of script elements").
void AppendString(std::string_view text, std::string* out) {
  out->push_back('"');
  for (size_t at = 0; at < text.size();) {
    const size_t start = at;
    const auto point = NextCodePoint(text, &at);
    if (!point.has_value()) {
      out->append("\xEF\xBF\xBD");
    } else if (*point == '"' || *point == '\\') {
      out->push_back('\\');
      out->push_back(static_cast<char>(*point));
    } else if (*point < 0x20 || *point == '<') {
      absl::StrAppendFormat(out, "\\u%04x", static_cast<unsigned>(*point));
    } else {
      out->append(text.substr(start, at - start));
    }
  }
  out->push_back('"');
}

// Nine decimals at most, as everywhere in a run folder.
void AppendNumber(double value, std::string* out) {
  std::string digits = absl::StrFormat("%.9f", value);
  digits.erase(digits.find_last_not_of('0') + 1);
  if (digits.back() == '.') digits.pop_back();
  out->append(digits == "-0" ? "0" : digits);
}

void AppendNumber(uint64_t value, std::string* out) { absl::StrAppend(out, value); }
void AppendNumber(int64_t value, std::string* out) { absl::StrAppend(out, value); }
void AppendNumber(int value, std::string* out) { absl::StrAppend(out, value); }

void AppendKey(std::string_view key, std::string* out) {
  if (out->back() != '{') out->push_back(',');
  AppendString(key, out);
  out->push_back(':');
}

// "key":[...] with append(row, out) for each row.
template <typename Rows, typename Append>
void AppendColumn(std::string_view key, const Rows& rows, std::string* out, Append&& append) {
  AppendKey(key, out);
  out->push_back('[');
  for (auto row = std::begin(rows); row != std::end(rows); ++row) {
    if (row != std::begin(rows)) out->push_back(',');
    append(*row, out);
  }
  out->push_back(']');
}

template <typename Rows, typename Value>
void AppendNumbers(std::string_view key, const Rows& rows, std::string* out, Value&& value) {
  AppendColumn(key, rows, out,
               [&](const auto& row, std::string* to) { AppendNumber(value(row), to); });
}

template <typename Rows, typename Text>
void AppendStrings(std::string_view key, const Rows& rows, std::string* out, Text&& text) {
  AppendColumn(key, rows, out,
               [&](const auto& row, std::string* to) { AppendString(text(row), to); });
}

void AppendGates(const std::vector<std::pair<Quantity, double>>& gates, std::string* out) {
  out->push_back('{');
  for (const auto& [quantity, least] : gates) {
    AppendKey(QuantityName(quantity), out);
    AppendNumber(least, out);
  }
  out->push_back('}');
}

class Writer {
 public:
  explicit Writer(const PageData& data) : data_(data) {
    for (size_t row = 0; row < data.phrases.size(); ++row) {
      phrase_rows_.emplace(data.phrases[row].phrase, static_cast<int64_t>(row));
      for (const PageMerge& merge : data.phrases[row].made_of) merges_.push_back(&merge);
      for (const PageContext& context : data.phrases[row].contexts) contexts_.push_back(&context);
    }
    for (const PageNearMiss& miss : data.near_misses) {
      merges_.push_back(&miss.merge);
      for (const PageContext& context : miss.contexts) contexts_.push_back(&context);
    }
    for (const PageMerge* merge : merges_) {
      for (const auto& score : merge->scores) measured_[static_cast<size_t>(score.first)] = true;
    }
  }

  std::string Json() {
    std::string out = "{";
    AppendKey("program", &out);
    AppendString(data_.program, &out);
    AppendKey("job", &out);
    AppendString(data_.job, &out);
    AppendKey("corpus", &out);
    absl::StrAppend(&out, "{\"files\":", data_.files, ",\"bytes\":", data_.bytes,
                    ",\"documents\":", data_.documents, "}");
    AppendColumn("settings", data_.settings, &out, [](const auto& setting, std::string* to) {
      to->push_back('[');
      AppendString(setting.first, to);
      to->push_back(',');
      AppendString(setting.second, to);
      to->push_back(']');
    });
    AppendColumn("passes", data_.passes, &out, &Writer::AppendPass);
    AppendColumn("rulings", data_.rulings, &out, &Writer::AppendRuling);
    AppendPhrases(&out);
    AppendNearMisses(&out);
    AppendMerges(&out);
    AppendContexts(&out);
    AppendStrings("strings", strings_, &out, [](std::string_view text) { return text; });
    out.push_back('}');
    return out;
  }

 private:
  static void AppendPass(const PagePass& pass, std::string* out) {
    absl::StrAppend(out, "{\"pass\":", pass.pass, ",\"name\":");
    AppendString(pass.name, out);
    absl::StrAppend(out, ",\"tokens_in\":", pass.tokens_in, ",\"types_in\":", pass.types_in,
                    ",\"slots\":", pass.slots, ",\"slot_types\":", pass.slot_types,
                    ",\"rank_by\":");
    AppendString(QuantityName(pass.rank_by), out);
    AppendKey("accept", out);
    AppendGates(pass.accept, out);
    absl::StrAppend(out, ",\"accepted\":", pass.accepted, ",\"joined\":", pass.joined,
                    ",\"words_absorbed\":", pass.words_absorbed,
                    ",\"tokens_out\":", pass.tokens_out, "}");
  }

  static void AppendRuling(const PageRuling& ruling, std::string* out) {
    absl::StrAppend(out, "{\"always\":", ruling.always ? "true" : "false", ",\"phrase\":");
    AppendString(ruling.phrase, out);
    AppendKey("form", out);
    AppendString(ruling.form, out);
    AppendKey("reason", out);
    AppendString(ruling.reason, out);
    out->push_back('}');
  }

  void AppendPhrases(std::string* out) {
    const auto& rows = data_.phrases;
    AppendKey("phrases", out);
    out->push_back('{');
    AppendStrings("text", rows, out, [](const auto& row) { return std::string_view(row.phrase); });
    AppendStrings("surface", rows, out, [](const auto& row) {
      return row.surface == row.phrase ? std::string_view() : std::string_view(row.surface);
    });
    AppendNumbers("words", rows, out, [](const auto& row) { return row.words; });
    AppendNumbers("pass", rows, out, [](const auto& row) { return row.pass; });
    AppendNumbers("occurrences", rows, out, [](const auto& row) { return row.occurrences; });
    AppendNumbers("inside_longer", rows, out, [](const auto& row) { return row.inside_longer; });
    AppendNumbers("documents", rows, out, [](const auto& row) { return row.documents; });
    AppendNumbers("merges", rows, out,
                  [](const auto& row) { return uint64_t{row.made_of.size()}; });
    AppendNumbers("contexts", rows, out,
                  [](const auto& row) { return uint64_t{row.contexts.size()}; });
    out->push_back('}');
  }

  void AppendNearMisses(std::string* out) {
    const auto& rows = data_.near_misses;
    AppendKey("near_misses", out);
    out->push_back('{');
    AppendStrings("text", rows, out, [](const auto& row) { return std::string_view(row.phrase); });
    AppendNumbers("words", rows, out, [](const auto& row) { return row.words; });
    AppendStrings("failed", rows, out, [](const auto& row) { return QuantityName(row.failed); });
    AppendNumbers("contexts", rows, out,
                  [](const auto& row) { return uint64_t{row.contexts.size()}; });
    out->push_back('}');
  }

  void AppendMerges(std::string* out) {
    const auto& rows = merges_;
    AppendKey("merges", out);
    out->push_back('{');
    AppendNumbers("pass", rows, out, [](const auto* row) { return row->pass; });
    AppendNumbers("rank", rows, out, [](const auto* row) { return row->rank; });
    AppendNumbers("left", rows, out, [this](const auto* row) { return Side(row->left); });
    AppendNumbers("bridge", rows, out, [this](const auto* row) { return String(row->bridge); });
    AppendNumbers("right", rows, out, [this](const auto* row) { return Side(row->right); });
    AppendNumbers("n", rows, out, [](const auto* row) { return row->table.n; });
    AppendNumbers("left_slots", rows, out, [](const auto* row) { return row->table.left; });
    AppendNumbers("right_slots", rows, out, [](const auto* row) { return row->table.right; });
    AppendNumbers("slots", rows, out, [](const auto* row) { return row->table.total; });
    AppendNumbers("documents", rows, out, [](const auto* row) { return row->table.documents; });
    AppendNumbers("expected", rows, out, [](const auto* row) { return row->expected; });
    AppendNumbers("joined", rows, out, [](const auto* row) { return row->joined; });
    AppendNumbers("yielded", rows, out, [](const auto* row) { return row->yielded; });
    AppendKey("scores", out);
    out->push_back('{');
    for (size_t i = 0; i < measured_.size(); ++i) {
      if (!measured_[i]) continue;
      const auto quantity = static_cast<Quantity>(i);
      AppendColumn(QuantityName(quantity), rows, out, [quantity](const auto* row, std::string* to) {
        const auto score = std::find_if(row->scores.begin(), row->scores.end(),
                                        [=](const auto& entry) { return entry.first == quantity; });
        if (score == row->scores.end()) {
          to->append("null");
        } else {
          AppendNumber(score->second, to);
        }
      });
    }
    out->append("}}");
  }

  void AppendContexts(std::string* out) {
    const auto& rows = contexts_;
    AppendKey("contexts", out);
    out->push_back('{');
    AppendNumbers("document", rows, out, [this](const auto* row) { return String(row->document); });
    AppendNumbers("passage", rows, out, [this](const auto* row) { return String(row->passage); });
    AppendNumbers("byte", rows, out, [](const auto* row) { return row->byte; });
    AppendStrings("before", rows, out,
                  [](const auto* row) { return std::string_view(row->before); });
    AppendStrings("match", rows, out, [](const auto* row) { return std::string_view(row->match); });
    AppendStrings("after", rows, out, [](const auto* row) { return std::string_view(row->after); });
    out->push_back('}');
  }

  // The place of `text` among the strings.
  int64_t String(std::string_view text) {
    const auto [entry, added] = string_places_.emplace(text, static_cast<int64_t>(strings_.size()));
    if (added) strings_.push_back(text);
    return entry->second;
  }

  // A phrase's row, or -1 - the place among the strings.
  int64_t Side(std::string_view text) {
    const auto row = phrase_rows_.find(text);
    return row != phrase_rows_.end() ? row->second : -1 - String(text);
  }

  const PageData& data_;
  std::vector<const PageMerge*> merges_;
  std::vector<const PageContext*> contexts_;
  std::array<bool, kQuantities> measured_{};
  absl::flat_hash_map<std::string_view, int64_t> phrase_rows_;
  absl::flat_hash_map<std::string_view, int64_t> string_places_;
  std::vector<std::string_view> strings_;
};

}  // namespace

std::string RenderPage(const PageData& data) {
  std::string json = Writer(data).Json();
  Hasher hasher;
  hasher.Update(json);
  // The page keeps a reader's marks under this, so that no other run's page finds them.
  json.pop_back();
  absl::StrAppend(&json, ",\"hash\":\"", ToHex(hasher.Value()), "\"}");
  std::string page;
  page.reserve(kPageHead.size() + json.size() + kPageTail.size());
  page.append(kPageHead).append(json).append(kPageTail);
  return page;
}

}  // namespace phraseweld
