#ifndef PHRASEWELD_RUN_JOB_OPTIONS_H_
#define PHRASEWELD_RUN_JOB_OPTIONS_H_

#include "base/job.h"
#include "read/corpus.h"
#include "words/splitter.h"

namespace phraseweld {

// The parts of a job as the rooms that read and split text want them.
ReadOptions ReadOptionsOf(const Job& job, size_t block_bytes);
WordOptions WordOptionsOf(const Job& job);

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_JOB_OPTIONS_H_
