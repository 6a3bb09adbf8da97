#ifndef PHRASEWELD_RUN_VERIFY_PLAN_H_
#define PHRASEWELD_RUN_VERIFY_PLAN_H_

#include <cstddef>
#include <string>
#include <string_view>
#include <vector>

#include "absl/status/statusor.h"
#include "audit/recounter.h"
#include "base/job.h"
#include "base/run_data.h"
#include "files/file_system.h"
#include "run/passes.h"
#include "run/verify_faults.h"

namespace phraseweld {

// A run as its folder has it, with what its job comes to.
struct ClaimedRun {
  RunData data;
  std::vector<std::string> logs;  // paths of the audit logs, beside data.passes
  Job job;
  std::vector<std::string> function_words;  // forms
  std::vector<ResolvedRuling> rulings;
  std::vector<const ResolvedRuling*> always;  // into `rulings`, in the order of pass 0
  const RunPass* pass_zero = nullptr;
  // The numbered passes, each with its options.
  std::vector<const RunPass*> passes;
  std::vector<PassOptions> options;
};

// Reads it. What cannot be read, and audit logs that a run of this job would not have, are faults;
// false where there are too many to go on.
bool ReadClaimedRun(FileSystem& files, const std::string& folder, RunManifest manifest,
                    ClaimedRun* run, VerifyFaults* faults);

// The slot types that the audit speaks of, as forms. The audit has texts, in which a space stands
// between two forms; where the corpus has forms that hold a space themselves, a text can be read in
// several ways, and which one is meant shows in the counts. So a recount may have to be done over:
// once to learn of such forms, and once for each pass with a text of several readings.
class SlotReadings {
 public:
  explicit SlotReadings(const ClaimedRun& run);

  // For the next recount.
  RecountRules Rules() const;
  // Takes a recount's results in. True when it was the last one: it had every type right.
  bool Settle(const Recounter& recounter);

 private:
  struct Line {
    const RunSlot* slot = nullptr;
    std::vector<RecountSlot> readings;
  };
  struct Pass {
    std::vector<Line> accepted, near_misses;
    bool settled = false;  // one reading a line
  };
  void Read();
  std::vector<std::vector<std::string>> ReadText(std::string_view text, bool bridge) const;
  Line ReadLine(const RunSlot& slot) const;
  size_t Unsettled() const;
  static void Choose(const std::vector<SlotRecount>& counts, Pass* pass);

  const ClaimedRun& run_;
  std::vector<std::string> spaced_forms_;
  std::vector<Pass> passes_;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_VERIFY_PLAN_H_
