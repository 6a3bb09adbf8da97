#ifndef PHRASEWELD_BASE_QUANTITY_H_
#define PHRASEWELD_BASE_QUANTITY_H_

#include <array>
#include <optional>
#include <string_view>

namespace phraseweld {

// What a gate can ask for: two plain counts, and the measures. The order is the order of the
// columns wherever several are printed.
enum class Quantity : int {
  kOccurrences,
  kDocuments,
  kPmi,
  kNpmi,
  kPmi2,
  kPmi3,
  kPmiFloor,
  kG2,
  kChi2,
  kT,
  kDice,
  kDpForward,
  kDpBackward,
  kBurst,
};

inline constexpr std::array<std::string_view, 14> kQuantityNames = {
    "occurrences", "documents", "pmi", "npmi", "pmi2",       "pmi3",        "pmi_floor",
    "g2",          "chi2",      "t",   "dice", "dp_forward", "dp_backward", "burst"};

inline constexpr int kQuantities = static_cast<int>(kQuantityNames.size());

constexpr std::string_view QuantityName(Quantity quantity) {
  return kQuantityNames[static_cast<size_t>(quantity)];
}

constexpr std::optional<Quantity> QuantityFromName(std::string_view name) {
  for (int i = 0; i < kQuantities; ++i) {
    if (kQuantityNames[static_cast<size_t>(i)] == name) return static_cast<Quantity>(i);
  }
  return std::nullopt;
}

// A measure is a quantity that can rank slot types; the two counts cannot.
constexpr bool IsMeasure(Quantity quantity) { return quantity >= Quantity::kPmi; }

}  // namespace phraseweld

#endif  // PHRASEWELD_BASE_QUANTITY_H_
