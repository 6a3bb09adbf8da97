#include "run/trace_reasons.h"

#include <algorithm>
#include <cmath>
#include <cstdlib>
#include <optional>

#include "absl/strings/str_format.h"
#include "base/strings.h"
#include "base/units.h"

namespace phraseweld {
namespace {

constexpr int kMostDecimals = 9;  // as the audit has them

std::string GateValue(Quantity quantity, double value) {
  std::string text = FormatNumber(value);
  if (IsMeasure(quantity) && !Contains(text, ".")) text += ".0";
  return text;
}

std::vector<TraceGate> FailedGates(const TraceSlot& slot) {
  std::vector<TraceGate> failed;
  for (const TraceGate& gate : slot.gates) {
    if (!gate.met()) failed.push_back(gate);
  }
  return failed;
}

// How far a slot type was from being joined: gates that it failed, and by what share of them.
std::pair<size_t, double> Farness(const TraceSlot& slot) {
  constexpr size_t kNowhere = 1000;  // gates; more than there are
  if (slot.table.n == 0) return {kNowhere, 0};
  if (slot.origin == TraceOrigin::kAccepted) return {0, 0};
  double share = 0;
  const std::vector<TraceGate> failed = FailedGates(slot);
  for (const TraceGate& gate : failed) {
    share += (gate.least - gate.value) / std::max(std::abs(gate.least), 1e-9);
  }
  return {failed.size(), share};
}

// Of all slot types in all passes, the one that came nearest to being joined: by the gates failed
// and then by n, so that the earliest pass speaks; or by how much the gates would have to change.
const TraceSlot* Nearest(const Trace& trace, bool by_share) {
  const TraceSlot* nearest = nullptr;
  const auto nearer = [by_share](const TraceSlot& a, const TraceSlot& b) {
    const auto [failed_a, share_a] = Farness(a);
    const auto [failed_b, share_b] = Farness(b);
    if (failed_a != failed_b) return failed_a < failed_b;
    return by_share ? share_a < share_b : a.table.n > b.table.n;
  };
  for (const TraceSplit& split : trace.splits) {
    for (const TraceSlot& slot : split.passes) {
      if (nearest == nullptr || nearer(slot, *nearest)) nearest = &slot;
    }
  }
  return nearest;
}

// "stands inside 'circuit breaker panel' 9 of 9 times", where it mostly does; else "".
std::string InsideWords(const Trace& trace) {
  if (trace.ends.empty()) return "";
  const auto& [text, times] = trace.ends[0];
  if (Contains(text, " | ") || text == trace.phrase || 2 * times < trace.found.occurrences) {
    return "";
  }
  return Concat("stands inside '", text, "' ", times, " of ", trace.found.occurrences, " times");
}

// What the gates that a slot type failed would have to be, as settings of its pass.
std::string LowerGates(const TraceSlot& slot) {
  std::vector<std::string> gates;
  for (const TraceGate& gate : FailedGates(slot)) {
    const double least = IsMeasure(gate.quantity) ? std::floor(gate.value * 100) / 100 : gate.value;
    gates.push_back(Concat(QuantityName(gate.quantity), ": ", GateValue(gate.quantity, least)));
  }
  return Join(gates, ", ");
}

}  // namespace

std::string GateWords(const TraceGate& gate) {
  const std::string least = GateValue(gate.quantity, gate.least);
  const char* const sign = gate.met() ? " >= " : " < ";
  if (!IsMeasure(gate.quantity)) {
    return Concat(QuantityName(gate.quantity), " ", FormatNumber(gate.value), sign, least);
  }
  std::string value;
  for (int decimals = 2; decimals <= kMostDecimals; ++decimals) {
    value = absl::StrFormat("%.*f", decimals, gate.value);
    if ((std::strtod(value.c_str(), nullptr) >= gate.least) == gate.met()) break;
  }
  return Concat(QuantityName(gate.quantity), " ", value, sign, least);
}

std::string YieldWords(const TraceSlot& slot) {
  std::string words = Concat("yielded ", slot.yielded, " of ", slot.table.n, " times");
  if (slot.yielded_to.empty()) return words;
  AppendTo(&words, " to '", slot.yielded_to[0].first, "'");
  if (slot.yielded_to.size() == 1) return words;
  AppendTo(&words, " (", slot.yielded_to[0].second, ")");
  constexpr size_t kMostNamed = 3;
  for (size_t i = 1; i < slot.yielded_to.size() && i < kMostNamed; ++i) {
    AppendTo(&words, ", '", slot.yielded_to[i].first, "' (", slot.yielded_to[i].second, ")");
  }
  if (slot.yielded_to.size() > kMostNamed) {
    AppendTo(&words, " and ", slot.yielded_to.size() - kMostNamed, " more");
  }
  return words;
}

std::string CrossingWords(const PhraseFindings& found) {
  const uint64_t all = found.occurrences + found.across_breaks;
  if (found.breaks.empty()) return "";
  std::string words =
      Concat("crosses ", found.breaks[0].first, " ", found.breaks[0].second, " of ", all, " times");
  for (size_t i = 1; i < found.breaks.size() && i < 3; ++i) {
    AppendTo(&words, ", ", found.breaks[i].first, " ", found.breaks[i].second);
  }
  return words;
}

std::string WhyNot(const TraceSlot& slot, const PassOptions& options) {
  if (slot.joined > 0) return "";
  if (slot.table.n == 0) {
    return Concat("its sides stand together nowhere in pass ", slot.pass);
  }
  if (slot.origin == TraceOrigin::kAccepted) {
    return Concat(YieldWords(slot), " in pass ", slot.pass);
  }
  const std::vector<TraceGate> failed = FailedGates(slot);
  if (failed.empty()) {
    return options.take ? Concat("met the gates of pass ", slot.pass,
                                 ", but is not among its best ", *options.take, " (take)")
                        : "";
  }
  std::string why = Concat(GateWords(failed[0]), " in pass ", slot.pass);
  for (size_t i = 1; i < failed.size(); ++i) {
    AppendTo(&why, i == 1 ? "; also " : ", ", GateWords(failed[i]));
  }
  return why;
}

void JudgeAbsence(const FinishedRun& run, const std::vector<std::string>& forms,
                  const Ruling* never, const std::string& absent, Trace* trace) {
  const PhraseFindings& found = trace->found;
  const bool can_be_ruled = !trace->counted || found.occurrences > 0;
  const auto or_rule = [&](std::string remedy) {
    if (!can_be_ruled) return remedy;
    return remedy.empty() ? Concat("rule it always") : Concat(remedy, ", or rule it always");
  };
  if (never != nullptr) {
    trace->verdict = Concat("ruled never", never->reason.empty() ? "" : ": ", never->reason);
    trace->remedy = Concat("take the ruling in line ", never->line, " of ", never->file, " out");
    return;
  }
  if (!absent.empty()) {
    trace->verdict = Concat("the corpus has no word ", absent);
    return;
  }
  if (trace->counted && found.occurrences == 0) {
    if (found.across_breaks == 0) {
      trace->verdict = "its words never follow each other in the corpus";
      return;
    }
    trace->verdict = CrossingWords(found);
    if (found.breaks[0].first == "a hyphen" && run.job.words.hyphens == Hyphens::kSeparate) {
      trace->remedy = "set words.hyphens: join";
    }
    return;
  }
  std::string rule;
  bool all_ruled_out = !trace->splits.empty();
  for (const TraceSplit& split : trace->splits) {
    if (split.why.empty()) all_ruled_out = false;
    if (!Contains(rule, split.why)) AppendTo(&rule, rule.empty() ? "" : "; ", split.why);
  }
  if (trace->splits.empty() || all_ruled_out) {
    // What stands against every way of putting it together.
    trace->verdict = rule;
    if (const std::string inside = InsideWords(*trace); !inside.empty() && !rule.empty()) {
      AppendTo(&trace->verdict, "; ", inside);
    }
    const int longest = run.job.phrases.longest;
    if (forms.size() > static_cast<size_t>(longest)) {
      trace->remedy = or_rule(Concat("set phrases.longest: ", forms.size()));
    } else if (Contains(rule, "number")) {
      trace->remedy = or_rule("set words.numbers: anywhere");
    } else if (Contains(rule, "no pass made")) {
      trace->remedy = or_rule("let one of those parts in first (trace it to see why it is out)");
    } else {
      trace->remedy = or_rule("");
    }
    return;
  }
  const TraceSlot* const nearest = Nearest(*trace, false);
  if (nearest == nullptr || nearest->why.empty()) return;
  trace->verdict = nearest->why;
  if (nearest->table.n == 0) {
    if (const std::string inside = InsideWords(*trace); !inside.empty()) trace->verdict = inside;
    trace->remedy = or_rule("");
  } else if (nearest->origin == TraceOrigin::kAccepted) {
    trace->remedy = or_rule(nearest->yielded_to.empty()
                                ? ""
                                : Concat("rule '", nearest->yielded_to[0].first, "' never"));
  } else if (!FailedGates(*nearest).empty()) {
    const TraceSlot& easiest = *Nearest(*trace, true);
    trace->remedy = or_rule(Concat("lower pass ", easiest.pass, " to ", LowerGates(easiest)));
    if (found.across_breaks > 0) AppendTo(&trace->verdict, "; ", CrossingWords(found));
  } else {
    trace->remedy = or_rule("let the pass take more");
  }
}

}  // namespace phraseweld
