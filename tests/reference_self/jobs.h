#ifndef PHRASEWELD_TESTS_REFERENCE_SELF_JOBS_H_
#define PHRASEWELD_TESTS_REFERENCE_SELF_JOBS_H_

#include <map>
#include <string>
#include <vector>

#include "base/job.h"
#include "reference/reference.h"

namespace phraseweld {

using Files = std::map<std::string, std::string>;

// One pass over a file of lines, in which whatever occurs `occurrences` times is accepted; the
// corpus is written as words, so that a result can be read at a glance.
inline Job LinesJob(double occurrences) {
  Job job;
  job.corpus.layout = Layout::kLines;
  job.passes[0].accept = {{Quantity::kOccurrences, occurrences}};
  job.deliver.corpus = CorpusForm::kWords;
  job.deliver.joiner = '+';
  return job;
}

// A job that joins nothing but the phrase that is ruled always, in the source.
inline Job RulingJob(Layout layout, const std::string& phrase) {
  Job job;
  job.corpus.layout = layout;
  job.passes[0].accept = {{Quantity::kOccurrences, 1000}};
  job.phrases.ruling_list = {{true, phrase, "", "rulings.yaml", 1}};
  return job;
}

inline Files RunOn(const Job& job, const std::string& bytes) {
  return ReferenceRun(job, {{"notes", bytes}});
}

// The corpus after the run.
inline std::string CorpusOf(const Job& job, const std::string& bytes) {
  return RunOn(job, bytes).at("corpus/notes");
}

}  // namespace phraseweld

#endif  // PHRASEWELD_TESTS_REFERENCE_SELF_JOBS_H_
