#include "reference/audit.h"

#include <set>

#include "reference/json_writer.h"

namespace phraseweld::reference {
namespace {

std::string AcceptOf(const PassOptions& options) {
  JsonObject accept;
  for (int i = 0; i < kQuantities; ++i) {
    const auto quantity = static_cast<Quantity>(i);
    for (const Gate& gate : options.accept) {
      if (gate.quantity == quantity) accept.Decimal(QuantityName(quantity), gate.least);
    }
  }
  return accept.Finish();
}

// An accepted or a near_miss line, up to and with `first`.
JsonObject LineOf(std::string_view kind, size_t rank, const Candidate& candidate,
                  const PassOptions& options) {
  JsonObject first;
  first.Text("document", candidate.first_document);
  first.Text("passage", candidate.first_passage);
  first.Count("byte", candidate.first_byte);

  JsonObject line;
  line.Text("kind", kind);
  line.Count("rank", rank);
  line.Text("phrase", Text(PhraseOf(candidate.type)));
  line.Text("left", Text(candidate.type.left));
  line.Text("bridge", Text(candidate.type.bridge));
  line.Text("right", Text(candidate.type.right));
  line.Count("n", candidate.counts.n);
  line.Count("left_slots", candidate.counts.L);
  line.Count("right_slots", candidate.counts.R);
  line.Count("slots", candidate.counts.N);
  line.Decimal("expected", Expected(candidate.counts));
  line.Count("documents", candidate.counts.documents);
  line.Json("scores", ScoresOf(candidate, options));
  line.Count("joined", candidate.joined);
  line.Count("yielded", candidate.yielded);
  line.Json("first", first.Finish());
  return line;
}

std::string BalanceOf(int pass, uint64_t tokens_in, uint64_t accepted, uint64_t joined,
                      uint64_t words_absorbed, uint64_t tokens_out) {
  JsonObject balance;
  balance.Text("kind", "balance");
  balance.Count("pass", static_cast<uint64_t>(pass));
  balance.Count("tokens_in", tokens_in);
  balance.Count("accepted", accepted);
  balance.Count("joined", joined);
  balance.Count("words_absorbed", words_absorbed);
  balance.Count("tokens_out", tokens_out);
  return balance.Finish();
}

}  // namespace

std::string ScoresOf(const Candidate& candidate, const PassOptions& options) {
  std::set<Quantity> others = {options.rank_by};
  for (const Gate& gate : options.accept) others.insert(gate.quantity);
  JsonObject scores;
  const auto add = [&](Quantity quantity) {
    scores.Decimal(QuantityName(quantity), candidate.values.at(quantity));
  };
  add(Quantity::kPmi);
  add(Quantity::kNpmi);
  add(Quantity::kG2);
  for (const Quantity quantity : others) {  // in the order of kQuantityNames
    if (!IsMeasure(quantity)) continue;
    if (quantity == Quantity::kPmi || quantity == Quantity::kNpmi || quantity == Quantity::kG2) {
      continue;
    }
    add(quantity);
  }
  return scores.Finish();
}

std::string AuditOfPass(const PassRecord& record) {
  JsonObject first_line;
  first_line.Text("kind", "pass");
  first_line.Count("pass", static_cast<uint64_t>(record.number));
  first_line.Text("name", record.options.name);
  first_line.Count("tokens_in", record.tokens_in);
  first_line.Count("types_in", record.types_in);
  first_line.Count("slots", record.slots);
  first_line.Count("slot_types", record.slot_types);
  first_line.Text("rank_by", QuantityName(record.options.rank_by));
  first_line.Json("accept", AcceptOf(record.options));
  std::string audit = first_line.Finish() + "\n";

  uint64_t joined = 0;
  uint64_t words_absorbed = 0;
  for (size_t i = 0; i < record.accepted.size(); ++i) {
    const Candidate& candidate = record.accepted[i];
    audit += LineOf("accepted", i + 1, candidate, record.options).Finish() + "\n";
    joined += candidate.joined;
    words_absorbed += candidate.joined * (1 + candidate.type.bridge.size());
  }
  for (size_t i = 0; i < record.near_misses.size(); ++i) {
    const Candidate& candidate = record.near_misses[i];
    JsonObject line = LineOf("near_miss", i + 1, candidate, record.options);
    line.Text("failed", QuantityName(candidate.failed_gates[0]));
    audit += line.Finish() + "\n";
  }
  audit += BalanceOf(record.number, record.tokens_in, record.accepted.size(), joined,
                     words_absorbed, record.tokens_out) +
           "\n";
  return audit;
}

std::string AuditOfRulings(const RulingsRecord& record) {
  JsonObject first_line;
  first_line.Text("kind", "pass");
  first_line.Count("pass", 0);
  first_line.Text("name", "rulings");
  first_line.Count("tokens_in", record.tokens_in);
  first_line.Count("types_in", record.types_in);
  std::string audit = first_line.Finish() + "\n";

  uint64_t joined = 0;
  uint64_t words_absorbed = 0;
  for (const RuledRecord& ruled : record.ruled) {
    JsonObject line;
    line.Text("kind", "ruled");
    line.Text("phrase", Text(ruled.ruling.forms));
    line.Count("joined", ruled.joined);
    line.Count("documents", ruled.documents);
    if (!ruled.ruling.reason.empty()) line.Text("reason", ruled.ruling.reason);
    audit += line.Finish() + "\n";
    joined += ruled.joined;
    words_absorbed += ruled.joined * (ruled.ruling.forms.size() - 1);
  }
  audit += BalanceOf(0, record.tokens_in, record.ruled.size(), joined, words_absorbed,
                     record.tokens_out) +
           "\n";
  return audit;
}

std::string AuditPath(int pass) {
  std::string path = "audit/pass-";
  if (pass < 10) path += "0";
  path += std::to_string(pass);
  return path + ".jsonl";
}

}  // namespace phraseweld::reference
