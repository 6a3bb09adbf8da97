#ifndef PHRASEWELD_SCORE_CHOOSER_H_
#define PHRASEWELD_SCORE_CHOOSER_H_

#include <cstdint>
#include <optional>
#include <vector>

#include "absl/container/flat_hash_map.h"
#include "absl/status/statusor.h"
#include "base/job.h"
#include "base/parallel.h"
#include "base/slots.h"
#include "base/table.h"
#include "base/types.h"

namespace phraseweld {

// The rules that a slot type must meet beside the gates.
struct PhraseRules {
  const TypeTable* types = nullptr;
  const BridgeCodes* codes = nullptr;
  int longest = 6;
  const TypeBits* numbers_not_first = nullptr;  // null: numbers may stand first
  // Word sequences that are never made -> place of the ruling.
  absl::flat_hash_map<std::vector<uint32_t>, size_t> never;
  // For `margins: words`: tokens of each type, and of all types.
  const std::vector<uint64_t>* token_frequency = nullptr;
  uint64_t tokens = 0;
};

// A slot type that may be accepted or be a near miss.
struct Candidate {
  Slot slot;
  SlotTable table;
  double score = 0;                // of rank_by
  std::optional<Quantity> failed;  // the one gate that turned it away; not known to be final yet
  uint64_t first = 0;              // stream position of its first slot
  uint32_t place = 0;              // in the caller's list of candidates
};

// The one total order among slot types: score, n, text, left side's text, bridge's text, and then
// the words one by one (two different phrases can have one text, since forms may hold spaces).
class RankOrder {
 public:
  RankOrder(const TypeTable& types, const BridgeCodes& codes) : types_(&types), codes_(&codes) {}
  bool operator()(const Candidate& a, const Candidate& b) const;

 private:
  const TypeTable* types_;
  const BridgeCodes* codes_;
};

// What a pass decided.
struct Choice {
  std::vector<Candidate> accepted;     // in rank order
  std::vector<Candidate> near_misses;  // in rank order, at most kMostNearMisses
  std::vector<bool> never_used;        // a never-ruling that turned away a type that met all else
};

inline constexpr size_t kMostNearMisses = 200;

// Applies a pass's gates. First Consider() for every slot type with enough occurrences; then
// Pending() holds those for which `documents` is wanted; with them filled in, Choose() decides.
//
// Documents cost a scan of the stream, so only types that can still be accepted or be a near miss
// get there. Of those that fail a gate already only the best `near_capacity` of a lane are kept; if
// that turns out to be too few, Choose() says so and the caller starts over with more.
class Chooser {
 public:
  Chooser(const PassOptions& pass, const PhraseRules& rules, size_t never_rulings, int lanes,
          size_t near_capacity);

  // The smallest number of occurrences that any candidate must have.
  uint64_t least_occurrences() const { return least_occurrences_; }
  // Calls of different lanes may overlap.
  void Consider(int lane, const Slot& slot, SlotTable table);
  std::vector<Candidate> Pending();
  // nullopt: near misses may be missing.
  absl::StatusOr<std::optional<Choice>> Choose(Lanes& lanes, std::vector<Candidate> pending) const;

 private:
  struct Lane {
    std::vector<Candidate> passing;
    std::vector<Candidate> failing;
    std::optional<Candidate> worst_kept;  // set once something was dropped
    std::vector<bool> never_used;
  };
  bool IsLate(Quantity quantity) const {
    return quantity == Quantity::kDocuments || quantity == Quantity::kBurst;
  }
  void Trim(Lane* lane);
  absl::Status SortByRank(Lanes& lanes, const std::vector<Candidate>& pending,
                          std::vector<uint32_t>* places) const;

  const PassOptions& pass_;
  const PhraseRules& rules_;
  const RankOrder order_;
  const size_t near_capacity_;
  uint64_t least_occurrences_ = 1;
  uint64_t least_documents_ = 0;
  bool ranks_late_ = false;
  std::vector<Lane> lanes_;
  std::optional<Candidate> bound_;  // near misses that rank after it may be missing
};

}  // namespace phraseweld

#endif  // PHRASEWELD_SCORE_CHOOSER_H_
