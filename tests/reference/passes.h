#ifndef PHRASEWELD_TESTS_REFERENCE_PASSES_H_
#define PHRASEWELD_TESTS_REFERENCE_PASSES_H_

#include <cstddef>
#include <cstdint>
#include <map>
#include <optional>
#include <string>
#include <vector>

#include "base/job.h"
#include "reference/corpus.h"
#include "reference/lists.h"
#include "reference/measures.h"
#include "reference/slots.h"

namespace phraseweld::reference {

// A slot type of a pass and what is said of it.
struct Candidate {
  SlotType type;
  Counts counts;
  std::map<Quantity, double> values;
  std::string first_document;  // the first slot in corpus order
  std::string first_passage;
  size_t first_byte = 0;

  std::vector<Quantity> failed_gates;
  bool breaks_a_rule = false;  // too long, a number on the left, or ruled never
  uint64_t joined = 0;
  uint64_t yielded = 0;
};

// A pass that was carried out.
struct PassRecord {
  int number = 0;
  PassOptions options;
  uint64_t tokens_in = 0;
  uint64_t types_in = 0;
  uint64_t slots = 0;
  uint64_t slot_types = 0;
  std::vector<Candidate> accepted;     // in rank order
  std::vector<Candidate> near_misses;  // in rank order, at most 200
  uint64_t tokens_out = 0;
};

// An always-ruling that was carried out in pass 0.
struct RuledRecord {
  AlwaysRuling ruling;
  uint64_t joined = 0;
  uint64_t documents = 0;
};

struct RulingsRecord {
  uint64_t tokens_in = 0;
  uint64_t types_in = 0;
  std::vector<RuledRecord> ruled;
  uint64_t tokens_out = 0;
};

// Pass 0: joins what is ruled always, in the documents' streams.
RulingsRecord JoinRulings(const Job& job, const Lists& lists, std::vector<Document>& documents);

// One pass over the documents' streams: counts, scores, accepts and merges.
PassRecord CarryOutPass(const Job& job, const PassOptions& options, int number, const Lists& lists,
                        std::vector<Document>& documents);

}  // namespace phraseweld::reference

#endif  // PHRASEWELD_TESTS_REFERENCE_PASSES_H_
