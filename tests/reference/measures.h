#ifndef PHRASEWELD_TESTS_REFERENCE_MEASURES_H_
#define PHRASEWELD_TESTS_REFERENCE_MEASURES_H_

#include <cstdint>
#include <map>

#include "base/quantity.h"

namespace phraseweld::reference {

// The counts of a slot type in a pass, by their names in section 4 and 5.
struct Counts {
  uint64_t n = 0;
  uint64_t L = 0;
  uint64_t R = 0;
  uint64_t N = 0;
  uint64_t M = 0;
  uint64_t documents = 0;
};

// E = L·R/N, not rounded.
double Expected(const Counts& counts);

// The lower limit of the exact two-sided 95 % Poisson interval for a count n >= 1.
double PoissonLowerLimit(uint64_t n);

// Every quantity of the slot type; the scores are rounded to 9 decimals.
std::map<Quantity, double> Measure(const Counts& counts);

}  // namespace phraseweld::reference

#endif  // PHRASEWELD_TESTS_REFERENCE_MEASURES_H_
