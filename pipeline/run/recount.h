#ifndef PHRASEWELD_RUN_RECOUNT_H_
#define PHRASEWELD_RUN_RECOUNT_H_

#include "absl/status/status.h"
#include "base/parallel.h"
#include "count/slot_counter.h"

namespace phraseweld {

// The debug setting: Internal, naming a slot type, where counts kept up by differences are not
// those of a count from scratch. Holds every slot type in memory.
absl::Status CompareCounts(int pass, Lanes& lanes, SlotCounter* kept, SlotCounter* fresh);

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_RECOUNT_H_
