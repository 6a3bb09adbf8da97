#include "base/json.h"
#include "base/strings.h"
#include "run/trace.h"
#include "score/measures.h"

namespace phraseweld {
namespace {

void AppendBool(std::string* out, std::string_view key, bool value) {
  AppendJsonKey(out, key);
  *out += value ? "true" : "false";
}

void AppendTexts(std::string* out, std::string_view key, const TextCounts& counts,
                 std::string_view name) {
  AppendJsonList(out, key, counts, [&](const auto& count) {
    *out += '{';
    AppendJsonString(out, name, count.first);
    AppendJsonCount(out, "times", count.second);
    *out += '}';
  });
}

void AppendSlot(std::string* out, const TraceSlot& slot) {
  AppendJsonString(out, "origin", kTraceOriginNames[static_cast<size_t>(slot.origin)]);
  AppendJsonCount(out, "pass", slot.pass);
  AppendJsonString(out, "name", slot.pass_name);
  if (slot.rank > 0) AppendJsonCount(out, "rank", slot.rank);
  AppendJsonString(out, "left", slot.left);
  AppendJsonString(out, "bridge", slot.bridge);
  AppendJsonString(out, "right", slot.right);
  AppendJsonCount(out, "n", slot.table.n);
  AppendJsonCount(out, "left_slots", slot.table.left);
  AppendJsonCount(out, "right_slots", slot.table.right);
  AppendJsonCount(out, "slots", slot.table.total);
  AppendJsonKey(out, "expected");
  *out += FormatScore(slot.expected);
  AppendJsonCount(out, "documents", slot.table.documents);
  AppendJsonKey(out, "scores");
  *out += '{';
  for (const auto& [quantity, value] : slot.scores) {
    AppendJsonKey(out, QuantityName(quantity));
    *out += FormatScore(value);
  }
  *out += '}';
  AppendJsonList(out, "gates", slot.gates, [out](const TraceGate& gate) {
    *out += '{';
    AppendJsonString(out, "on", QuantityName(gate.quantity));
    AppendJsonKey(out, "value");
    *out += FormatScore(gate.value);
    AppendJsonKey(out, "least");
    *out += FormatScore(gate.least);
    AppendBool(out, "met", gate.met());
    *out += '}';
  });
  AppendJsonCount(out, "joined", slot.joined);
  AppendJsonCount(out, "yielded", slot.yielded);
  AppendTexts(out, "yielded_to", slot.yielded_to, "phrase");
  AppendJsonString(out, "why", slot.why);
}

void AppendNode(std::string* out, const TraceNode& node) {
  *out += '{';
  AppendJsonString(out, "text", node.text);
  AppendBool(out, "phrase", node.made.has_value() || !node.steps.empty());
  if (node.made) {
    AppendJsonCount(out, "pass", node.made->pass);
    AppendJsonCount(out, "occurrences", node.made->occurrences);
    AppendJsonCount(out, "inside_longer", node.made->inside_longer);
    AppendJsonCount(out, "documents", node.made->documents);
    AppendJsonString(out, "surface", node.made->surface);
    if (node.ruled > 0) AppendJsonCount(out, "ruled", node.ruled);
    if (!node.made->reason.empty()) AppendJsonString(out, "reason", node.made->reason);
  }
  AppendBool(out, "told_above", node.told_above);
  AppendJsonList(out, "made_of", node.steps, [out](const TraceNode::Step& step) {
    *out += '{';
    AppendSlot(out, step.slot);
    AppendJsonList(out, "sides", step.sides,
                   [out](const TraceNode& side) { AppendNode(out, side); });
    *out += '}';
  });
  *out += '}';
}

void AppendContexts(std::string* out, std::string_view key,
                    const std::vector<PhraseContext>& contexts) {
  AppendJsonList(out, key, contexts, [out](const PhraseContext& context) {
    *out += '{';
    AppendJsonString(out, "document", context.document);
    AppendJsonString(out, "passage", context.passage);
    AppendJsonCount(out, "byte", context.byte);
    AppendJsonString(out, "before", context.before);
    AppendJsonString(out, "match", context.match);
    AppendJsonString(out, "after", context.after);
    *out += '}';
  });
}

}  // namespace

std::string TraceJson(const Trace& trace) {
  std::string out = "{";
  AppendJsonString(&out, "run", trace.run);
  AppendJsonString(&out, "phrase", trace.phrase);
  AppendJsonCount(&out, "words", trace.words);
  AppendBool(&out, "made", trace.made);
  AppendJsonString(&out, "verdict", trace.verdict);
  AppendJsonString(&out, "remedy", trace.remedy);
  if (trace.made) {
    AppendJsonKey(&out, "derivation");
    AppendNode(&out, trace.tree);
  } else {
    AppendJsonList(&out, "parts", trace.parts, [&out](const TracePart& part) {
      out += '{';
      AppendJsonString(&out, "text", part.text);
      AppendBool(&out, "word", part.word);
      if (part.word) {
        AppendBool(&out, "function_word", part.function_word);
      } else {
        AppendBool(&out, "made", part.pass.has_value());
      }
      if (part.pass) AppendJsonCount(&out, "pass", *part.pass);
      if (!part.function_word) AppendJsonCount(&out, "times", part.times);
      out += '}';
    });
    AppendJsonList(&out, "splits", trace.splits, [&out](const TraceSplit& split) {
      out += '{';
      AppendJsonString(&out, "left", split.left);
      AppendJsonString(&out, "bridge", split.bridge);
      AppendJsonString(&out, "right", split.right);
      AppendJsonString(&out, "why", split.why);
      AppendJsonList(&out, "passes", split.passes, [&out](const TraceSlot& slot) {
        out += '{';
        AppendSlot(&out, slot);
        out += '}';
      });
      out += '}';
    });
  }
  if (trace.counted) {
    AppendJsonCount(&out, "source_occurrences", trace.found.occurrences);
    AppendJsonCount(&out, "source_documents", trace.found.documents);
    AppendJsonCount(&out, "across_breaks", trace.found.across_breaks);
    AppendTexts(&out, "breaks", trace.found.breaks, "break");
    AppendTexts(&out, "ends_as", trace.ends, "tokens");
  }
  AppendContexts(&out, "contexts", trace.found.contexts);
  AppendContexts(&out, "contexts_with_break", trace.found.broken_contexts);
  AppendJsonList(&out, "notes", trace.notes,
                 [&out](const std::string& note) { AppendJsonString(&out, note); });
  return out + "}\n";
}

}  // namespace phraseweld
