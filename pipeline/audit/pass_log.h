#ifndef PHRASEWELD_AUDIT_PASS_LOG_H_
#define PHRASEWELD_AUDIT_PASS_LOG_H_

#include <functional>
#include <string>
#include <string_view>

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

// The bytes of a pass's audit log, handed to `append` in pieces, in order.
absl::Status WritePassLog(const PassRecord& pass, const PassLogContext& context,
                          const std::function<absl::Status(std::string_view)>& append);

// An error that names the first sum that does not hold: tokens in - absorbed = tokens out, joined
// as the accepted types add up to, joined <= n for each.
absl::Status CheckBalance(const PassRecord& pass, const BridgeCodes& codes);

}  // namespace phraseweld

#endif  // PHRASEWELD_AUDIT_PASS_LOG_H_
