#include "base/json.h"
#include "base/strings.h"
#include "run/trace.h"
#include "score/measures.h"

namespace phraseweld {
namespace {

void AppendString(std::string* out, std::string_view key, std::string_view text) {
  AppendJsonKey(out, key);
  AppendJsonString(out, text);
}

template <typename Number>
void AppendCount(std::string* out, std::string_view key, Number value) {
  AppendJsonKey(out, key);
  AppendTo(out, value);
}

void AppendBool(std::string* out, std::string_view key, bool value) {
  AppendJsonKey(out, key);
  *out += value ? "true" : "false";
}

// "key":[...] with append(item) for each.
template <typename Items, typename Append>
void AppendList(std::string* out, std::string_view key, const Items& items, Append append) {
  AppendJsonKey(out, key);
  *out += '[';
  bool first = true;
  for (const auto& item : items) {
    if (!first) *out += ',';
    first = false;
    append(item);
  }
  *out += ']';
}

void AppendTexts(std::string* out, std::string_view key, const TextCounts& counts,
                 std::string_view name) {
  AppendList(out, key, counts, [&](const auto& count) {
    *out += '{';
    AppendString(out, name, count.first);
    AppendCount(out, "times", count.second);
    *out += '}';
  });
}

void AppendSlot(std::string* out, const TraceSlot& slot) {
  AppendString(out, "origin", kTraceOriginNames[static_cast<size_t>(slot.origin)]);
  AppendCount(out, "pass", slot.pass);
  AppendString(out, "name", slot.pass_name);
  if (slot.rank > 0) AppendCount(out, "rank", slot.rank);
  AppendString(out, "left", slot.left);
  AppendString(out, "bridge", slot.bridge);
  AppendString(out, "right", slot.right);
  AppendCount(out, "n", slot.table.n);
  AppendCount(out, "left_slots", slot.table.left);
  AppendCount(out, "right_slots", slot.table.right);
  AppendCount(out, "slots", slot.table.total);
  AppendJsonKey(out, "expected");
  *out += FormatScore(slot.expected);
  AppendCount(out, "documents", slot.table.documents);
  AppendJsonKey(out, "scores");
  *out += '{';
  for (const auto& [quantity, value] : slot.scores) {
    AppendJsonKey(out, QuantityName(quantity));
    *out += FormatScore(value);
  }
  *out += '}';
  AppendList(out, "gates", slot.gates, [out](const TraceGate& gate) {
    *out += '{';
    AppendString(out, "on", QuantityName(gate.quantity));
    AppendJsonKey(out, "value");
    *out += FormatScore(gate.value);
    AppendJsonKey(out, "least");
    *out += FormatScore(gate.least);
    AppendBool(out, "met", gate.met());
    *out += '}';
  });
  AppendCount(out, "joined", slot.joined);
  AppendCount(out, "yielded", slot.yielded);
  AppendTexts(out, "yielded_to", slot.yielded_to, "phrase");
  AppendString(out, "why", slot.why);
}

void AppendNode(std::string* out, const TraceNode& node) {
  *out += '{';
  AppendString(out, "text", node.text);
  AppendBool(out, "phrase", node.made.has_value() || !node.steps.empty());
  if (node.made) {
    AppendCount(out, "pass", node.made->pass);
    AppendCount(out, "occurrences", node.made->occurrences);
    AppendCount(out, "inside_longer", node.made->inside_longer);
    AppendCount(out, "documents", node.made->documents);
    AppendString(out, "surface", node.made->surface);
    if (node.ruled > 0) AppendCount(out, "ruled", node.ruled);
    if (!node.made->reason.empty()) AppendString(out, "reason", node.made->reason);
  }
  AppendBool(out, "told_above", node.told_above);
  AppendList(out, "made_of", node.steps, [out](const TraceNode::Step& step) {
    *out += '{';
    AppendSlot(out, step.slot);
    AppendList(out, "sides", step.sides, [out](const TraceNode& side) { AppendNode(out, side); });
    *out += '}';
  });
  *out += '}';
}

void AppendContexts(std::string* out, std::string_view key,
                    const std::vector<PhraseContext>& contexts) {
  AppendList(out, key, contexts, [out](const PhraseContext& context) {
    *out += '{';
    AppendString(out, "document", context.document);
    AppendString(out, "passage", context.passage);
    AppendCount(out, "byte", context.byte);
    AppendString(out, "before", context.before);
    AppendString(out, "match", context.match);
    AppendString(out, "after", context.after);
    *out += '}';
  });
}

}  // namespace

std::string TraceJson(const Trace& trace) {
  std::string out = "{";
  AppendString(&out, "run", trace.run);
  AppendString(&out, "phrase", trace.phrase);
  AppendCount(&out, "words", trace.words);
  AppendBool(&out, "made", trace.made);
  AppendString(&out, "verdict", trace.verdict);
  AppendString(&out, "remedy", trace.remedy);
  if (trace.made) {
    AppendJsonKey(&out, "derivation");
    AppendNode(&out, trace.tree);
  } else {
    AppendList(&out, "parts", trace.parts, [&out](const TracePart& part) {
      out += '{';
      AppendString(&out, "text", part.text);
      AppendBool(&out, "word", part.word);
      if (part.word) {
        AppendBool(&out, "function_word", part.function_word);
      } else {
        AppendBool(&out, "made", part.pass.has_value());
      }
      if (part.pass) AppendCount(&out, "pass", *part.pass);
      if (!part.function_word) AppendCount(&out, "times", part.times);
      out += '}';
    });
    AppendList(&out, "splits", trace.splits, [&out](const TraceSplit& split) {
      out += '{';
      AppendString(&out, "left", split.left);
      AppendString(&out, "bridge", split.bridge);
      AppendString(&out, "right", split.right);
      AppendString(&out, "why", split.why);
      AppendList(&out, "passes", split.passes, [&out](const TraceSlot& slot) {
        out += '{';
        AppendSlot(&out, slot);
        out += '}';
      });
      out += '}';
    });
  }
  if (trace.counted) {
    AppendCount(&out, "source_occurrences", trace.found.occurrences);
    AppendCount(&out, "source_documents", trace.found.documents);
    AppendCount(&out, "across_breaks", trace.found.across_breaks);
    AppendTexts(&out, "breaks", trace.found.breaks, "break");
    AppendTexts(&out, "ends_as", trace.ends, "tokens");
  }
  AppendContexts(&out, "contexts", trace.found.contexts);
  AppendContexts(&out, "contexts_with_break", trace.found.broken_contexts);
  AppendList(&out, "notes", trace.notes,
             [&out](const std::string& note) { AppendJsonString(&out, note); });
  return out + "}\n";
}

}  // namespace phraseweld
