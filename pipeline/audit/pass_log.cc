#include "audit/pass_log.h"

#include "absl/strings/str_cat.h"
#include "absl/strings/str_format.h"
#include "base/json.h"

namespace phraseweld {
namespace {

std::string PassLine(const PassRecord& pass, const ScoreWriter& scores) {
  std::string out = "{";
  AppendJsonString(&out, "kind", "pass");
  AppendJsonCount(&out, "pass", static_cast<uint64_t>(pass.number));
  AppendJsonString(&out, "name", pass.options.name);
  AppendJsonCount(&out, "tokens_in", pass.tokens_in);
  AppendJsonCount(&out, "types_in", pass.types_in);
  if (pass.number > 0) {
    AppendJsonCount(&out, "slots", pass.slots);
    AppendJsonCount(&out, "slot_types", pass.slot_types);
    AppendJsonString(&out, "rank_by", QuantityName(pass.options.rank_by));
    AppendJsonKey(&out, "accept");
    out += '{';
    for (const Gate& gate : pass.options.accept) {
      AppendJsonKey(&out, QuantityName(gate.quantity));
      out += scores.format(gate.least);
    }
    out += '}';
  }
  out += "}\n";
  return out;
}

}  // namespace

void AppendSlotLine(const SlotRecord& record, uint64_t rank, const std::vector<Quantity>& shown,
                    const PassLogContext& context, std::string* out) {
  const TypeTable& types = *context.types;
  const SlotTable& table = record.table;
  *out += '{';
  AppendJsonString(out, "kind", record.failed ? "near_miss" : "accepted");
  AppendJsonCount(out, "rank", rank);
  const std::string left = types.Text(record.slot.left), right = types.Text(record.slot.right);
  const std::string bridge = types.Text(context.codes->Words(record.slot.bridge));
  AppendJsonKey(out, "phrase");
  *out += '"';
  AppendJsonText(out, left);
  if (!bridge.empty()) *out += ' ';
  AppendJsonText(out, bridge);
  *out += ' ';
  AppendJsonText(out, right);
  *out += '"';
  AppendJsonString(out, "left", left);
  AppendJsonString(out, "bridge", bridge);
  AppendJsonString(out, "right", right);
  AppendJsonCount(out, "n", table.n);
  AppendJsonCount(out, "left_slots", table.left);
  AppendJsonCount(out, "right_slots", table.right);
  AppendJsonCount(out, "slots", table.total);
  AppendJsonKey(out, "expected");
  *out += context.scores.format(context.scores.expected(table));
  AppendJsonCount(out, "documents", table.documents);
  AppendJsonKey(out, "scores");
  *out += '{';
  for (Quantity quantity : shown) {
    AppendJsonKey(out, QuantityName(quantity));
    *out += context.scores.format(context.scores.score(quantity, table));
  }
  *out += '}';
  AppendJsonCount(out, "joined", record.joined);
  AppendJsonCount(out, "yielded", record.failed ? 0 : table.n - record.joined);
  const Place& place = context.place_of(record.first);
  AppendJsonKey(out, "first");
  *out += '{';
  AppendJsonString(out, "document", place.document);
  AppendJsonString(out, "passage", place.passage);
  AppendJsonCount(out, "byte", place.byte);
  *out += '}';
  if (record.failed) AppendJsonString(out, "failed", QuantityName(*record.failed));
  *out += "}\n";
}

std::string PassLogTail(const PassRecord& pass) {
  std::string out = "{";
  AppendJsonString(&out, "kind", "balance");
  AppendJsonCount(&out, "pass", static_cast<uint64_t>(pass.number));
  AppendJsonCount(&out, "tokens_in", pass.tokens_in);
  AppendJsonCount(&out, "accepted", pass.number == 0 ? pass.ruled.size() : pass.accepted.size());
  AppendJsonCount(&out, "joined", pass.joined);
  AppendJsonCount(&out, "words_absorbed", pass.words_absorbed);
  AppendJsonCount(&out, "tokens_out", pass.tokens_out);
  out += "}\n";
  return out;
}

std::string PassLogName(int pass) { return absl::StrFormat("pass-%02d.jsonl", pass); }

std::string PassLogHead(const PassRecord& pass, const PassLogContext& context) {
  std::string out = PassLine(pass, context.scores);
  for (const RuledRecord& ruled : pass.ruled) {
    out += '{';
    AppendJsonString(&out, "kind", "ruled");
    AppendJsonString(&out, "phrase", ruled.text);
    AppendJsonCount(&out, "joined", ruled.joined);
    AppendJsonCount(&out, "documents", ruled.documents);
    if (!ruled.reason.empty()) AppendJsonString(&out, "reason", ruled.reason);
    out += "}\n";
  }
  return out;
}

absl::Status CheckBalance(const PassRecord& pass, const BridgeCodes& codes) {
  uint64_t joined = 0, absorbed = 0;
  for (const SlotRecord& record : pass.accepted) {
    if (record.joined > record.table.n) {
      return absl::InternalError(absl::StrCat("pass ", pass.number, ": ", record.joined,
                                              " slots joined of a type that has ", record.table.n));
    }
    joined += record.joined;
    absorbed += record.joined * static_cast<uint64_t>(1 + codes.Length(record.slot.bridge));
  }
  if (pass.number > 0 && (joined != pass.joined || absorbed != pass.words_absorbed)) {
    return absl::InternalError(absl::StrCat("pass ", pass.number, ": joined ", pass.joined,
                                            " but the accepted types add up to ", joined));
  }
  if (pass.tokens_in - pass.words_absorbed != pass.tokens_out) {
    return absl::InternalError(absl::StrCat("pass ", pass.number, ": ", pass.tokens_in, " - ",
                                            pass.words_absorbed, " is not ", pass.tokens_out));
  }
  return absl::OkStatus();
}

}  // namespace phraseweld
