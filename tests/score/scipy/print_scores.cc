// Scores for scipy_check.py. Standard input holds lines "n left right total"; each is answered with
// "pmi npmi g2 chi2 lower" in 17 digits, `lower` being PoissonLower95(n).

#include <iomanip>
#include <iostream>

#include "base/quantity.h"
#include "base/table.h"
#include "score/measures.h"

int main() {
  using phraseweld::Quantity;
  phraseweld::SlotTable table;
  std::cout << std::setprecision(17);
  while (std::cin >> table.n >> table.left >> table.right >> table.total) {
    table.all = table.total;
    for (const Quantity quantity :
         {Quantity::kPmi, Quantity::kNpmi, Quantity::kG2, Quantity::kChi2}) {
      std::cout << phraseweld::Score(quantity, table) << ' ';
    }
    std::cout << phraseweld::PoissonLower95(table.n) << '\n';
  }
  return std::cin.eof() ? 0 : 1;
}
