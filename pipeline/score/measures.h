#ifndef PHRASEWELD_SCORE_MEASURES_H_
#define PHRASEWELD_SCORE_MEASURES_H_

#include <string>

#include "base/quantity.h"
#include "base/table.h"

namespace phraseweld {

// Expected number of slots under independence, E = L*R/N.
double Expected(const SlotTable& table);

// The value of a quantity, rounded to 9 decimals (Round9). kBurst and kDocuments need
// table.documents. The formulas and their sources stand in measures.cc.
double Score(Quantity quantity, const SlotTable& table);

// Rounded to 9 decimals, halves away from zero as std::round does; values too large to have nine
// decimals are returned as they are; -0 becomes 0.
double Round9(double value);

// A rounded value as the audit prints it: fixed notation, at most 9 decimals, no trailing zeros, no
// trailing point ("5", "4.71", "-0.000000001").
std::string FormatScore(double value);

// Lower limit of the exact two-sided 95 % Poisson interval for a count of n, n >= 1:
// half the 2.5 % point of chi-squared with 2n degrees of freedom (Garwood 1936). Relative error
// below 1e-12.
double PoissonLower95(uint64_t n);

}  // namespace phraseweld

#endif  // PHRASEWELD_SCORE_MEASURES_H_
