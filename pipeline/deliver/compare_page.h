#ifndef PHRASEWELD_DELIVER_COMPARE_PAGE_H_
#define PHRASEWELD_DELIVER_COMPARE_PAGE_H_

#include <cstddef>
#include <string>

#include "base/comparison.h"

namespace phraseweld {

// Rows that a list of phrases shows at most; a browser takes seconds over many more.
inline constexpr size_t kMostComparedRows = 2000;

// A comparison as one HTML file that loads nothing from anywhere, the same bytes for the same data.
// All texts are escaped; a byte outside well-formed UTF-8 is shown as U+FFFD. It can be read whole
// without its script, which filters and sorts. Pure; any thread.
std::string RenderComparePage(const RunComparison& comparison);

}  // namespace phraseweld

#endif  // PHRASEWELD_DELIVER_COMPARE_PAGE_H_
