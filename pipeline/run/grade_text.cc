#include <algorithm>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "base/json.h"
#include "base/strings.h"
#include "base/units.h"
#include "run/grade.h"
#include "run/ranking_quality.h"
#include "run/text_table.h"
#include "score/measures.h"

namespace phraseweld {
namespace {

constexpr std::string_view kNothing = "–";

std::string ShareOf(uint64_t part, uint64_t whole) {
  return whole == 0 ? std::string(kNothing) : Share(Ratio(part, whole));
}

std::optional<GradeCutoff> At(const std::vector<GradeCutoff>& cutoffs, uint64_t best) {
  for (const GradeCutoff& cutoff : cutoffs) {
    if (cutoff.best == best) return cutoff;
  }
  return std::nullopt;
}

// Two cells: precision and recall at a cut-off.
void AppendAt(const std::vector<GradeCutoff>& cutoffs, uint64_t best, uint64_t in_reach,
              std::vector<std::string>* row) {
  const std::optional<GradeCutoff> cutoff = At(cutoffs, best);
  row->push_back(cutoff ? Share(Ratio(cutoff->hits, best)) : std::string(kNothing));
  row->push_back(cutoff ? ShareOf(cutoff->hits, in_reach) : std::string(kNothing));
}

std::string CutoffsText(const GradeReport& report) {
  TextTable table({"the best", "by " + std::string(QuantityName(report.rank_by)), "recall",
                   "by occurrences", "recall", "adjacent pairs", "recall"});
  for (const uint64_t best : kGradeCutoffs) {
    std::vector<std::string> row = {FormatCount(best)};
    for (const auto* cutoffs : {&report.by_score, &report.by_occurrences, &report.adjacent_pairs}) {
      AppendAt(*cutoffs, best, report.in_reach, &row);
    }
    const bool any = At(report.by_score, best) || At(report.adjacent_pairs, best);
    if (any) table.Add(std::move(row));
  }
  if (table.empty()) return "";
  return Concat(
      "\nPrecision among the best of a ranking; adjacent pairs are those of the source "
      "by\nplain frequency, for comparison\n",
      table.Text());
}

std::string RankingsText(const GradeReport& report) {
  std::vector<GradeRanking> rankings = report.rankings;
  std::stable_sort(rankings.begin(), rankings.end(), [](const auto& a, const auto& b) {
    return a.average_precision > b.average_precision;
  });
  TextTable table({"ranked by", "average precision"});
  for (const GradeRanking& ranking : rankings) {
    table.Add({std::string(QuantityName(ranking.by)), Share(ranking.average_precision)});
  }
  return Concat("\nThe inventory as each quantity ranks it\n", table.Text());
}

std::string PoolText(const GradePool& pool, uint64_t in_reach) {
  std::vector<GradeGate> gates = pool.gates;
  std::stable_sort(gates.begin(), gates.end(), [&](const GradeGate& a, const GradeGate& b) {
    return F1(a.hits, a.chosen, in_reach) > F1(b.hits, b.chosen, in_reach);
  });
  TextTable table({"gate", "phrases", "hits", "precision", "recall", "F1", "av. prec."});
  for (const GradeGate& gate : gates) {
    table.Add({Concat(QuantityName(gate.on), ": ", FormatScore(gate.least)),
               FormatCount(gate.chosen), FormatCount(gate.hits), ShareOf(gate.hits, gate.chosen),
               ShareOf(gate.hits, in_reach), Share(F1(gate.hits, gate.chosen, in_reach)),
               Share(gate.average_precision)});
  }
  return Concat("\nThe gate that would have served the list best, alone, over ",
                pool.name == "audit" ? "the audit's\naccepted and near misses"
                                     : "all of pass 1\nwith enough occurrences",
                " (", FormatCount(pool.candidates), " phrases, ", FormatCount(pool.hits),
                " hits)\n", table.Text());
}

std::string MissesText(const GradeReport& report, size_t most) {
  if (report.missed == 0) return "\nMissed: none that stands in the source\n";
  std::string text =
      Concat("\nMissed, the most frequent first: ", FormatCount(report.missed), "\n");
  const size_t shown = std::min(most, report.misses.size());
  for (size_t i = 0; i < shown; ++i) {
    const GradeMiss& miss = report.misses[i];
    TextTable row({miss.phrase, Concat(FormatCount(miss.occurrences), " occ."),
                   Concat(FormatCount(miss.documents), " doc.")});
    text += row.Text();
    std::string why = miss.why;
    if (miss.across_breaks > 0 && miss.occurrences > 0) {
      AppendTo(&why, "; ", FormatCount(miss.across_breaks), " more across a break");
    }
    text += WrappedText(why, 6);
  }
  if (report.missed > shown) {
    AppendTo(&text, "  … and ", FormatCount(report.missed - shown), " more\n");
  }
  return text;
}

// JSON.

// "key":[{...},...], with append(row) for what is inside each object.
template <typename Rows, typename Append>
void AppendObjects(std::string* out, std::string_view key, const Rows& rows, Append&& append) {
  AppendJsonList(out, key, rows, [&](const auto& row) {
    *out += '{';
    append(row);
    *out += '}';
  });
}

void AppendValue(std::string* out, std::string_view key, double value) {
  AppendJsonKey(out, key);
  *out += FormatScore(value);
}

// null where there is nothing to divide by.
void AppendShare(std::string* out, std::string_view key, uint64_t part, uint64_t whole) {
  AppendJsonKey(out, key);
  *out += whole == 0 ? "null" : FormatScore(Ratio(part, whole));
}

void AppendCutoffs(std::string* out, std::string_view key, const std::vector<GradeCutoff>& cutoffs,
                   uint64_t in_reach) {
  AppendObjects(out, key, cutoffs, [&](const GradeCutoff& cutoff) {
    AppendJsonCount(out, "best", cutoff.best);
    AppendJsonCount(out, "hits", cutoff.hits);
    AppendShare(out, "precision", cutoff.hits, cutoff.best);
    AppendShare(out, "recall", cutoff.hits, in_reach);
  });
}

void AppendPool(std::string* out, const GradePool& pool, uint64_t in_reach) {
  AppendJsonString(out, "phrases_of", pool.name);
  AppendJsonCount(out, "candidates", pool.candidates);
  AppendJsonCount(out, "hits", pool.hits);
  AppendObjects(out, "gates", pool.gates, [&](const GradeGate& gate) {
    AppendJsonString(out, "on", QuantityName(gate.on));
    AppendValue(out, "least", gate.least);
    AppendJsonCount(out, "chosen", gate.chosen);
    AppendJsonCount(out, "hits", gate.hits);
    AppendShare(out, "precision", gate.hits, gate.chosen);
    AppendShare(out, "recall", gate.hits, in_reach);
    AppendValue(out, "f1", F1(gate.hits, gate.chosen, in_reach));
    AppendValue(out, "average_precision", gate.average_precision);
  });
}

}  // namespace

std::string GradeText(const GradeReport& report, size_t most) {
  std::string text = WrappedText(
      Concat(report.run, " by ", report.list, ": ", FormatCount(report.entries),
             " known phrases of two words or more (left out: ", FormatCount(report.short_lines),
             " shorter, ", FormatCount(report.double_lines), " again)"),
      0);
  TextTable counts({"", ""});
  counts.Add({"stand in the source", FormatCount(report.in_source)});
  counts.Add({"stand in it across a break only", FormatCount(report.across_breaks_alone)});
  counts.Add({Concat("in reach (", FormatCount(report.least_occurrences), " times or more)"),
              FormatCount(report.in_reach)});
  counts.Add({"in the inventory", FormatCount(report.found)});
  counts.Add({"recall of those in reach", ShareOf(report.found_in_reach, report.in_reach)});
  counts.Add({Concat("precision of ", FormatCount(report.phrases), " phrases"),
              ShareOf(report.found, report.phrases)});
  text += counts.Text().substr(1);
  text += CutoffsText(report);
  text += RankingsText(report);
  for (const GradePool& pool : report.pools) text += PoolText(pool, report.in_reach);
  return text + MissesText(report, most);
}

std::string GradeJson(const GradeReport& report) {
  std::string out = "{";
  AppendJsonString(&out, "run", report.run);
  AppendJsonString(&out, "list", report.list);
  AppendJsonCount(&out, "entries", report.entries);
  AppendJsonCount(&out, "short_lines", report.short_lines);
  AppendJsonCount(&out, "double_lines", report.double_lines);
  AppendJsonCount(&out, "in_source", report.in_source);
  AppendJsonCount(&out, "across_breaks_alone", report.across_breaks_alone);
  AppendJsonCount(&out, "least_occurrences", report.least_occurrences);
  AppendJsonCount(&out, "in_reach", report.in_reach);
  AppendJsonCount(&out, "found", report.found);
  AppendJsonCount(&out, "found_in_reach", report.found_in_reach);
  AppendJsonCount(&out, "phrases", report.phrases);
  AppendShare(&out, "recall", report.found_in_reach, report.in_reach);
  AppendShare(&out, "precision", report.found, report.phrases);
  AppendJsonString(&out, "rank_by", QuantityName(report.rank_by));
  AppendCutoffs(&out, "by_score", report.by_score, report.in_reach);
  AppendCutoffs(&out, "by_occurrences", report.by_occurrences, report.in_reach);
  AppendCutoffs(&out, "adjacent_pairs", report.adjacent_pairs, report.in_reach);
  AppendObjects(&out, "rankings", report.rankings, [&out](const GradeRanking& ranking) {
    AppendJsonString(&out, "by", QuantityName(ranking.by));
    AppendValue(&out, "average_precision", ranking.average_precision);
  });
  AppendObjects(&out, "best_gates", report.pools,
                [&](const GradePool& pool) { AppendPool(&out, pool, report.in_reach); });
  AppendJsonCount(&out, "missed", report.missed);
  AppendObjects(&out, "misses", report.misses, [&out](const GradeMiss& miss) {
    AppendJsonString(&out, "phrase", miss.phrase);
    AppendJsonCount(&out, "occurrences", miss.occurrences);
    AppendJsonCount(&out, "documents", miss.documents);
    AppendJsonCount(&out, "across_breaks", miss.across_breaks);
    AppendJsonString(&out, "reason", miss.reason);
    AppendJsonString(&out, "why", miss.why);
  });
  return out + "}\n";
}

}  // namespace phraseweld
