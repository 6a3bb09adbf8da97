#ifndef PHRASEWELD_RUN_VERIFY_H_
#define PHRASEWELD_RUN_VERIFY_H_

#include <cstdint>
#include <string>

#include "absl/status/statusor.h"
#include "files/file_system.h"
#include "run/observer.h"

namespace phraseweld {

// What a successful verification went through.
struct VerifyReport {
  uint64_t files = 0;  // of the run folder, with the hashes of the manifest
  uint64_t file_bytes = 0;
  uint64_t inputs = 0;      // sources with the hashes of the manifest
  uint64_t text_bytes = 0;  // of the sources, decompressed
  uint64_t restored = 0;    // rewritten files undone and compared with their sources
  uint64_t documents = 0, words = 0;
  uint64_t passes = 0;                     // pass 0 not counted
  uint64_t accepted = 0, near_misses = 0;  // slot types recounted
  uint64_t merges = 0;
  uint64_t phrases = 0;  // lines of the inventory
};

// Proves the finished run in `folder`:
//  - its files and its sources have the sizes and hashes of the manifest, and there are no others;
//  - the rewritten corpus, undone, is the source byte for byte;
//  - every number of the audit is what a recount from the source by a plain path comes to, every
//    score follows from those numbers, and every line meets the gates and rules of its pass;
//  - the inventory, the rewritten corpus, the corpus as words and the spans are those that follow.
// What is not proved: `slot_types`, which would need memory that grows with the corpus; that no
// type was left out of the audit that should stand there; `version` and `timings` of the manifest;
// and of report.html more than its hash. Paths of sources, of a list of function words and of
// rulings that are relative are seen from the working directory, as the run saw them.
//
// DataLoss, with a line for each of the first 20 faults (file, place, what was found, what was
// expected), where anything is wrong; NotFound where there is no finished run; Cancelled when
// observer.stop turns true; the file system's errors. Memory grows with the audit, the number of
// different words and the longest document without a break, not with the corpus. One thread.
absl::StatusOr<VerifyReport> VerifyRun(FileSystem& files, const std::string& folder,
                                       const Observer& observer);

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_VERIFY_H_
