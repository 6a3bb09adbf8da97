#include "score/rank_correlation.h"

#include <algorithm>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <numeric>
#include <utility>
#include <vector>

namespace phraseweld {
namespace {

// Ranks from 1, times two so that a shared rank is a whole number.
std::vector<double> DoubledRanks(absl::Span<const double> values) {
  std::vector<size_t> order(values.size());
  std::iota(order.begin(), order.end(), size_t{0});
  std::sort(order.begin(), order.end(), [&](size_t x, size_t y) { return values[x] < values[y]; });
  std::vector<double> ranks(values.size());
  for (size_t begin = 0, end = 0; begin < order.size(); begin = end) {
    while (end < order.size() && values[order[end]] == values[order[begin]]) ++end;
    for (size_t i = begin; i < end; ++i) ranks[order[i]] = static_cast<double>(begin + 1 + end);
  }
  return ranks;
}

uint64_t Pairs(uint64_t things) { return things * (things - 1) / 2; }

// Pairs of things that are equal, in a list whose equal things stand together.
template <typename Equal>
uint64_t TiedPairs(size_t size, Equal&& equal) {
  uint64_t pairs = 0;
  for (size_t begin = 0, end = 0; begin < size; begin = end) {
    while (end < size && equal(begin, end)) ++end;
    pairs += Pairs(end - begin);
  }
  return pairs;
}

// Sorts `values` and returns how many pairs stood the wrong way round: the exchanges that sorting
// by swaps of neighbours would take.
uint64_t SortCountingExchanges(std::vector<double>* values) {
  std::vector<double> merged(values->size());
  uint64_t exchanges = 0;
  for (size_t width = 1; width < values->size(); width *= 2) {
    for (size_t begin = 0; begin < values->size(); begin += 2 * width) {
      const size_t middle = std::min(begin + width, values->size());
      const size_t end = std::min(begin + 2 * width, values->size());
      size_t left = begin, right = middle;
      for (size_t to = begin; to < end; ++to) {
        if (right == end || (left < middle && (*values)[left] <= (*values)[right])) {
          merged[to] = (*values)[left++];
        } else {
          exchanges += middle - left;
          merged[to] = (*values)[right++];
        }
      }
    }
    values->swap(merged);
  }
  return exchanges;
}

}  // namespace

std::optional<double> SpearmanRho(absl::Span<const double> a, absl::Span<const double> b) {
  const std::vector<double> ranks_a = DoubledRanks(a), ranks_b = DoubledRanks(b);
  const double mean = static_cast<double>(a.size() + 1);  // of doubled ranks
  double both = 0, of_a = 0, of_b = 0;
  for (size_t i = 0; i < a.size(); ++i) {
    both += (ranks_a[i] - mean) * (ranks_b[i] - mean);
    of_a += (ranks_a[i] - mean) * (ranks_a[i] - mean);
    of_b += (ranks_b[i] - mean) * (ranks_b[i] - mean);
  }
  if (of_a == 0 || of_b == 0) return std::nullopt;
  return std::clamp(both / std::sqrt(of_a * of_b), -1.0, 1.0);
}

std::optional<double> KendallTauB(absl::Span<const double> a, absl::Span<const double> b) {
  const size_t size = a.size();
  std::vector<std::pair<double, double>> points(size);
  for (size_t i = 0; i < size; ++i) points[i] = {a[i], b[i]};
  std::sort(points.begin(), points.end());
  const uint64_t tied_a =
      TiedPairs(size, [&](size_t i, size_t j) { return points[i].first == points[j].first; });
  const uint64_t tied_both =
      TiedPairs(size, [&](size_t i, size_t j) { return points[i] == points[j]; });
  std::vector<double> seconds(size);
  for (size_t i = 0; i < size; ++i) seconds[i] = points[i].second;
  const uint64_t exchanges = SortCountingExchanges(&seconds);
  const uint64_t tied_b =
      TiedPairs(size, [&](size_t i, size_t j) { return seconds[i] == seconds[j]; });
  const uint64_t pairs = size < 2 ? 0 : Pairs(size);
  if (pairs == tied_a || pairs == tied_b) return std::nullopt;
  // Concordant less discordant pairs.
  const double agreement = static_cast<double>(pairs) - static_cast<double>(tied_a) -
                           static_cast<double>(tied_b) + static_cast<double>(tied_both) -
                           2 * static_cast<double>(exchanges);
  // The root of a square is exact, so that equal orders give exactly 1.
  return std::clamp(agreement / std::sqrt(static_cast<double>(pairs - tied_a) *
                                          static_cast<double>(pairs - tied_b)),
                    -1.0, 1.0);
}

}  // namespace phraseweld
