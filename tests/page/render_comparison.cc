// render_comparison ROWS FILE: writes the page of an invented comparison with ROWS phrases in each
// list, some of them hostile, for the browser test to open.

#include <charconv>
#include <cstdint>
#include <fstream>
#include <iostream>
#include <string>
#include <string_view>

#include "absl/strings/str_cat.h"
#include "base/hash.h"
#include "deliver/compare_page.h"

namespace phraseweld {
namespace {

constexpr std::string_view kHostile[] = {
    "<script>window.broken=1</script> x",
    "</td></table><img/src=x/onerror=window.broken=1>",
    "\" onmouseover=\"window.broken=1",
    "\xD7\xA8\xD7\x95\xD7\x97 \xD7\xA6\xD7\xA4\xD7\x95\xD7\x9F",  // Hebrew: north wind
    "\xE2\x80\xAEgnirts \xF0\x9F\x8C\xAC\xEF\xB8\x8F",  // starts with a right-to-left override
    "<!-- --> &amp; \xFF\x01"};

ComparedPhrase Phrase(std::string_view list, size_t i) {
  const uint64_t dice = Mix64(i * 0x9E3779B97F4A7C15u + list.size());
  ComparedPhrase phrase;
  phrase.phrase = i < std::size(kHostile) ? std::string(kHostile[i])
                                          : absl::StrCat(std::string(list), " mill", i, " wheel");
  phrase.words = 3;
  phrase.pass = 1 + static_cast<int>(dice % 4);
  phrase.rank = i + 1;
  phrase.occurrences = 5 + dice % 4000;
  phrase.documents = 1 + phrase.occurrences / 3;
  phrase.scores = {{Quantity::kPmi, static_cast<double>(dice % 1000) / 100}};
  return phrase;
}

RunComparison Sample(size_t rows) {
  RunComparison comparison;
  comparison.left = {"runs/mill-may", "mill", "0.1.0", 1200, 480000, 3, rows * 2, 52000};
  comparison.right = {"runs/mill-june", "mill", "0.1.0", 1900, 731000, 3, rows * 2, 81000};
  for (size_t i = 0; i < rows; ++i) {
    comparison.gained.push_back(
        {Phrase("gained", i), Absence::kGate, "left: documents 2 < 3 in pass 1; right: 5 >= 3"});
    comparison.lost.push_back({Phrase("lost", i), Absence::kCorpus, std::string(kHostile[i % 6])});
    KeptPhrase kept{Phrase("kept", i), Phrase("kept", i), i % 2 == 0};
    if (kept.changed) kept.right.occurrences += 7 * (i + 1);
    comparison.kept_changed += kept.changed;
    comparison.kept.push_back(kept);
  }
  comparison.keys = {{"passes.0.accept.pmi", "5", "4.5", true},
                     {"limits.threads", "0", "4", false},
                     {"passes.1.name", std::nullopt, std::string(kHostile[0]), true}};
  comparison.inputs = {{std::string(kHostile[1]), InputChange::kAdded, 0, 188123}};
  comparison.agreements = {{"occurrences", rows, 0.981, 0.921}, {"pmi", rows, 1.0, 1.0}};
  return comparison;
}

}  // namespace
}  // namespace phraseweld

int main(int argc, char** argv) {
  size_t rows = 0;
  const std::string_view wanted = argc == 3 ? argv[1] : "";
  const auto parsed = std::from_chars(wanted.data(), wanted.data() + wanted.size(), rows);
  if (wanted.empty() || parsed.ec != std::errc() || parsed.ptr != wanted.data() + wanted.size()) {
    std::cerr << "usage: render_comparison ROWS FILE\n";
    return 2;
  }
  std::ofstream file(argv[2], std::ios::binary);
  file << phraseweld::RenderComparePage(phraseweld::Sample(rows));
  file.close();
  if (!file) {
    std::cerr << "render_comparison: cannot write " << argv[2] << "\n";
    return 1;
  }
  return 0;
}
