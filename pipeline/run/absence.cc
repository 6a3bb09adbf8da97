#include "run/absence.h"

#include <algorithm>
#include <optional>
#include <utility>
#include <vector>

#include "base/strings.h"
#include "run/passes.h"
#include "score/measures.h"

namespace phraseweld {
namespace {

// The gate on `quantity` of the pass in which `slot` was accepted, next to its value there.
std::string OnTheOtherSide(const ComparedSide& has, const PhraseTrail::Line& line,
                           Quantity quantity) {
  std::string text =
      Concat("; ", has.name, ": ", FormatScore(FinishedRun::Value(*line.slot, quantity)));
  for (const Gate& gate : has.run->data.passes[line.pass].head.accept) {
    if (gate.quantity == quantity) return Concat(text, " >= ", FormatScore(gate.least));
  }
  return Concat(text, " and no such gate");
}

double LeastOf(const RunPassHead& head, Quantity quantity) {
  for (const Gate& gate : head.accept) {
    if (gate.quantity == quantity) return gate.least;
  }
  return 0;
}

// Merges in which a side, a phrase itself, is not made in `lacks`: the names of those sides. Empty
// where one merge has both its sides there.
std::vector<std::string> MissingParts(const RunPhrase& phrase, const ComparedSide& has,
                                      const ComparedSide& lacks) {
  std::vector<std::string> missing;
  for (const RunDerivation& made : phrase.made_of) {
    if (made.pass == 0) return {};
    bool whole = true;
    for (const std::string* side : {&made.left, &made.right}) {
      // A side that `has` made is a phrase; any other is a word.
      if (has.trails.Find(*side).made == nullptr || lacks.trails.Find(*side).made != nullptr) {
        continue;
      }
      whole = false;
      if (std::find(missing.begin(), missing.end(), *side) == missing.end()) {
        missing.push_back(*side);
      }
    }
    if (whole) return {};
  }
  return missing;
}

// The gates of `lacks` on the counts that `has` found, in the pass that comes nearest to letting a
// merge through; empty where one does.
std::string FailedGates(const PhraseTrail& trail, const ComparedSide& lacks) {
  std::optional<std::vector<std::string>> fewest;
  for (const PhraseTrail::Line& line : trail.accepted) {
    for (const RunPass& pass : lacks.run->data.passes) {
      if (pass.head.number == 0) continue;
      std::vector<std::string> failed;
      for (const Gate& gate : pass.head.accept) {
        if (FinishedRun::Value(*line.slot, gate.quantity) < gate.least) {
          failed.push_back(GateText(*line.slot, gate.quantity, gate.least, pass.head.number));
        }
      }
      if (failed.empty()) return "";
      if (!fewest || failed.size() < fewest->size()) fewest = std::move(failed);
    }
  }
  return fewest ? Join(*fewest, ", ") : "";
}

}  // namespace

ComparedSide::ComparedSide(const FinishedRun& of, std::string called)
    : run(&of), name(std::move(called)), trails(of) {
  for (const Ruling& ruling : of.job.phrases.ruling_list) {
    (ruling.always ? always : never).insert(Join(FormsOf(of.job, ruling.phrase), " "));
  }
}

AbsenceReason ExplainAbsence(const RunPhrase& phrase, const ComparedSide& has,
                             const ComparedSide& lacks, const WholeDifferences& differences) {
  const PhraseTrail& trail = lacks.trails.Find(phrase.phrase);
  const PhraseTrail& made = has.trails.Find(phrase.phrase);
  if (lacks.never.contains(phrase.phrase)) {
    return {Absence::kNever, Concat(lacks.name, ": ruled never")};
  }
  if (!trail.accepted.empty()) {
    const PhraseTrail::Line& line = trail.accepted.front();
    return {Absence::kYielded,
            Concat(lacks.name, ": accepted in pass ", lacks.run->data.passes[line.pass].head.number,
                   ", but all its ", line.slot->table.n, " slots yielded to better ones")};
  }
  if (!trail.near_misses.empty()) {
    const PhraseTrail::Line& line = trail.near_misses.front();
    const RunPassHead& head = lacks.run->data.passes[line.pass].head;
    const Quantity failed = *line.slot->failed;
    std::string why =
        Concat(lacks.name, ": ", GateText(*line.slot, failed, LeastOf(head, failed), head.number));
    if (!made.accepted.empty()) why += OnTheOtherSide(has, made.accepted.front(), failed);
    return {Absence::kGate, std::move(why)};
  }
  if (phrase.words > lacks.run->job.phrases.longest) {
    return {Absence::kLongest,
            Concat(lacks.name, ": its ", phrase.words,
                   " words are more than phrases.longest: ", lacks.run->job.phrases.longest)};
  }
  if (made.accepted.empty() && has.always.contains(phrase.phrase) &&
      !lacks.always.contains(phrase.phrase)) {
    return {Absence::kNoRuling,
            Concat(has.name, " has it by an always-ruling, which ", lacks.name, " lacks")};
  }
  if (const std::vector<std::string> parts = MissingParts(phrase, has, lacks); !parts.empty()) {
    return {Absence::kPartMissing,
            Concat(lacks.name, ": '", Join(parts, "', '"), "', of which it is made, ",
                   parts.size() == 1 ? "is" : "are", " missing")};
  }
  if (const std::string failed = FailedGates(made, lacks); !failed.empty()) {
    return {Absence::kGates,
            Concat("gates of ", lacks.name, " on the counts of ", has.name, ": ", failed)};
  }
  for (size_t i = 0; i < lacks.run->options.size(); ++i) {
    const RunPass& pass = lacks.run->data.passes[i];
    const std::optional<uint64_t>& take = lacks.run->options[i].take;
    if (pass.head.number > 0 && take && pass.balance.accepted == *take) {
      return {Absence::kTake,
              Concat(lacks.name, ": pass ", pass.head.number, " took its best ", *take, " alone")};
    }
  }
  if (differences.corpus && !differences.keys.empty()) {
    return {Absence::kBoth, Concat("the corpus differs, and so do ", differences.keys)};
  }
  if (differences.corpus) return {Absence::kCorpus, "the corpus differs"};
  if (!differences.keys.empty()) return {Absence::kKeys, Concat("changed: ", differences.keys)};
  return {Absence::kUnexplained, "neither the corpus nor a key that shapes phrases differs"};
}

}  // namespace phraseweld
