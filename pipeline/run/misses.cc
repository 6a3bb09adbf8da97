#include "run/misses.h"

#include <string>
#include <utility>
#include <vector>

#include "base/strings.h"
#include "score/chooser.h"
#include "score/measures.h"

namespace phraseweld {
namespace {

struct Reason {
  std::string name;
  std::string why;
};

// What the audit has to say.
std::optional<Reason> FromAudit(const PhraseTrail& trail, const FinishedRun& run) {
  const auto number = [&run](const PhraseTrail::Line& line) {
    return run.data.passes[line.pass].head.number;
  };
  if (!trail.accepted.empty()) {
    const PhraseTrail::Line& line = trail.accepted.front();
    return Reason{"yielded", Concat("accepted in pass ", number(line), ", but all its ",
                                    line.slot->table.n, " slots yielded to better ones")};
  }
  if (trail.near_misses.empty()) return std::nullopt;
  const PhraseTrail::Line& line = trail.near_misses.front();
  for (const Gate& gate : run.data.passes[line.pass].head.accept) {
    if (gate.quantity != *line.slot->failed) continue;
    return Reason{"gate", GateText(*line.slot, gate.quantity, gate.least, number(line))};
  }
  return std::nullopt;
}

// What follows from the rules alone.
std::optional<Reason> FromRules(const std::vector<std::string>& forms, const Job& job,
                                const SourceRecount& source) {
  if (forms.size() > static_cast<size_t>(job.phrases.longest)) {
    return Reason{"longest", Concat("its ", forms.size(),
                                    " words are more than phrases.longest: ", job.phrases.longest)};
  }
  for (const std::string* end : {&forms.front(), &forms.back()}) {
    if (source.IsFunctionWord(*end)) {
      return Reason{"function_word", Concat("'", *end,
                                            "' is a function word, and no phrase begins "
                                            "or ends with one")};
    }
  }
  int between = 0;
  for (const std::string& form : forms) {
    between = source.IsFunctionWord(form) ? between + 1 : 0;
    if (between > job.words.bridge) {
      return Reason{"bridge", Concat("it has more function words in a row than words.bridge: ",
                                     job.words.bridge)};
    }
    const bool first = &form == &forms.front();
    if (!source.IsNumber(form)) continue;
    if (job.words.numbers == Numbers::kNowhere) {
      return Reason{"number", Concat("'", form, "' is a number, and words.numbers is nowhere")};
    }
    if (job.words.numbers == Numbers::kNotFirst && first) {
      return Reason{"number", Concat("it begins with the number '", form,
                                     "', and words.numbers is not_first")};
    }
  }
  return std::nullopt;
}

// The gates of pass 1 on the counts of the slot.
Reason FromTable(const SlotTable& table, const FinishedRun& run) {
  std::vector<std::string> failed;
  for (const Gate& gate : run.job.passes.front().accept) {
    const double value = Score(gate.quantity, table);
    if (value >= gate.least) continue;
    failed.push_back(Concat(QuantityName(gate.quantity), " ", FormatScore(value), " < ",
                            FormatScore(gate.least)));
  }
  if (!failed.empty()) return {"gate", Concat(Join(failed, ", "), " in pass 1 (recounted)")};
  return {"take", "it meets the gates of pass 1, which took its best alone (take)"};
}

// A phrase of three content words or more is made of parts that must be there before it.
Reason FromParts(const std::vector<std::string>& forms, const PhraseTrails& trails,
                 const SourceRecount& source) {
  std::vector<size_t> content;
  for (size_t i = 0; i < forms.size(); ++i) {
    if (!source.IsFunctionWord(forms[i])) content.push_back(i);
  }
  const auto text = [&forms](size_t begin, size_t end) {
    return Join(std::vector<std::string>(forms.begin() + static_cast<ptrdiff_t>(begin),
                                         forms.begin() + static_cast<ptrdiff_t>(end)),
                " ");
  };
  std::vector<std::string> missing;  // of the two sides of a slot, those not made
  for (size_t i = 0; i + 1 < content.size(); ++i) {
    std::vector<std::string> sides;
    if (i > 0) sides.push_back(text(0, content[i] + 1));
    if (i + 2 < content.size()) sides.push_back(text(content[i + 1], forms.size()));
    std::erase_if(sides,
                  [&](const std::string& side) { return trails.Find(side).made != nullptr; });
    if (sides.empty()) {
      return {"not_logged",
              Concat("its parts '", text(0, content[i] + 1), "' and '",
                     text(content[i + 1], forms.size()),
                     "' were made; the audit has no line of the two: they met seldom, failed more "
                     "than one gate, or were not among the best ",
                     kMostNearMisses, " near misses")};
    }
    missing.push_back(Concat("'", Join(sides, "' + '"), "'"));
  }
  return {"part_missing", Concat("never proposed: no pass made ", Join(missing, ", nor "))};
}

Reason Explain(const std::vector<std::string>& forms, const FinishedRun& run,
               const PhraseTrails& trails, const SourceRecount& source, bool ruled_never,
               const std::optional<SlotTable>& table, const GradeMiss& miss) {
  if (ruled_never) return {"never", "ruled never"};
  if (auto reason = FromAudit(trails.Find(miss.phrase), run)) return *std::move(reason);
  if (miss.occurrences == 0) {
    return {"break",
            Concat("crosses a break ", miss.across_breaks, " of ", miss.across_breaks, " times")};
  }
  if (auto reason = FromRules(forms, run.job, source)) return *std::move(reason);
  if (table) return FromTable(*table, run);
  size_t content = 0;
  for (const std::string& form : forms) content += source.IsFunctionWord(form) ? 0 : 1;
  if (content > 2) return FromParts(forms, trails, source);
  return {"rulings", "the rulings of pass 0 took its words in"};
}

}  // namespace

void ExplainMiss(const std::vector<std::string>& forms, const FinishedRun& run,
                 const PhraseTrails& trails, const SourceRecount& source, bool ruled_never,
                 const std::optional<SlotTable>& table, GradeMiss* miss) {
  Reason reason = Explain(forms, run, trails, source, ruled_never, table, *miss);
  miss->reason = std::move(reason.name);
  miss->why = std::move(reason.why);
}

}  // namespace phraseweld
