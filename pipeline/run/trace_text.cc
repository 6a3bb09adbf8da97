#include <algorithm>

#include "absl/strings/str_format.h"
#include "base/strings.h"
#include "base/units.h"
#include "base/utf8.h"
#include "run/text_table.h"
#include "run/trace.h"
#include "run/trace_reasons.h"

namespace phraseweld {
namespace {

std::string Quoted(std::string_view text) { return Concat("'", Shown(text, 1000), "'"); }

std::string Times(uint64_t times) {
  return times == 1 ? "once" : Concat(FormatCount(times), " times");
}

std::string Documents(uint64_t documents) {
  return Concat(FormatCount(documents), documents == 1 ? " document" : " documents");
}

// "'terms' 'of' 'service'": the sides and the bridge of a slot type.
std::string Sides(std::string_view left, std::string_view bridge, std::string_view right) {
  return Concat(Quoted(left), bridge.empty() ? " + " : Concat(" + ", Quoted(bridge), " + "),
                Quoted(right));
}

// Lines of a slot type's counts, each after `indent`.
void AppendCounts(std::string* out, const std::string& indent, const TraceSlot& slot) {
  AppendTo(out, indent, "n ", FormatCount(slot.table.n), ", left ", FormatCount(slot.table.left),
           ", right ", FormatCount(slot.table.right), " of ", FormatCount(slot.table.total),
           " slots; ", absl::StrFormat("%.3g", slot.expected), " expected; in ",
           Documents(slot.table.documents), "\n");
  std::vector<std::string> scores;
  for (const auto& [quantity, value] : slot.scores) {
    scores.push_back(Concat(QuantityName(quantity), " ", absl::StrFormat("%.2f", value)));
  }
  AppendTo(out, indent, Join(scores, ", "), "\n");
}

void AppendGates(std::string* out, const std::string& indent, const TraceSlot& slot) {
  std::vector<std::string> gates;
  for (const TraceGate& gate : slot.gates) gates.push_back(GateWords(gate));
  if (!gates.empty()) AppendTo(out, indent, "gates: ", Join(gates, ", "), "\n");
}

void AppendNode(std::string* out, const TraceNode& node, const std::string& first,
                const std::string& rest) {
  AppendTo(out, first, Shown(node.text, 1000));
  if (!node.made) {
    *out += node.steps.empty() ? "  (a word)\n" : "\n";
  } else {
    AppendTo(out, "  (pass ", node.made->pass, ", ", Times(node.made->made()), ")",
             node.told_above ? "  see above" : "", "\n");
  }
  if (node.ruled > 0) {
    AppendTo(out, rest, "ruled always, joined ", Times(node.ruled),
             node.made->reason.empty() ? "" : Concat(": ", Shown(node.made->reason, 1000)), "\n");
  }
  for (size_t i = 0; i < node.steps.size(); ++i) {
    const TraceSlot& slot = node.steps[i].slot;
    const bool last = i + 1 == node.steps.size();
    AppendTo(out, rest, last ? "└─ " : "├─ ", "pass ", slot.pass, " (", slot.pass_name, "), rank ",
             FormatCount(slot.rank), ": ", Sides(slot.left, slot.bridge, slot.right), "\n");
    const std::string below = Concat(rest, last ? "   " : "│  ");
    const std::string beside = Concat(below, "│  ");
    AppendCounts(out, beside, slot);
    AppendGates(out, beside, slot);
    AppendTo(out, beside, "joined ", Times(slot.joined),
             slot.yielded > 0 ? Concat(", ", YieldWords(slot)) : "", "\n");
    for (size_t side = 0; side < node.steps[i].sides.size(); ++side) {
      const bool last_side = side + 1 == node.steps[i].sides.size();
      AppendNode(out, node.steps[i].sides[side], Concat(below, last_side ? "└─ " : "├─ "),
                 Concat(below, last_side ? "   " : "│  "));
    }
  }
}

void AppendParts(std::string* out, const Trace& trace) {
  AppendTitle(out, "Parts");
  for (const TracePart& part : trace.parts) {
    AppendTo(out, "  ", Quoted(part.text), ": ");
    if (part.word) {
      *out += part.function_word ? "a function word\n"
              : trace.counted    ? Concat("a word, ", Times(part.times), "\n")
                                 : "a word\n";
    } else if (part.pass) {
      AppendTo(out, "made in pass ", *part.pass, ", ", Times(part.times), "\n");
    } else {
      *out += "not made\n";
    }
  }
}

// Whether a pass has nothing to tell that the pass before did not, but for slightly other scores.
bool IsLikeTheLast(const TraceSlot& slot, const TraceSlot& last) {
  if (slot.pass_name != last.pass_name || slot.table.n != last.table.n ||
      slot.origin != last.origin || slot.gates.size() != last.gates.size()) {
    return false;
  }
  for (size_t i = 0; i < slot.gates.size(); ++i) {
    if (slot.gates[i].met() != last.gates[i].met()) return false;
  }
  return slot.origin != TraceOrigin::kAccepted;
}

void AppendSplit(std::string* out, const TraceSplit& split) {
  AppendTo(out, "  ", Sides(split.left, split.bridge, split.right), "\n");
  if (!split.why.empty()) *out += WrappedText(Concat("out: ", split.why), 4);
  for (size_t i = 0; i < split.passes.size();) {
    const TraceSlot& slot = split.passes[i];
    size_t end = i + 1;
    while (end < split.passes.size() && IsLikeTheLast(split.passes[end], slot)) ++end;
    const int last_pass = split.passes[end - 1].pass;
    AppendTo(out, "    pass ", slot.pass,
             end == i + 1 ? "" : Concat(", and much the same up to pass ", last_pass), " (",
             Shown(slot.pass_name, 60), ")");
    if (slot.origin == TraceOrigin::kAccepted) AppendTo(out, ", accepted, rank ", slot.rank);
    if (slot.origin == TraceOrigin::kNearMiss) AppendTo(out, ", near miss ", slot.rank);
    *out += "\n";
    if (slot.table.n > 0) AppendCounts(out, "      ", slot);
    if (!slot.why.empty()) *out += WrappedText(Concat("out: ", slot.why), 6);
    i = end;
  }
}

// The text around a match, without line ends, in one line.
void AppendContext(std::string* out, const PhraseContext& context) {
  const auto flat = [](std::string text) {
    std::replace(text.begin(), text.end(), '\n', ' ');
    std::replace(text.begin(), text.end(), '\r', ' ');
    std::replace(text.begin(), text.end(), '\t', ' ');
    return Shown(text, 1000);
  };
  AppendTo(out, "  ", Shown(context.document, 60),
           context.passage.empty() ? "" : Concat(", ", Shown(context.passage, 60)), ", byte ",
           context.byte, "\n", "    ", flat(context.before), "[", flat(context.match), "]",
           flat(context.after), "\n");
}

void AppendFound(std::string* out, const Trace& trace) {
  const PhraseFindings& found = trace.found;
  if (trace.counted) {
    AppendTitle(out, "In the source");
    AppendTo(out, "  ", Times(found.occurrences), " as neighbours, in ", Documents(found.documents),
             "; ", Times(found.across_breaks), " with a break between\n");
    if (found.across_breaks > 0) *out += WrappedText(CrossingWords(found), 2);
    constexpr size_t kMostEnds = 5;
    for (size_t i = 0; i < trace.ends.size() && i < kMostEnds; ++i) {
      AppendTo(out, "  ", i == 0 ? "ended up as " : "            ", Quoted(trace.ends[i].first),
               " ", Times(trace.ends[i].second), "\n");
    }
    if (trace.ends.size() > kMostEnds) {
      AppendTo(out, "              and in ", trace.ends.size() - kMostEnds, " more ways\n");
    }
  }
  const bool broken_alone = found.contexts.empty();
  const auto& contexts = broken_alone ? found.broken_contexts : found.contexts;
  if (contexts.empty()) return;
  AppendTitle(out, broken_alone ? "Contexts, with a break inside" : "Contexts");
  for (const PhraseContext& context : contexts) AppendContext(out, context);
}

}  // namespace

std::string TraceText(const Trace& trace) {
  std::string out = Concat(Quoted(trace.phrase), trace.made ? "" : " is not among the phrases of ",
                           trace.made ? "" : Shown(trace.run, 1000), "\n");
  if (!trace.verdict.empty()) {
    out += WrappedText(Concat(trace.made ? "" : "why: ", trace.verdict), 2);
  }
  if (!trace.remedy.empty()) out += WrappedText(Concat("to get it in: ", trace.remedy), 2);
  for (const std::string& note : trace.notes) out += WrappedText(Concat("note: ", note), 2);
  if (trace.made) {
    AppendTitle(&out, "How it was made");
    AppendNode(&out, trace.tree, "  ", "  ");
  } else {
    AppendParts(&out, trace);
    if (!trace.splits.empty()) AppendTitle(&out, "Ways to put it together");
    for (const TraceSplit& split : trace.splits) AppendSplit(&out, split);
  }
  AppendFound(&out, trace);
  return out;
}

}  // namespace phraseweld
