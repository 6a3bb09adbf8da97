#ifndef PHRASEWELD_COUNT_SLOT_COUNTER_H_
#define PHRASEWELD_COUNT_SLOT_COUNTER_H_

#include <cstdint>
#include <functional>
#include <memory>
#include <string>

#include "absl/status/statusor.h"
#include "base/entry.h"
#include "base/parallel.h"
#include "base/slots.h"
#include "base/table.h"
#include "files/file_system.h"

namespace phraseweld {

struct CounterOptions {
  SlotRules rules;
  uint32_t types_now = 0;       // ids in use before pass 1; phrases will take higher ones
  uint64_t expected_slots = 0;  // an upper bound; only sizes the partitions
  int lanes = 1;
  // On disk: everything that grows with the corpus lies in scratch files, and no step holds more
  // than about working_bytes.
  bool on_disk = false;
  uint64_t working_bytes = uint64_t{1} << 30;
  std::string scratch_folder;
  FileSystem* files = nullptr;
};

// Exact counts of every slot type of the current stream, with the margins L, R and N of each.
// Pass 1 adds all slots; a merge then reports the slots that it changed, and Update() brings the
// counts up to date, so that a later pass costs what changed.
//
// The simple idea is one table slot type -> n. What complicates it is size: slots are sorted into
// partitions by their left type as they come, so that a partition is counted in cache and all slots
// of one left side are in one partition; a partition's table is an array sorted by (left, bridge,
// right), so L is the sum of a group of neighbours. R is kept apart: for the empty bridge in an
// array by type, for others in a second set of partitions by (bridge, right).
class SlotCounter {
 public:
  static absl::StatusOr<std::unique_ptr<SlotCounter>> Create(const CounterOptions& options);
  virtual ~SlotCounter() = default;

  // Reports; calls of different lanes may overlap.
  virtual void AddAll(int lane, const Entry* stream, uint64_t begin, uint64_t end) = 0;
  virtual void Change(int lane, const Slot& before, const Slot& after) = 0;
  virtual void Remove(int lane, const Slot& slot, uint64_t times) = 0;

  // Applies the reports. `types`: ids in use are below it. OutOfRange when one slot type has more
  // than 2^32-1 slots.
  virtual absl::Status Update(Lanes& lanes, uint32_t types) = 0;

  // As of the last Update().
  virtual uint64_t slots() const = 0;
  virtual uint64_t slot_types() const = 0;

  // Calls visit for each slot type with at least `least` slots (least >= 1), in no order, its table
  // filled but for `documents`.
  using Visitor = std::function<void(int lane, const Slot&, const SlotTable&)>;
  virtual absl::Status Visit(Lanes& lanes, uint64_t least, const Visitor& visit) = 0;

  // Ids that types may have: below this.
  virtual uint64_t type_limit() const = 0;
  // Bytes of scratch files in use, and rounds that the last Visit() took to resolve margins.
  virtual uint64_t scratch_bytes() const = 0;
  virtual int rounds() const = 0;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_COUNT_SLOT_COUNTER_H_
