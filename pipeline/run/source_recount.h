#ifndef PHRASEWELD_RUN_SOURCE_RECOUNT_H_
#define PHRASEWELD_RUN_SOURCE_RECOUNT_H_

#include <cstddef>
#include <cstdint>
#include <memory>
#include <optional>
#include <string>
#include <vector>

#include "absl/status/statusor.h"
#include "base/job.h"
#include "base/slots.h"
#include "base/table.h"
#include "count/slot_counter.h"
#include "files/file_system.h"
#include "run/corpus_reading.h"
#include "run/finished_run.h"
#include "run/lanes.h"
#include "run/observer.h"
#include "run/passes.h"
#include "run/plan.h"
#include "run/run_source.h"

namespace phraseweld {

// How often a sequence of words stands in the source.
struct SequenceCount {
  std::vector<std::string> forms;  // given
  uint64_t occurrences = 0;        // in a run; occurrences may overlap
  uint64_t documents = 0;          // with one at least
  uint64_t across_breaks = 0;      // in a passage, with a break between two of the words
};

// A slot type of pass 1 as recounted. Its table holds documents, and the margins that the pass has.
struct RecountedSlot {
  Slot slot;
  std::string phrase;
  SlotTable table;
};

// The source of a finished run, read once more and counted. Questions are to be asked in the order
// in which they are declared, since those about pass 1 join the rulings first. Uses the threads and
// the memory that the job allows; what is too large for that lies in `scratch_folder`, which is
// made when it is needed and removed in the end. One thread at a time.
class SourceRecount {
 public:
  // FailedPrecondition where the source can no longer be had as it was (see RunSource).
  static absl::StatusOr<std::unique_ptr<SourceRecount>> Read(FileSystem& files,
                                                             const FinishedRun& run,
                                                             const std::string& scratch_folder,
                                                             const Observer& observer);
  ~SourceRecount();

  // Remarks for the user on where the source came from, a sentence each without a full stop.
  const std::vector<std::string>& notes() const { return source_->notes(); }

  // One scan of the stream. Sequences have a word each at least and differ from one another.
  void Count(std::vector<SequenceCount>* sequences) const;
  // The `most` most frequent pairs of adjacent words, function words among them, as texts; more
  // frequent ones first, then in byte order.
  absl::StatusOr<std::vector<std::string>> FrequentPairs(size_t most);

  // The slot types of pass 1 with at least `least` slots that its rules (not its gates) allow.
  absl::StatusOr<std::vector<RecountedSlot>> PassOne(uint64_t least);
  // After PassOne(): the tables of these slot types, whatever the rules say; none where the pass
  // has no such slot.
  absl::StatusOr<std::vector<std::optional<SlotTable>>> Tables(const std::vector<Slot>& slots);

  // The slot that these words are, if two content words with function words between them, as many
  // as words.bridge allows.
  std::optional<Slot> SlotOf(const std::vector<std::string>& forms) const;
  bool IsFunctionWord(const std::string& form) const;
  bool IsNumber(const std::string& form) const;

 private:
  SourceRecount(FileSystem& files, const FinishedRun& run, std::string scratch_folder);
  absl::StatusOr<std::unique_ptr<SlotCounter>> NewCounter(const SlotRules& rules);
  absl::Status PreparePassOne();
  SlotTable WithMargins(const Slot& slot, SlotTable table) const;
  absl::Status FillDocuments(std::vector<RecountedSlot>* slots);

  FileSystem& files_;
  const FinishedRun& run_;
  const std::string scratch_folder_;
  ThreadLanes lanes_;
  std::unique_ptr<RunSource> source_;
  MemoryPlan plan_;
  std::vector<std::string> function_words_;
  std::unique_ptr<EncodedCorpus> corpus_;
  PassResults results_;
  TypeBits numbers_;
  SlotRules rules_;
  uint64_t tokens_ = 0;  // at the start of pass 1
  std::unique_ptr<SlotCounter> counter_;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_SOURCE_RECOUNT_H_
