#ifndef PHRASEWELD_RUN_TRACE_H_
#define PHRASEWELD_RUN_TRACE_H_

#include <cstdint>
#include <optional>
#include <string>
#include <utility>
#include <vector>

#include "absl/status/statusor.h"
#include "base/run_data.h"
#include "files/file_system.h"
#include "run/context_finder.h"
#include "run/observer.h"
#include "run/replay.h"

namespace phraseweld {

// The life of a phrase in a finished run.

struct TraceGate {
  Quantity quantity = Quantity::kOccurrences;
  double value = 0;
  double least = 0;
  bool met() const { return value >= least; }
};

enum class TraceOrigin { kAccepted, kNearMiss, kRecounted };

inline constexpr const char* kTraceOriginNames[] = {"accepted", "near_miss", "recounted"};

// A slot type in one pass.
struct TraceSlot {
  TraceOrigin origin = TraceOrigin::kRecounted;
  int pass = 0;
  std::string pass_name;
  uint64_t rank = 0;  // 0: the audit has no line of it
  std::string left;
  std::string bridge;
  std::string right;
  SlotTable table;
  double expected = 0;
  std::vector<std::pair<Quantity, double>> scores;  // empty where n is 0
  std::vector<TraceGate> gates;
  uint64_t joined = 0;
  uint64_t yielded = 0;   // accepted types alone
  TextCounts yielded_to;  // phrases that took a token of one; empty where the source was not read
  std::string why;        // what turned it away, a sentence without a full stop; "" where joined
};

// A phrase or a word, and how it was made.
struct TraceNode {
  struct Step;
  std::string text;
  std::optional<RunPhrase> made;  // its line of the inventory
  uint64_t ruled = 0;             // merges in pass 0
  bool told_above = false;        // it stands in the tree before, with its steps
  std::vector<Step> steps;        // by pass, then rank
};

struct TraceNode::Step {
  TraceSlot slot;
  std::vector<TraceNode> sides;  // left, right
};

// A way in which the words could be put together that no pass took.
struct TraceSplit {
  std::string left;
  std::string bridge;
  std::string right;
  std::vector<TraceSlot> passes;  // in which both sides were there; none: see `why`
  std::string why;                // what stands against it in every pass; "" where nothing does
};

// A word of a phrase, or a part of it of two words or more.
struct TracePart {
  std::string text;
  bool word = false;
  bool function_word = false;
  std::optional<int> pass;  // a part that was made: in which pass first
  uint64_t times = 0;       // a part: made; a content word: in the source, where it was read
};

struct Trace {
  std::string run;
  std::string phrase;  // forms joined by one space
  int words = 0;
  bool made = false;  // it is in the inventory
  // One sentence each without a full stop: what became of it and, for a phrase that was not made,
  // what would let it in.
  std::string verdict;
  std::string remedy;
  TraceNode tree;                  // of a phrase that was made or accepted
  std::vector<TracePart> parts;    // of one that was not made
  std::vector<TraceSplit> splits;  // of one that was not made
  bool counted = false;            // the counts of `found` are of the whole source
  PhraseFindings found;
  TextCounts ends;  // where its words ended up in the final stream; empty where not looked for
  std::vector<std::string> notes;
};

// Traces a phrase through the run in `folder`. The phrase goes through the run's rules for words
// as any text does; its gaps mean nothing. A phrase that was made costs the reading of the run
// folder and of the source up to its third occurrence, or all of it where slots yielded; any other
// one scan of the source. Memory: the audit and the inventory, and what FindPhrases() takes.
// InvalidArgument where the phrase has fewer than two words; errors of LoadFinishedRun(). A source
// that cannot be read any more becomes a note.
absl::StatusOr<Trace> TracePhrase(FileSystem& files, const std::string& folder,
                                  const std::string& phrase, const Observer& observer);

// For a terminal.
std::string TraceText(const Trace& trace);

// One JSON object with everything, ended by a line feed.
std::string TraceJson(const Trace& trace);

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_TRACE_H_
