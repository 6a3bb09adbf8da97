#ifndef PHRASEWELD_RUN_PASSES_H_
#define PHRASEWELD_RUN_PASSES_H_

#include <string>
#include <vector>

#include "absl/status/statusor.h"
#include "base/job.h"
#include "base/records.h"
#include "base/types.h"
#include "run/corpus_reading.h"
#include "run/lanes.h"
#include "run/observer.h"
#include "run/plan.h"

namespace phraseweld {

// A ruling in terms of the vocabulary. A ruling with a word that the corpus lacks can never match.
struct ResolvedRuling {
  Ruling ruling;
  std::vector<std::string> forms;
  std::vector<uint32_t> words;  // empty where the corpus lacks one of them
  bool used = false;            // joined something, or turned away a type that met all else
};

// What the passes did, and the state that they leave behind.
struct PassResults {
  BridgeCodes codes;
  TypeTable types;
  std::vector<PassRecord> passes;   // in order, pass 0 first where there is one
  std::vector<uint64_t> frequency;  // tokens of each type in the final stream
  std::vector<uint64_t> made;       // tokens made of each phrase type, by id - word_types
  std::vector<ResolvedRuling> rulings;
  uint64_t tokens_out = 0;
  uint64_t scratch_bytes = 0;
  int rounds = 0;
};

// Forms of a text that must be words: a ruling's phrase, an entry of a function-word list.
std::vector<std::string> FormsOf(const Job& job, std::string_view text);

// The function words' forms. InvalidArgument names entries that are not exactly one word.
absl::StatusOr<std::vector<std::string>> FunctionWordForms(const Job& job);

// Rulings as sequences of forms. InvalidArgument where one has fewer than two words, or two that
// come to the same words contradict each other.
absl::StatusOr<std::vector<ResolvedRuling>> ResolveRulings(const Job& job);

// Carries out all passes on the stream of `corpus`, in place.
absl::Status RunPasses(const Job& job, const MemoryPlan& plan,
                       const std::vector<std::string>& function_words,
                       std::vector<ResolvedRuling> rulings, const std::string& scratch_folder,
                       FileSystem& files, ThreadLanes& lanes, const Observer& observer,
                       Timings* timings, EncodedCorpus* corpus, PassResults* results);

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_PASSES_H_
