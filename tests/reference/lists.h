#ifndef PHRASEWELD_TESTS_REFERENCE_LISTS_H_
#define PHRASEWELD_TESTS_REFERENCE_LISTS_H_

#include <set>
#include <string>
#include <vector>

#include "base/job.h"
#include "reference/corpus.h"

namespace phraseweld::reference {

struct AlwaysRuling {
  Forms forms;
  std::string reason;  // empty: none given
};

// What a job and its corpus say about forms, once and for all passes.
struct Lists {
  std::set<std::string> function_words;
  std::set<std::string> numbers;
  std::set<Forms> never;
  std::vector<AlwaysRuling> always;  // in the order in which they are carried out
};

Lists MakeLists(const Job& job, const std::vector<Document>& documents);

bool IsFunctionWord(const Token& token, const Lists& lists);

// Whether the type is a single word that is a number.
bool IsSingleNumber(const Forms& type, const Lists& lists);

}  // namespace phraseweld::reference

#endif  // PHRASEWELD_TESTS_REFERENCE_LISTS_H_
