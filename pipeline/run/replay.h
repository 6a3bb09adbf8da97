#ifndef PHRASEWELD_RUN_REPLAY_H_
#define PHRASEWELD_RUN_REPLAY_H_

#include <cstdint>
#include <string>
#include <utility>
#include <vector>

#include "absl/status/statusor.h"
#include "base/table.h"
#include "run/context_finder.h"
#include "run/finished_run.h"

namespace phraseweld {

// A slot type as texts, to be looked for in every pass.
struct WatchedSlot {
  std::string left;
  std::string bridge;  // empty: the sides are neighbours
  std::string right;
};

// Texts and how often, most often first, then in byte order.
using TextCounts = std::vector<std::pair<std::string, uint64_t>>;

// A watched slot type in a pass, as counted in the runs that were kept: n, documents, joined and
// yielded are those of the corpus where all runs with its words were kept, and so are the margins
// where all runs with the words of its left side (right side) were. `table.all` stays 0.
struct ReplayedSlot {
  SlotTable table;
  uint64_t joined = 0;
  uint64_t yielded = 0;
  TextCounts yielded_to;  // the phrases that took a token of it
};

struct ReplayedPass {
  int number = 0;
  std::vector<ReplayedSlot> slots;  // as watched
};

struct Replay {
  std::vector<ReplayedPass> passes;  // from pass 1 on
  // What became of the places where the words of the traced phrase stand in one run: the token that
  // holds them all, or the tokens that they lie in with " | " between them.
  TextCounts ends;
};

// Carries runs of the source through the passes of a finished run, with the accepted types of its
// audit. `phrase`: the forms whose ends are wanted. Consumes the runs. One thread.
absl::StatusOr<Replay> ReplayRun(const FinishedRun& run, KeptRuns* runs,
                                 const std::vector<WatchedSlot>& watched,
                                 const std::vector<std::string>& phrase);

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_REPLAY_H_
