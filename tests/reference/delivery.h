#ifndef PHRASEWELD_TESTS_REFERENCE_DELIVERY_H_
#define PHRASEWELD_TESTS_REFERENCE_DELIVERY_H_

#include <cstddef>
#include <string>
#include <vector>

#include "base/job.h"
#include "reference/corpus.h"
#include "reference/reference.h"

namespace phraseweld::reference {

// Section 10, `source`: the file of input `input` with the gaps inside merged tokens replaced.
std::string SourceWithJoiners(const Job& job, const RefInput& file, size_t input,
                              const std::vector<Document>& documents);

// Section 10, `words`: a line a document of the input.
std::string WordsOfInput(const Job& job, size_t input, const std::vector<Document>& documents);

// Section 10, `spans`: a line a passage of the corpus.
std::string Spans(const std::vector<Document>& documents);

}  // namespace phraseweld::reference

#endif  // PHRASEWELD_TESTS_REFERENCE_DELIVERY_H_
