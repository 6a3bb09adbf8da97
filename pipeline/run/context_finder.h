#ifndef PHRASEWELD_RUN_CONTEXT_FINDER_H_
#define PHRASEWELD_RUN_CONTEXT_FINDER_H_

#include <cstdint>
#include <memory>
#include <string>
#include <string_view>
#include <utility>
#include <vector>

#include "absl/status/statusor.h"
#include "base/entry.h"
#include "base/job.h"
#include "read/corpus.h"
#include "run/lanes.h"
#include "run/observer.h"
#include "words/vocabulary.h"

namespace phraseweld {

// A phrase's words in the source, with the text around them.
struct PhraseContext {
  std::string document;
  std::string passage;
  uint64_t byte = 0;   // of the first word in the passage's text
  std::string before;  // at most kContextBytes, cut between characters
  std::string match;   // from the first byte of the first word to the end of the last
  std::string after;   // at most kContextBytes, cut between characters
};

inline constexpr size_t kContextBytes = 60;

// Where the words of a phrase stand one after another in the source. Places may overlap.
struct PhraseFindings {
  uint64_t occurrences = 0;    // in one run
  uint64_t documents = 0;      // with one at least
  uint64_t across_breaks = 0;  // in a passage, with a break between two of the words
  // The first break inside of each of those, as BreakName() has it, and how often; most first.
  std::vector<std::pair<std::string, uint64_t>> breaks;
  std::vector<PhraseContext> contexts;         // the first ones in one run
  std::vector<PhraseContext> broken_contexts;  // the first ones with a break inside
};

struct FindOptions {
  size_t contexts = 3;  // of each phrase and kind, at most
  // Stop as soon as every phrase has its contexts in a run; the counts are then too small.
  bool first_contexts_alone = false;
  // Runs that hold one of these sequences of forms are kept, or all runs.
  std::vector<std::vector<std::string>> keep;
  bool keep_all = false;
};

// Runs of the source as the passes would see them: entries of the vocabulary, which has the job's
// function words first. Each run is ended by kBreak, each document that has one by kDocumentEnd.
struct KeptRuns {
  Vocabulary vocabulary;
  std::vector<Entry> entries;
};

struct Findings {
  std::vector<PhraseFindings> phrases;  // as asked for
  std::unique_ptr<KeptRuns> runs;       // where runs were to be kept
  bool whole = false;                   // the scan reached the end
  std::vector<InputDigest> digests;     // where `whole`
};

// Scans the inputs once for phrases, given as sequences of forms, none of them empty. What comes
// back does not depend on threads or on `block_bytes`. Memory: the words of the source and what is
// kept, 4 bytes a word. Errors are those of reading; Cancelled when the lanes are stopped.
absl::StatusOr<Findings> FindPhrases(const Job& job, const std::vector<InputFile>& inputs,
                                     const std::vector<std::vector<std::string>>& phrases,
                                     const FindOptions& options, ThreadLanes& lanes,
                                     const Observer& observer,
                                     size_t block_bytes = size_t{1} << 20);

// What a gap that is a break is called: "a comma", "a blank line", "'§'".
std::string BreakName(std::string_view gap);

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_CONTEXT_FINDER_H_
