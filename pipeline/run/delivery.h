#ifndef PHRASEWELD_RUN_DELIVERY_H_
#define PHRASEWELD_RUN_DELIVERY_H_

#include <cstdint>
#include <memory>
#include <string>
#include <vector>

#include "absl/status/statusor.h"
#include "base/job.h"
#include "base/records.h"
#include "base/types.h"
#include "deliver/surfaces.h"
#include "files/streams.h"
#include "run/corpus_reading.h"
#include "run/lanes.h"
#include "run/observer.h"
#include "run/passes.h"
#include "run/plan.h"

namespace phraseweld {

// A file of the run folder, by its path in it.
struct DeliveredFile {
  std::string path;
  OutputDigest digest;
};

// What the second walk over the text found.
struct Delivery {
  std::vector<uint64_t> wanted;  // stream positions that the audit names, ascending
  std::vector<Place> places;     // of each
  std::unique_ptr<Surfaces> surfaces;
  const Place& PlaceOf(uint64_t position) const;
};

// Walks the inputs again beside the final stream and writes corpus/, the joints and the spans into
// `folder`. Appends what it wrote to *written. Aborted when an input is no longer what it was.
absl::Status DeliverCorpus(const Job& job, const std::vector<InputFile>& inputs,
                           const MemoryPlan& plan, const std::string& folder, FileSystem& files,
                           ThreadLanes& lanes, const Observer& observer,
                           const EncodedCorpus& corpus, const PassResults& results,
                           Delivery* delivery, std::vector<DeliveredFile>* written);

// Writes audit/ and the inventory into `folder`; returns the inventory.
absl::StatusOr<std::vector<PhraseRecord>> DeliverRecords(
    const std::string& folder, FileSystem& files, ThreadLanes& lanes, const EncodedCorpus& corpus,
    const PassResults& results, const Delivery& delivery, std::vector<DeliveredFile>* written);

// The name of a document: its id, or its ordinal from 1.
std::string DocumentName(std::string_view id, uint64_t ordinal);

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_DELIVERY_H_
