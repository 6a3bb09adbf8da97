#ifndef PHRASEWELD_TESTS_REFERENCE_REFERENCE_H_
#define PHRASEWELD_TESTS_REFERENCE_REFERENCE_H_

#include <map>
#include <string>
#include <vector>

#include "base/job.h"

namespace phraseweld {

// One input file of a corpus, in the order of the corpus.
struct RefInput {
  std::string name;  // its path below corpus/ in the run folder
  std::string bytes;
};

// The whole of the semantics in DEVELOPERS.md, done the slow and obvious way. It is the second
// program that the product's bytes are held against, so it shares no code with the product.
//
// Returns the files of the run folder by their path in it: inventory.jsonl, inventory.tsv,
// audit/pass-NN.jsonl, corpus/NAME (unless the job delivers none; never compressed) and, where
// the job wants it, spans.jsonl.
//
// Throws std::runtime_error where the job has to stop: on a line that is not a JSON object (unless
// bad lines are kept), and on an entry of the function words that is not exactly one word.
std::map<std::string, std::string> ReferenceRun(const Job& job,
                                                const std::vector<RefInput>& inputs);

}  // namespace phraseweld

#endif  // PHRASEWELD_TESTS_REFERENCE_REFERENCE_H_
