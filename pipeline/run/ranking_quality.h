#ifndef PHRASEWELD_RUN_RANKING_QUALITY_H_
#define PHRASEWELD_RUN_RANKING_QUALITY_H_

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "run/grade.h"

namespace phraseweld {

// A phrase to be ranked.
struct RankedPhrase {
  std::string phrase;
  bool hit = false;
  std::optional<double> score;  // none: behind all that have one
  uint64_t n = 0;
};

// Higher scores first, then larger n, then by text.
void SortByScore(std::vector<RankedPhrase>* phrases);

// Hits at the cut-offs that the ranking reaches.
std::vector<GradeCutoff> CutOff(const std::vector<RankedPhrase>& ranking);

// Out of `relevant` phrases in all; 0 where there are none.
double AveragePrecision(const std::vector<RankedPhrase>& ranking, uint64_t relevant);

// The lowest score at which to keep phrases so that F1 is highest; of equally good ones the
// highest. `ranking` is sorted, all have scores. Phrases with one score are kept or dropped
// together.
GradeGate BestGate(Quantity on, const std::vector<RankedPhrase>& ranking, uint64_t relevant);

// 2PR/(P+R) = 2*hits / (chosen + relevant); 0 where both are 0.
double F1(uint64_t hits, uint64_t chosen, uint64_t relevant);

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_RANKING_QUALITY_H_
