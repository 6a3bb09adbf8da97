#include "run/grade.h"

#include <algorithm>
#include <cmath>
#include <memory>
#include <optional>
#include <utility>

#include "absl/container/flat_hash_map.h"
#include "absl/container/flat_hash_set.h"
#include "base/status.h"
#include "base/strings.h"
#include "run/finished_run.h"
#include "run/known_phrases.h"
#include "run/misses.h"
#include "run/passes.h"
#include "run/ranking_quality.h"
#include "run/source_recount.h"
#include "score/measures.h"

namespace phraseweld {
namespace {

// The lowest gate on occurrences; a pass without one takes everything.
uint64_t LeastOccurrences(const PassOptions& pass) {
  for (const Gate& gate : pass.accept) {
    if (gate.quantity == Quantity::kOccurrences) {
      return static_cast<uint64_t>(std::max(1.0, std::ceil(gate.least)));
    }
  }
  return 1;
}

class Grader {
 public:
  Grader(const FinishedRun& run, const KnownPhrases& known, GradeReport* report)
      : run_(run), trails_(run), report_(*report) {
    for (const std::vector<std::string>& forms : known.entries) {
      counts_.push_back({forms, 0, 0, 0});
      known_.insert(Join(forms, " "));
    }
    report_.entries = known.entries.size();
    report_.short_lines = known.short_lines;
    report_.double_lines = known.double_lines;
    report_.phrases = run.data.phrases.size();
  }

  absl::Status Do(const GradeOptions& options, SourceRecount* source) {
    source->Count(&counts_);
    CountEntries();
    RankInventory();
    PW_ASSIGN_OR_RETURN(const std::vector<std::string> pairs,
                        source->FrequentPairs(std::end(kGradeCutoffs)[-1]));
    std::vector<RankedPhrase> ranking;
    for (const std::string& pair : pairs) ranking.push_back({pair, IsKnown(pair), {}, 0});
    report_.adjacent_pairs = CutOff(ranking);

    std::vector<Quantity> measures = options.measures;
    if (measures.empty()) measures.push_back(report_.rank_by);
    TryGates("audit", AuditPool(), measures);
    PW_ASSIGN_OR_RETURN(std::vector<RecountedSlot> slots,
                        source->PassOne(LeastOccurrences(run_.job.passes.front())));
    Pool pass_one;
    for (RecountedSlot& slot : slots) pass_one.try_emplace(std::move(slot.phrase), slot.table);
    slots.clear();
    TryGates("pass 1", pass_one, measures);
    return FindMisses(options.most_misses, source);
  }

 private:
  using Pool = absl::flat_hash_map<std::string, SlotTable>;

  bool IsKnown(const std::string& phrase) const { return known_.contains(phrase); }

  void CountEntries() {
    report_.least_occurrences = ~uint64_t{0};
    for (const PassOptions& pass : run_.job.passes) {
      report_.least_occurrences = std::min(report_.least_occurrences, LeastOccurrences(pass));
    }
    for (const SequenceCount& count : counts_) {
      const bool in_reach = count.occurrences >= report_.least_occurrences;
      const bool found = trails_.Find(Join(count.forms, " ")).made != nullptr;
      report_.in_source += count.occurrences > 0 ? 1 : 0;
      report_.across_breaks_alone += count.occurrences == 0 && count.across_breaks > 0 ? 1 : 0;
      report_.in_reach += in_reach ? 1 : 0;
      report_.found += found ? 1 : 0;
      report_.found_in_reach += found && in_reach ? 1 : 0;
    }
  }

  // The line of the slot type that first made the phrase.
  static const RunSlot* MakerOf(const PhraseTrail& trail) {
    for (const PhraseTrail::Line& line : trail.accepted) {
      if (line.slot->joined > 0) return line.slot;
    }
    return nullptr;
  }

  std::vector<RankedPhrase> Inventory(Quantity by) const {
    std::vector<RankedPhrase> ranking;
    for (const RunPhrase& phrase : run_.data.phrases) {
      RankedPhrase& ranked = ranking.emplace_back();
      ranked.phrase = phrase.phrase;
      ranked.hit = IsKnown(phrase.phrase);
      ranked.n = phrase.made();
      if (const RunSlot* maker = MakerOf(trails_.Find(phrase.phrase))) {
        ranked.score = Score(by, maker->table);
        ranked.n = maker->table.n;
      }
    }
    SortByScore(&ranking);
    return ranking;
  }

  void RankInventory() {
    report_.rank_by = run_.job.passes.front().rank_by;
    report_.by_score = CutOff(Inventory(report_.rank_by));
    std::vector<RankedPhrase> by_made = Inventory(report_.rank_by);
    for (RankedPhrase& ranked : by_made) {
      const RunPhrase& phrase = *trails_.Find(ranked.phrase).made;
      ranked.score = static_cast<double>(phrase.made());
    }
    SortByScore(&by_made);
    report_.by_occurrences = CutOff(by_made);
    for (int i = 0; i < kQuantities; ++i) {
      const auto quantity = static_cast<Quantity>(i);
      report_.rankings.push_back(
          {quantity, AveragePrecision(Inventory(quantity), report_.in_reach)});
    }
  }

  // What the audit has counts of. Where it has a phrase several times, the first line counts.
  Pool AuditPool() const {
    Pool pool;
    for (const RunPass& pass : run_.data.passes) {
      for (const auto* slots : {&pass.accepted, &pass.near_misses}) {
        for (const RunSlot& slot : *slots) pool.try_emplace(slot.phrase, slot.table);
      }
    }
    return pool;
  }

  void TryGates(std::string name, const Pool& pool, const std::vector<Quantity>& measures) {
    GradePool& result = report_.pools.emplace_back();
    result.name = std::move(name);
    result.candidates = pool.size();
    std::vector<RankedPhrase> ranking;
    for (const auto& [phrase, table] : pool) {
      ranking.push_back({phrase, IsKnown(phrase), {}, table.n});
      result.hits += ranking.back().hit ? 1 : 0;
    }
    for (const Quantity quantity : measures) {
      for (RankedPhrase& ranked : ranking) {
        ranked.score = Score(quantity, pool.find(ranked.phrase)->second);
      }
      SortByScore(&ranking);
      result.gates.push_back(BestGate(quantity, ranking, report_.in_reach));
    }
  }

  absl::Status FindMisses(size_t most, SourceRecount* source) {
    std::vector<std::pair<GradeMiss, const SequenceCount*>> misses;
    for (const SequenceCount& count : counts_) {
      if (count.occurrences == 0 && count.across_breaks == 0) continue;
      std::string phrase = Join(count.forms, " ");
      if (trails_.Find(phrase).made != nullptr) continue;
      GradeMiss miss;
      miss.phrase = std::move(phrase);
      miss.occurrences = count.occurrences;
      miss.documents = count.documents;
      miss.across_breaks = count.across_breaks;
      misses.emplace_back(std::move(miss), &count);
    }
    report_.missed = misses.size();
    std::sort(misses.begin(), misses.end(), [](const auto& a, const auto& b) {
      if (a.first.occurrences != b.first.occurrences) {
        return a.first.occurrences > b.first.occurrences;
      }
      if (a.first.across_breaks != b.first.across_breaks) {
        return a.first.across_breaks > b.first.across_breaks;
      }
      return a.first.phrase < b.first.phrase;
    });
    if (misses.size() > most) misses.resize(most);

    std::vector<Slot> slots;
    std::vector<std::optional<size_t>> slot_of(misses.size());
    for (size_t i = 0; i < misses.size(); ++i) {
      if (const std::optional<Slot> slot = source->SlotOf(misses[i].second->forms)) {
        slot_of[i] = slots.size();
        slots.push_back(*slot);
      }
    }
    PW_ASSIGN_OR_RETURN(const std::vector<std::optional<SlotTable>> tables, source->Tables(slots));
    absl::flat_hash_set<std::string> never;
    for (const Ruling& ruling : run_.job.phrases.ruling_list) {
      if (!ruling.always) never.insert(Join(FormsOf(run_.job, ruling.phrase), " "));
    }
    for (size_t i = 0; i < misses.size(); ++i) {
      auto& [miss, count] = misses[i];
      const bool ruled_never = never.contains(miss.phrase);
      ExplainMiss(count->forms, run_, trails_, *source, ruled_never,
                  slot_of[i] ? tables[*slot_of[i]] : std::nullopt, &miss);
      report_.misses.push_back(std::move(miss));
    }
    return absl::OkStatus();
  }

  const FinishedRun& run_;
  const PhraseTrails trails_;
  GradeReport& report_;
  std::vector<SequenceCount> counts_;  // of the entries
  absl::flat_hash_set<std::string> known_;
};

}  // namespace

double Ratio(uint64_t part, uint64_t whole) {
  return whole == 0 ? 0 : static_cast<double>(part) / static_cast<double>(whole);
}

double GradeReport::Recall() const { return Ratio(found_in_reach, in_reach); }

double GradeReport::Precision() const { return Ratio(found, phrases); }

absl::StatusOr<GradeReport> Grade(FileSystem& files, const std::string& run,
                                  const std::string& list, const GradeOptions& options,
                                  const Observer& observer) {
  PW_ASSIGN_OR_RETURN(const FinishedRun finished, LoadFinishedRun(files, run));
  PW_ASSIGN_OR_RETURN(const KnownPhrases known, ReadKnownPhrases(files, list, finished.job));
  PW_ASSIGN_OR_RETURN(
      const std::unique_ptr<SourceRecount> source,
      SourceRecount::Read(files, finished,
                          options.scratch_folder.empty() ? PassingPath(Concat(run, ".scratch"))
                                                         : options.scratch_folder,
                          observer));
  GradeReport report;
  report.run = run;
  report.list = list;
  report.notes = source->notes();
  PW_RETURN_IF_ERROR(Grader(finished, known, &report).Do(options, source.get()));
  return report;
}

}  // namespace phraseweld
