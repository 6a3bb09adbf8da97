#ifndef PHRASEWELD_TESTS_AGREEMENT_RANDOM_JOB_H_
#define PHRASEWELD_TESTS_AGREEMENT_RANDOM_JOB_H_

#include <cstdint>
#include <random>
#include <string>
#include <vector>

#include "base/job.h"
#include "reference/reference.h"

namespace phraseweld {

// Small corpora and jobs at random: few letters, many overlaps, all settings.
class RandomJobs {
 public:
  explicit RandomJobs(uint64_t seed) : random_(seed) {}

  Job NextJob();
  // One to three inputs in the job's layout.
  std::vector<RefInput> NextInputs(const Job& job);
  uint64_t Below(uint64_t limit) { return random_() % limit; }

 private:
  bool Chance(int percent) { return Below(100) < static_cast<uint64_t>(percent); }
  template <typename T>
  const T& Pick(const std::vector<T>& from) {
    return from[Below(from.size())];
  }
  std::string Text(int words, bool line_breaks);
  std::string JsonString(const std::string& text);
  std::string JsonDocument(const Job& job, int number);
  std::string Words(int count);
  std::vector<Gate> Gates();

  std::mt19937_64 random_;
  int alphabet_ = 4;
  bool hostile_ = false;
};

// The fixed word list that texts are made of.
const std::vector<std::string>& AgreementWords();

}  // namespace phraseweld

#endif  // PHRASEWELD_TESTS_AGREEMENT_RANDOM_JOB_H_
