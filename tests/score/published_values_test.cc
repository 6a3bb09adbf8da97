// Every published value in published-values.json against our measures. Of the collection of 415
// values that the file was made from, 315 are compared here. The other 100 have no measure of ours
// and are counted by kind in the file's `left_out`:
//   43 upper Poisson limits (pmi_floor needs the lower one), 21 observed probabilities n/N (a
//   division), 19 values of Fisher's exact test, 10 critical values, 3 chi-squared values with the
//   correction of Yates, 3 values for pairs that never occur, 1 correction for a window's width.

#include <gtest/gtest.h>

#include <algorithm>
#include <cmath>
#include <cstdint>
#include <iostream>
#include <map>
#include <numbers>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "base/quantity.h"
#include "base/table.h"
#include "score/measures.h"
#include "simdjson.h"

namespace phraseweld {
namespace {

// Scores are rounded to 9 decimals, published values need not be.
constexpr double kRounding = 0.5000001e-9;

struct Row {
  std::string where;  // source and pair, for messages
  std::string check;
  SlotTable table;
  std::optional<double> printed;  // absent: the source gives a definition only
  double tolerance = 0;
  bool misprinted = false;
  double counts_give = 0;  // where misprinted
};

struct Collection {
  uint64_t collected = 0;
  uint64_t left_out = 0;
  std::vector<Row> rows;
};

uint64_t CountOr1(simdjson::dom::element row, std::string_view key) {
  uint64_t value = 1;
  if (row[key].get(value) != simdjson::SUCCESS) value = 1;
  return value;
}

Row ReadRow(std::string_view source, std::string_view check, simdjson::dom::element element) {
  Row row;
  row.check = check;
  std::string_view of = "";
  if (element["of"].get(of) != simdjson::SUCCESS) of = "a count";
  row.where = std::string(source) + " | " + std::string(of);
  row.table = {.n = CountOr1(element, "n"),
               .left = CountOr1(element, "left"),
               .right = CountOr1(element, "right"),
               .total = CountOr1(element, "total"),
               .all = CountOr1(element, "total"),
               .documents = 1};
  row.where += " | n = " + std::to_string(row.table.n);
  if (!element["printed"].is_null()) {
    row.printed = element["printed"].get_double().value();
    row.tolerance = element["tolerance"].get_double().value();
  }
  row.misprinted = element["counts_give"].get(row.counts_give) == simdjson::SUCCESS;
  return row;
}

Collection ReadCollection() {
  Collection collection;
  simdjson::dom::parser parser;
  const simdjson::dom::element root =
      parser.load(std::string(PHRASEWELD_SOURCE_DIR) + "/tests/score/published-values.json");
  collection.collected = root["collected"].get_uint64().value();
  for (const simdjson::dom::element kind : root["left_out"].get_array()) {
    collection.left_out += kind["rows"].get_uint64().value();
  }
  for (const simdjson::dom::element table : root["tables"].get_array()) {
    const std::string_view source = table["source"].get_string();
    const std::string_view check = table["check"].get_string();
    for (const simdjson::dom::element element : table["rows"].get_array()) {
      collection.rows.push_back(ReadRow(source, check, element));
    }
  }
  return collection;
}

// What our measures say where a table prints a value of the kind `check`; absent for a kind that
// has no such value. `scale` is by how much the rounding to 9 decimals is stretched.
std::optional<double> Computed(std::string_view check, const SlotTable& table, double* scale) {
  const double total = static_cast<double>(table.total);
  *scale = 1;
  if (const std::optional<Quantity> quantity = QuantityFromName(check)) {
    return Score(*quantity, table);
  }
  if (check == "pmi_natural") return Score(Quantity::kPmi, table) * std::numbers::ln2;
  if (check == "ppmi") return std::max(0.0, Score(Quantity::kPmi, table));
  if (check == "phi_squared") return Score(Quantity::kChi2, table) / total;
  if (check == "mutual_information") {
    return std::abs(Score(Quantity::kG2, table)) / (2 * total * std::numbers::ln2);
  }
  *scale = 0;
  if (check == "expected_probability") return Expected(table) / total;
  if (check == "poisson_lower") return PoissonLower95(table.n);
  if (check == "poisson_lower_per_n") {
    return PoissonLower95(table.n) / static_cast<double>(table.n);
  }
  return std::nullopt;
}

// Definitions without a printed value: the powers of PMI in the form that their papers give, from
// probabilities and from counts, and the one case that Bouma 2009 leaves open. Absent for others.
struct Definition {
  double ours;
  double theirs;
};

std::optional<Definition> DefinitionOf(std::string_view check, const SlotTable& table) {
  if (check == "npmi_convention") return Definition{Score(Quantity::kNpmi, table), 1};
  const double n = static_cast<double>(table.n);
  const double left = static_cast<double>(table.left);
  const double right = static_cast<double>(table.right);
  const double total = static_cast<double>(table.total);
  for (const int k : {2, 3}) {
    const double ours = Score(k == 2 ? Quantity::kPmi2 : Quantity::kPmi3, table);
    if (check == "pmi" + std::to_string(k) + "_definition") {
      return Definition{ours, std::log2(std::pow(n / total, k) / (left / total * right / total))};
    }
    if (check == "im" + std::to_string(k) + "_definition") {
      return Definition{ours + (k - 2) * std::log2(total),
                        std::log2(std::pow(n, k) / (left * right))};
    }
  }
  return std::nullopt;
}

TEST(PublishedValues, EveryRowAgreesWithinItsLastPrintedDigit) {
  const Collection collection = ReadCollection();
  std::map<std::string, int> checked;
  for (const Row& row : collection.rows) {
    SCOPED_TRACE(row.where);
    if (!row.printed.has_value()) {
      const std::optional<Definition> definition = DefinitionOf(row.check, row.table);
      ASSERT_TRUE(definition.has_value()) << "no check of the name " << row.check;
      EXPECT_NEAR(definition->ours, definition->theirs, 2 * kRounding);
      ++checked[row.check];
      continue;
    }
    double scale = 0;
    const std::optional<double> computed = Computed(row.check, row.table, &scale);
    ASSERT_TRUE(computed.has_value()) << "no check of the name " << row.check;
    const double tolerance = row.tolerance * (1 + 1e-9) + scale * kRounding;
    EXPECT_NEAR(*computed, row.misprinted ? row.counts_give : *row.printed, tolerance);
    ++checked[row.check];
  }
  uint64_t sum = 0;
  for (const auto& [check, count] : checked) {
    std::cout << "  " << count << " x " << check << "\n";
    sum += static_cast<uint64_t>(count);
  }
  std::cout << "  " << sum << " checked, " << collection.left_out << " left out\n";
  EXPECT_EQ(sum + collection.left_out, collection.collected)
      << "a published value is neither checked nor among those left out";
}

// A misprint that agrees after all would be an excuse for a wrong measure.
TEST(PublishedValues, MisprintsReallyDisagreeWithTheirCounts) {
  int misprints = 0;
  for (const Row& row : ReadCollection().rows) {
    if (!row.misprinted) continue;
    ++misprints;
    EXPECT_GT(std::abs(*row.printed - row.counts_give), 0.05) << row.where;
  }
  EXPECT_EQ(misprints, 2);
}

}  // namespace
}  // namespace phraseweld
