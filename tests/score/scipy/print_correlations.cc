// Rank correlations for correlation_check.py. Standard input holds cases: a number of things, then
// their first values, then their second ones. Each is answered with "rho tau" in 17 digits, nan
// where one is not defined.

#include <cmath>
#include <cstddef>
#include <iomanip>
#include <iostream>
#include <vector>

#include "score/rank_correlation.h"

int main() {
  size_t size = 0;
  std::cout << std::setprecision(17);
  while (std::cin >> size) {
    std::vector<double> a(size), b(size);
    for (double& value : a) std::cin >> value;
    for (double& value : b) std::cin >> value;
    std::cout << phraseweld::SpearmanRho(a, b).value_or(NAN) << ' '
              << phraseweld::KendallTauB(a, b).value_or(NAN) << '\n';
  }
  return std::cin.eof() ? 0 : 1;
}
