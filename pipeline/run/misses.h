#ifndef PHRASEWELD_RUN_MISSES_H_
#define PHRASEWELD_RUN_MISSES_H_

#include <optional>

#include "base/table.h"
#include "run/finished_run.h"
#include "run/grade.h"
#include "run/source_recount.h"

namespace phraseweld {

// Why a run's inventory lacks a sequence of words, told from its audit where that has it, else from
// the rules, else from `table`: the counts of its slot in pass 1, where there is one. Fills
// `reason` and `why` of *miss, whose counts are there.
void ExplainMiss(const std::vector<std::string>& forms, const FinishedRun& run,
                 const PhraseTrails& trails, const SourceRecount& source, bool ruled_never,
                 const std::optional<SlotTable>& table, GradeMiss* miss);

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_MISSES_H_
