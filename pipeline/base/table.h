#ifndef PHRASEWELD_BASE_TABLE_H_
#define PHRASEWELD_BASE_TABLE_H_

#include <cstdint>

namespace phraseweld {

// The counts that the measures of a slot type are computed from. All are at least 1 for a type that
// occurs; n <= left, n <= right, left <= total and right <= total hold with slot margins.
struct SlotTable {
  uint64_t n = 0;          // slots of the type
  uint64_t left = 0;       // L: slots with this left side and bridge (or tokens of x)
  uint64_t right = 0;      // R: slots with this bridge and right side (or tokens of y)
  uint64_t total = 0;      // N: slots with this bridge (or tokens)
  uint64_t all = 0;        // M: slots of every bridge in the pass (or tokens)
  uint64_t documents = 0;  // 0: not counted yet
};

}  // namespace phraseweld

#endif  // PHRASEWELD_BASE_TABLE_H_
