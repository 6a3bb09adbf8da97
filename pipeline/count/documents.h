#ifndef PHRASEWELD_COUNT_DOCUMENTS_H_
#define PHRASEWELD_COUNT_DOCUMENTS_H_

#include <cstdint>
#include <vector>

#include "absl/status/statusor.h"
#include "base/parallel.h"
#include "base/slot_index.h"
#include "base/slots.h"
#include "base/stream.h"

namespace phraseweld {

struct SlotPlaces {
  std::vector<uint64_t> documents;  // with at least one slot of the type, by place in the index
  std::vector<uint64_t> first;      // stream position of the left token of the first slot
};

// Counts, for the `size` slot types of `index`, the documents that have them, and finds where each
// first stands. One scan of the stream. Where `found` is given, it becomes all such slots: a list a
// chunk of the stream, each in the order of the stream.
absl::StatusOr<SlotPlaces> CountSlotDocuments(Lanes& lanes, const StreamView& stream,
                                              const SlotRules& rules, const SlotIndex& index,
                                              size_t size,
                                              std::vector<std::vector<FoundSlot>>* found = nullptr);

// For each phrase type (id - word_types, `phrases` of them): the documents in which a token of the
// type was made, whether or not a longer phrase took it in later.
absl::StatusOr<std::vector<uint64_t>> CountTypeDocuments(Lanes& lanes, const StreamView& stream,
                                                         uint32_t word_types, size_t phrases);

}  // namespace phraseweld

#endif  // PHRASEWELD_COUNT_DOCUMENTS_H_
