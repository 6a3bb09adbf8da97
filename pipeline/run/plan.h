#ifndef PHRASEWELD_RUN_PLAN_H_
#define PHRASEWELD_RUN_PLAN_H_

#include <cstdint>
#include <vector>

#include "absl/status/statusor.h"
#include "base/job.h"
#include "files/file_system.h"
#include "read/corpus.h"
#include "run/run.h"

namespace phraseweld {

// How a run splits its memory, decided from the sizes of the inputs before anything is read.
struct MemoryPlan {
  size_t block_bytes = size_t{1} << 20;  // of text at once
  size_t blocks_in_flight = 6;
  bool exact_size = true;                      // text_bytes is what the inputs hold, not a guess
  bool on_disk = false;                        // the stream and the counts lie in scratch files
  uint64_t working_bytes = 0;                  // on disk: what a counting step may hold
  uint64_t chunk_entries = uint64_t{1} << 18;  // of the stream at once
  uint64_t found_bytes = ~uint64_t{0};         // for the slots that a scan found
  // Estimates.
  uint64_t text_bytes = 0;  // of the inputs, decompressed; a guess for compressed ones
  uint64_t entries = 0;
  uint64_t memory_bytes = 0;   // peak
  uint64_t scratch_bytes = 0;  // on disk while it runs
  uint64_t output_bytes = 0;
  int rounds = 1;  // in which pass 1 resolves margins
};

// Sizes of inputs; standard input counts as 0.
absl::StatusOr<std::vector<uint64_t>> InputSizes(FileSystem& files,
                                                 const std::vector<InputFile>& inputs);

MemoryPlan PlanMemory(const Job& job, const std::vector<InputFile>& inputs,
                      const std::vector<uint64_t>& sizes, int lanes, const RunControls& controls);

// What a run with these amounts takes under the plan, as measured on text of several kinds (see
// DEVELOPERS.md, "Memory"): peak memory, and disk beside the results.
uint64_t MemoryOf(const RunAmounts& amounts, const MemoryPlan& plan, int lanes);
// Of a report on that many phrases.
uint64_t PageMemory(uint64_t phrases, int lanes);
uint64_t ScratchOf(const RunAmounts& amounts, const MemoryPlan& plan);

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_PLAN_H_
