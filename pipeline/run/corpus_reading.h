#ifndef PHRASEWELD_RUN_CORPUS_READING_H_
#define PHRASEWELD_RUN_CORPUS_READING_H_

#include <cstdint>
#include <memory>
#include <string>
#include <vector>

#include "absl/status/statusor.h"
#include "base/job.h"
#include "base/stream.h"
#include "files/entry_array.h"
#include "read/corpus.h"
#include "run/lanes.h"
#include "run/observer.h"
#include "run/plan.h"
#include "words/vocabulary.h"

namespace phraseweld {

// The corpus as the passes want it.
struct EncodedCorpus {
  // Where a block's entries begin, and how many documents began before it.
  struct BlockPlace {
    uint64_t begin = 0;
    uint64_t documents_before = 0;
  };

  std::unique_ptr<EntryArray> entries;
  StreamView stream;
  Vocabulary vocabulary;
  std::vector<BlockPlace> blocks;
  std::vector<uint64_t> frequency;  // tokens of each word type
  std::vector<InputDigest> digests;
  uint64_t documents = 0;
  uint64_t words = 0;       // tokens in the stream before any merge
  uint64_t word_types = 0;  // with at least one token
  uint64_t bad_lines = 0;
  uint64_t text_bytes = 0;
};

// Reads all inputs once: text -> words -> the stream of type ids. The words of `reserved` (forms)
// get the first ids. The result does not depend on threads or block size, but for `blocks`.
absl::Status EncodeCorpus(const Job& job, const std::vector<InputFile>& inputs,
                          const MemoryPlan& plan, const std::vector<std::string>& reserved,
                          const std::string& scratch_folder, FileSystem& files, ThreadLanes& lanes,
                          const Observer& observer, EncodedCorpus* corpus);

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_CORPUS_READING_H_
