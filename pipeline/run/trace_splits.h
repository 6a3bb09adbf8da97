#ifndef PHRASEWELD_RUN_TRACE_SPLITS_H_
#define PHRASEWELD_RUN_TRACE_SPLITS_H_

#include <optional>
#include <string>
#include <vector>

#include "absl/container/flat_hash_map.h"
#include "absl/container/flat_hash_set.h"
#include "run/finished_run.h"
#include "run/replay.h"
#include "run/trace.h"

namespace phraseweld {

// Where a run speaks of a phrase and of the parts of it. Points into the run, which must stay.
class PartTrails {
 public:
  PartTrails(const FinishedRun& run, const std::vector<std::string>& forms);
  // By the text of the phrase or a part; an empty trail where the run does not speak of it.
  const PhraseTrail& Find(const std::string& text) const;

 private:
  absl::flat_hash_map<std::string, PhraseTrail> trails_;
  PhraseTrail none_;
};

// A line of the audit.
TraceSlot LoggedSlot(const FinishedRun& run, const PhraseTrail::Line& line, TraceOrigin origin);

// All ways in which the words of a phrase that was not made could have been put together.
class SplitTracer {
 public:
  SplitTracer(const FinishedRun& run, const std::vector<std::string>& forms,
              const PartTrails& trails);

  std::vector<TracePart> Parts() const;
  // What a scan of the source must look for, and whether it must keep all runs: where no line of
  // the audit tells how many slots a bridge has in some pass.
  std::vector<std::vector<std::string>> Sides() const;
  bool WantsAll() const { return wants_all_; }
  std::vector<WatchedSlot> Watched() const;

  // Which words of the phrase are numbers, told by the source; else by the words themselves.
  void UseNumbers(const Vocabulary& vocabulary);
  // With what a replay of Watched() counted, or from the audit alone where that is null.
  std::vector<TraceSplit> Splits(const Replay* replay) const;
  // What stands against the phrase where no split is possible; "" where one is.
  std::string StandsAgainst() const;

 private:
  struct Split {
    size_t left_end = 0, right_begin = 0;  // words
    std::string left, bridge, right;
    std::vector<std::string> missing;  // sides that no pass made
    int first_pass = 1;                // in which both sides are there
  };

  std::string Text(size_t begin, size_t end) const;
  bool IsFunctionWord(const std::string& form) const { return function_words_.contains(form); }
  void AddSplit(size_t left_end, size_t right_begin);
  std::optional<uint64_t> SlotsOf(size_t pass, const std::string& bridge) const;
  std::string RuledOut(const Split& split) const;
  TraceSlot Recounted(size_t pass, const Split& split, const ReplayedSlot& counts) const;

  const FinishedRun& run_;
  const std::vector<std::string>& forms_;
  const PartTrails& trails_;
  absl::flat_hash_set<std::string> function_words_;
  std::vector<Split> splits_;
  std::vector<bool> numbers_;
  bool wants_all_ = false;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_TRACE_SPLITS_H_
