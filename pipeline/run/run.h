#ifndef PHRASEWELD_RUN_RUN_H_
#define PHRASEWELD_RUN_RUN_H_

#include <cstdint>
#include <map>
#include <string>
#include <vector>

#include "absl/status/statusor.h"
#include "base/job.h"
#include "files/file_system.h"
#include "run/observer.h"

namespace phraseweld {

struct RunTotals {
  uint64_t documents = 0, words = 0, word_types = 0, passes = 0, phrases = 0;
  uint64_t tokens_out = 0, words_in_phrases = 0, bad_lines = 0;
};

// How much there was of what takes memory and disk.
struct RunAmounts {
  uint64_t text_bytes = 0, entries = 0, words = 0, phrases = 0;
  uint64_t slots = 0, slot_types = 0;  // at the most in a pass
  uint64_t most_joined = 0;            // the same
  uint64_t page_bytes = 0;             // of the report
};

// What a run has to tell when it is done.
struct RunSummary {
  RunTotals totals;
  std::map<int, uint64_t> phrases_by_length;  // words -> phrase types in the inventory
  std::vector<std::string> warnings;          // rulings without effect, lines kept though bad
  std::string run_folder;
  double seconds = 0;
  RunAmounts amounts;
  std::vector<std::pair<std::string, uint64_t>> outputs;  // files by their path, and their bytes
  uint64_t scratch_bytes = 0;                             // at the most, on disk beside the results
  int rounds = 0;
};

struct RunControls {
  bool fresh = false;          // replace a finished run
  uint64_t block_bytes = 0;    // of text at once; 0: as the memory plan has it (tests set it)
  uint64_t chunk_entries = 0;  // the same for the stream
  bool force_disk = false;     // keep stream and counts in scratch files whatever the size
  bool force_scans = false;    // merge by scans, as when too many slots were found to keep them
};

// Runs a job: reads the corpus, carries out the passes, delivers. The run folder appears whole when
// everything is on disk, and not at all when something fails or observer.stop turns true
// (Cancelled). Everything in it but the timings depends on the job and the corpus alone.
absl::StatusOr<RunSummary> RunJob(const Job& job, const RunControls& controls, FileSystem& files,
                                  const Observer& observer);

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_RUN_H_
