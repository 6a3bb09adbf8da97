#include "read/run_folder.h"

#include <algorithm>
#include <charconv>
#include <memory>
#include <optional>
#include <string_view>
#include <utility>

#include "base/status.h"
#include "base/strings.h"
#include "read/json_fields.h"
#include "read/json_lines.h"

namespace phraseweld {
namespace {

namespace dom = simdjson::dom;

void TakeQuantity(JsonFields& fields, std::string_view key, std::optional<Quantity>* quantity) {
  std::string name;
  fields.Take(key, &name);
  if (!fields.ok()) return;
  *quantity = QuantityFromName(name);
  if (!quantity->has_value()) fields.Fail(key, "the name of a measure or a count");
}

// {"pmi":5,...}: names of quantities with numbers.
template <typename Add>
void TakeQuantities(JsonFields& fields, std::string_view key, Add&& add) {
  dom::object object;
  if (!fields.Take(key, &object)) return;
  for (const auto [name, element] : object) {
    const std::optional<Quantity> quantity = QuantityFromName(name);
    double value = 0;
    if (!quantity.has_value() || element.get(value) != simdjson::SUCCESS) {
      fields.Fail(key, "a map from measures to numbers");
      return;
    }
    add(*quantity, value);
  }
}

void TakeScores(JsonFields& fields, std::vector<std::pair<Quantity, double>>* scores) {
  scores->clear();
  TakeQuantities(fields, "scores", [scores](Quantity quantity, double value) {
    scores->emplace_back(quantity, value);
  });
}

void TakeHead(JsonFields& fields, RunPassHead* head) {
  fields.Take("pass", &head->number);
  fields.Take("name", &head->name);
  fields.Take("tokens_in", &head->tokens_in);
  fields.Take("types_in", &head->types_in);
  if (!fields.ok() || head->number == 0) return;
  fields.Take("slots", &head->slots);
  fields.Take("slot_types", &head->slot_types);
  TakeQuantity(fields, "rank_by", &head->rank_by);
  TakeQuantities(fields, "accept", [head](Quantity quantity, double least) {
    head->accept.push_back({quantity, least});
  });
}

void TakeSlot(JsonFields& fields, bool near_miss, uint64_t all, RunSlot* slot) {
  fields.Take("rank", &slot->rank);
  fields.Take("phrase", &slot->phrase);
  fields.Take("left", &slot->left);
  fields.Take("bridge", &slot->bridge);
  fields.Take("right", &slot->right);
  fields.Take("n", &slot->table.n);
  fields.Take("left_slots", &slot->table.left);
  fields.Take("right_slots", &slot->table.right);
  fields.Take("slots", &slot->table.total);
  slot->table.all = all;
  fields.Take("expected", &slot->expected);
  fields.Take("documents", &slot->table.documents);
  TakeScores(fields, &slot->scores);
  fields.Take("joined", &slot->joined);
  fields.Take("yielded", &slot->yielded);
  dom::object place;
  if (fields.Take("first", &place)) {
    std::string fault;
    JsonFields first(place, &fault);
    first.Take("document", &slot->first.document);
    first.Take("passage", &slot->first.passage);
    first.Take("byte", &slot->first.byte);
    if (!fault.empty()) fields.Fail("first", Concat("a place: ", fault));
  }
  slot->failed.reset();
  if (near_miss) TakeQuantity(fields, "failed", &slot->failed);
}

void TakeRuled(JsonFields& fields, RunRuled* ruled) {
  fields.Take("phrase", &ruled->phrase);
  fields.Take("joined", &ruled->joined);
  fields.Take("documents", &ruled->documents);
  ruled->reason.clear();
  fields.TakeIfThere("reason", &ruled->reason);
}

void TakeBalance(JsonFields& fields, RunBalance* balance) {
  fields.Take("tokens_in", &balance->tokens_in);
  fields.Take("accepted", &balance->accepted);
  fields.Take("joined", &balance->joined);
  fields.Take("words_absorbed", &balance->words_absorbed);
  fields.Take("tokens_out", &balance->tokens_out);
}

void TakePhrase(JsonFields& fields, RunPhrase* phrase) {
  fields.Take("phrase", &phrase->phrase);
  fields.Take("words", &phrase->words);
  fields.Take("pass", &phrase->pass);
  fields.Take("occurrences", &phrase->occurrences);
  fields.Take("inside_longer", &phrase->inside_longer);
  fields.Take("documents", &phrase->documents);
  fields.Take("surface", &phrase->surface);
  phrase->made_of.clear();
  dom::array made_of;
  if (fields.Take("made_of", &made_of)) {
    for (const dom::element element : made_of) {
      std::string fault;
      dom::object object;
      if (element.get(object) != simdjson::SUCCESS) {
        fields.Fail("made_of", "an array of objects");
        return;
      }
      RunDerivation& derivation = phrase->made_of.emplace_back();
      JsonFields parts(object, &fault);
      parts.Take("pass", &derivation.pass);
      parts.Take("left", &derivation.left);
      parts.Take("bridge", &derivation.bridge);
      parts.Take("right", &derivation.right);
      parts.Take("joined", &derivation.joined);
      if (!fault.empty()) fields.Fail("made_of", Concat("a list of merges: ", fault));
    }
  }
  TakeScores(fields, &phrase->scores);
  phrase->reason.clear();
  fields.TakeIfThere("reason", &phrase->reason);
}

template <typename Line>
absl::Status Call(const std::function<absl::Status(Line)>& function,
                  std::remove_reference_t<Line>& line) {
  return function ? function(line) : absl::OkStatus();
}

// "pass-07.jsonl" -> 7.
std::optional<int> NumberOfLog(std::string_view name) {
  constexpr std::string_view kFront = "pass-", kBack = ".jsonl";
  if (!name.starts_with(kFront) || !name.ends_with(kBack)) return std::nullopt;
  name.remove_prefix(kFront.size());
  name.remove_suffix(kBack.size());
  int number = 0;
  const auto [end, error] = std::from_chars(name.data(), name.data() + name.size(), number);
  if (error != std::errc() || end != name.data() + name.size()) return std::nullopt;
  return number;
}

}  // namespace

absl::StatusOr<std::vector<std::string>> ListPassLogs(FileSystem& files, const std::string& run) {
  const std::string folder = Concat(run, "/audit");
  PW_ASSIGN_OR_RETURN(const FileInfo info, files.Stat(folder));
  if (!info.exists || !info.is_directory) {
    return absl::NotFoundError(
        Concat(folder, ": there is no such folder, so ", run, " is no finished run folder"));
  }
  PW_ASSIGN_OR_RETURN(const std::vector<std::string> names, files.ListFiles(folder));
  std::vector<std::pair<int, std::string>> logs;
  for (const std::string& name : names) {
    if (const auto number = NumberOfLog(name)) {
      logs.emplace_back(*number, Concat(folder, "/", name));
    }
  }
  std::sort(logs.begin(), logs.end());
  std::vector<std::string> paths;
  for (size_t i = 0; i < logs.size(); ++i) {
    const int wanted = (i == 0 ? std::min(logs[0].first, 1) : logs[i - 1].first + 1);
    if (logs[i].first != wanted) {
      return absl::DataLossError(
          Concat(folder, ": the log of pass ", wanted, " is missing; the run folder is damaged"));
    }
    paths.push_back(std::move(logs[i].second));
  }
  if (paths.empty()) {
    return absl::NotFoundError(Concat(folder, ": there is no audit log in this folder"));
  }
  return paths;
}

absl::Status ReadPassLog(FileSystem& files, const std::string& path, const PassLogReader& reader) {
  PW_ASSIGN_OR_RETURN(const auto file, JsonLinesFile::Open(files, path));
  RunPassHead head;
  RunSlot slot;
  RunRuled ruled;
  RunBalance balance;
  bool balanced = false;
  std::string kind, fault;
  while (true) {
    dom::object object;
    PW_ASSIGN_OR_RETURN(const bool more, file->Next(&object));
    if (!more) break;
    if (balanced) return file->Fault("nothing may stand behind the balance line");
    JsonFields fields(object, &fault);
    kind.clear();
    fields.Take("kind", &kind);
    if (fields.ok() && (kind == "pass") != (file->line() == 1)) {
      return file->Fault("the pass line must be the first, and there is one");
    }
    absl::Status done = absl::OkStatus();
    if (kind == "pass") {
      TakeHead(fields, &head);
      if (fields.ok()) done = Call(reader.on_head, head);
    } else if (kind == "accepted") {
      TakeSlot(fields, false, head.slots, &slot);
      if (fields.ok()) done = Call(reader.on_accepted, slot);
    } else if (kind == "near_miss") {
      TakeSlot(fields, true, head.slots, &slot);
      if (fields.ok()) done = Call(reader.on_near_miss, slot);
    } else if (kind == "ruled") {
      TakeRuled(fields, &ruled);
      if (fields.ok()) done = Call(reader.on_ruled, ruled);
    } else if (kind == "balance") {
      TakeBalance(fields, &balance);
      balanced = true;
      if (fields.ok()) done = Call(reader.on_balance, balance);
    } else {
      fields.Fail("kind", "pass, accepted, near_miss, ruled or balance");
    }
    if (!fault.empty()) return file->Fault(fault);
    PW_RETURN_IF_ERROR(done);
  }
  if (!balanced) {
    return FaultOfLine(path, file->line() + 1, "the balance line is missing: the file is cut");
  }
  return absl::OkStatus();
}

absl::Status ReadInventory(FileSystem& files, const std::string& path,
                           const std::function<absl::Status(RunPhrase&)>& on_phrase) {
  PW_ASSIGN_OR_RETURN(const auto file, JsonLinesFile::Open(files, path));
  RunPhrase phrase;
  std::string fault;
  while (true) {
    dom::object object;
    PW_ASSIGN_OR_RETURN(const bool more, file->Next(&object));
    if (!more) return absl::OkStatus();
    JsonFields fields(object, &fault);
    TakePhrase(fields, &phrase);
    if (!fault.empty()) return file->Fault(fault);
    PW_RETURN_IF_ERROR(on_phrase(phrase));
  }
}

namespace {

absl::Status ReadPass(FileSystem& files, const std::string& log, RunPass* pass) {
  PassLogReader reader;
  reader.on_head = [pass](const RunPassHead& head) {
    pass->head = head;
    return absl::OkStatus();
  };
  reader.on_ruled = [pass](RunRuled& ruled) {
    pass->ruled.push_back(ruled);
    return absl::OkStatus();
  };
  reader.on_accepted = [pass](RunSlot& slot) {
    pass->accepted.push_back(std::move(slot));
    return absl::OkStatus();
  };
  reader.on_near_miss = [pass](RunSlot& slot) {
    pass->near_misses.push_back(std::move(slot));
    return absl::OkStatus();
  };
  reader.on_balance = [pass](const RunBalance& balance) {
    pass->balance = balance;
    return absl::OkStatus();
  };
  return ReadPassLog(files, log, reader);
}

}  // namespace

absl::StatusOr<RunData> ReadRunFolder(FileSystem& files, const std::string& run, Lanes& lanes) {
  PW_ASSIGN_OR_RETURN(const FileInfo info, files.Stat(run));
  if (!info.exists || !info.is_directory) {
    return absl::NotFoundError(Concat(run, ": there is no such run folder"));
  }
  RunData data;
  data.folder = run;
  PW_ASSIGN_OR_RETURN(data.manifest, ReadManifest(files, Concat(run, "/manifest.json")));
  PW_ASSIGN_OR_RETURN(const std::vector<std::string> logs, ListPassLogs(files, run));
  data.passes.resize(logs.size());
  PW_RETURN_IF_ERROR(lanes.ForEach(logs.size() + 1, [&](int, size_t i) {
    if (i < logs.size()) return ReadPass(files, logs[i], &data.passes[i]);
    return ReadInventory(files, Concat(run, "/inventory.jsonl"), [&data](RunPhrase& phrase) {
      data.phrases.push_back(std::move(phrase));
      return absl::OkStatus();
    });
  }));
  return data;
}

absl::StatusOr<RunData> ReadRunFolder(FileSystem& files, const std::string& run) {
  SerialLanes lanes;
  return ReadRunFolder(files, run, lanes);
}

}  // namespace phraseweld
