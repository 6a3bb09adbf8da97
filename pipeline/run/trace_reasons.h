#ifndef PHRASEWELD_RUN_TRACE_REASONS_H_
#define PHRASEWELD_RUN_TRACE_REASONS_H_

#include <string>

#include "base/job.h"
#include "run/finished_run.h"
#include "run/trace.h"

namespace phraseweld {

// The words in which a trace says what happened. All pure.

// "pmi 4.71 < 5.0", or with ">=" where it is met: as few decimals, two at least, as show which.
std::string GateWords(const TraceGate& gate);

// "yielded 14 of 16 times to 'circuit breaker panel'".
std::string YieldWords(const TraceSlot& slot);

// "crosses a comma 9 of 9 times".
std::string CrossingWords(const PhraseFindings& found);

// What turned a slot type away in its pass, on the counts that it has; "" where it was joined.
std::string WhyNot(const TraceSlot& slot, const PassOptions& options);

// Fills `verdict` and `remedy` of a phrase that was not made, from all else that *trace has.
// `never`: the ruling against it, if any. `absent`: words that the source lacks, with commas.
void JudgeAbsence(const FinishedRun& run, const std::vector<std::string>& forms,
                  const Ruling* never, const std::string& absent, Trace* trace);

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_TRACE_REASONS_H_
