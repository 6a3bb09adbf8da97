#include "run/ranking_quality.h"

#include <algorithm>
#include <cstddef>

namespace phraseweld {

void SortByScore(std::vector<RankedPhrase>* phrases) {
  std::sort(phrases->begin(), phrases->end(), [](const RankedPhrase& a, const RankedPhrase& b) {
    if (a.score != b.score) return a.score > b.score;  // none is less than any
    if (a.n != b.n) return a.n > b.n;
    return a.phrase < b.phrase;
  });
}

std::vector<GradeCutoff> CutOff(const std::vector<RankedPhrase>& ranking) {
  std::vector<GradeCutoff> cutoffs;
  uint64_t hits = 0;
  for (size_t i = 0; i < ranking.size(); ++i) {
    hits += ranking[i].hit ? 1 : 0;
    const uint64_t best = i + 1;
    if (std::find(std::begin(kGradeCutoffs), std::end(kGradeCutoffs), best) !=
        std::end(kGradeCutoffs)) {
      cutoffs.push_back({best, hits});
    }
  }
  return cutoffs;
}

double AveragePrecision(const std::vector<RankedPhrase>& ranking, uint64_t relevant) {
  double sum = 0;
  uint64_t hits = 0;
  for (size_t i = 0; i < ranking.size(); ++i) {
    if (!ranking[i].hit) continue;
    ++hits;
    sum += static_cast<double>(hits) / static_cast<double>(i + 1);
  }
  return relevant == 0 ? 0 : sum / static_cast<double>(relevant);
}

double F1(uint64_t hits, uint64_t chosen, uint64_t relevant) {
  if (chosen + relevant == 0) return 0;
  return 2 * static_cast<double>(hits) / static_cast<double>(chosen + relevant);
}

GradeGate BestGate(Quantity on, const std::vector<RankedPhrase>& ranking, uint64_t relevant) {
  GradeGate best;
  best.on = on;
  best.average_precision = AveragePrecision(ranking, relevant);
  uint64_t hits = 0;
  for (size_t i = 0; i < ranking.size(); ++i) {
    hits += ranking[i].hit ? 1 : 0;
    if (i + 1 < ranking.size() && ranking[i + 1].score == ranking[i].score) continue;
    if (best.chosen > 0 && F1(hits, i + 1, relevant) <= F1(best.hits, best.chosen, relevant)) {
      continue;
    }
    best.least = *ranking[i].score;
    best.chosen = i + 1;
    best.hits = hits;
  }
  return best;
}

}  // namespace phraseweld
