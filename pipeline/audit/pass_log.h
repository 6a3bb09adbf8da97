#ifndef PHRASEWELD_AUDIT_PASS_LOG_H_
#define PHRASEWELD_AUDIT_PASS_LOG_H_

#include <functional>
#include <string>
#include <vector>

#include "absl/status/status.h"
#include "base/records.h"
#include "base/slots.h"
#include "base/types.h"

namespace phraseweld {

// What the audit log needs to know beside the record of a pass.
struct PassLogContext {
  const TypeTable* types = nullptr;
  const BridgeCodes* codes = nullptr;
  ScoreWriter scores;
  std::function<const Place&(uint64_t first)> place_of;  // of a stream position
};

// "pass-01.jsonl"
std::string PassLogName(int pass);

// A pass's audit log is its head (the `pass` line and the rulings), a line for each accepted type
// and then for each near miss, both in rank order, and its tail (the `balance` line). Every line
// ends in a line feed. Lines do not depend on each other, so they may be made side by side.
std::string PassLogHead(const PassRecord& pass, const PassLogContext& context);
// `shown`: ShownMeasures() of the pass. `rank` counts from 1 in its list.
void AppendSlotLine(const SlotRecord& record, uint64_t rank, const std::vector<Quantity>& shown,
                    const PassLogContext& context, std::string* out);
std::string PassLogTail(const PassRecord& pass);

// An error that names the first sum that does not hold: tokens in - absorbed = tokens out, joined
// as the accepted types add up to, joined <= n for each.
absl::Status CheckBalance(const PassRecord& pass, const BridgeCodes& codes);

}  // namespace phraseweld

#endif  // PHRASEWELD_AUDIT_PASS_LOG_H_
