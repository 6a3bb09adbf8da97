#include <map>

#include "absl/strings/str_cat.h"
#include "audit/pass_log.h"
#include "base/status.h"
#include "count/documents.h"
#include "deliver/inventory.h"
#include "run/delivery.h"
#include "score/measures.h"

namespace phraseweld {
namespace {

// Writes one file through `write`, which gets the function to append with.
template <typename Write>
absl::Status WriteFileWith(const std::string& folder, const std::string& path, FileSystem& files,
                           std::vector<DeliveredFile>* written, Write&& write) {
  PW_ASSIGN_OR_RETURN(std::unique_ptr<OutputStream> out,
                      OutputStream::Create(files, folder + "/" + path, false));
  PW_RETURN_IF_ERROR(write([&](std::string_view bytes) { return out->Append(bytes); }));
  PW_ASSIGN_OR_RETURN(OutputDigest digest, out->Finish());
  written->push_back({path, digest});
  return absl::OkStatus();
}

constexpr size_t kLinesAtOnce = 512;  // a slice that one lane makes
constexpr size_t kSlicesAtOnce = 64;  // so that what waits to be written stays small

// Makes `count` lines side by side and appends them in order.
template <typename MakeLine, typename Append>
absl::Status AppendLines(ThreadLanes& lanes, size_t count, MakeLine&& make_line, Append&& append) {
  std::vector<std::string> slices(kSlicesAtOnce);
  for (size_t base = 0; base < count; base += kLinesAtOnce * kSlicesAtOnce) {
    const size_t end = std::min(count, base + kLinesAtOnce * kSlicesAtOnce);
    const size_t used = (end - base + kLinesAtOnce - 1) / kLinesAtOnce;
    PW_RETURN_IF_ERROR(lanes.ForEach(used, [&](int, size_t slice) {
      std::string& out = slices[slice];
      out.clear();
      const size_t from = base + slice * kLinesAtOnce;
      for (size_t i = from; i < std::min(end, from + kLinesAtOnce); ++i) make_line(i, &out);
      return absl::OkStatus();
    }));
    for (size_t slice = 0; slice < used; ++slice) PW_RETURN_IF_ERROR(append(slices[slice]));
  }
  return absl::OkStatus();
}

absl::StatusOr<std::vector<PhraseRecord>> Inventory(ThreadLanes& lanes, const PassResults& results,
                                                    const std::vector<uint64_t>& documents,
                                                    const Surfaces& surfaces) {
  const TypeTable& types = results.types;
  std::vector<PhraseRecord> phrases(results.made.size());
  for (const PassRecord& pass : results.passes) {
    for (const RuledRecord& ruled : pass.ruled) {
      if (ruled.joined == 0) continue;
      PhraseRecord& phrase = phrases[ruled.phrase - types.word_types()];
      phrase.made_of.push_back({0, std::nullopt, ruled.joined});
      phrase.reason = ruled.reason;
    }
    for (const SlotRecord& slot : pass.accepted) {
      if (slot.joined == 0) continue;
      PhraseRecord& phrase = phrases[slot.phrase - types.word_types()];
      phrase.made_of.push_back({pass.number, slot.slot, slot.joined});
      if (!phrase.scored) {
        phrase.scored = slot.table;
        phrase.scored_pass = pass.number;
      }
    }
  }
  PW_RETURN_IF_ERROR(
      lanes.ForEach((phrases.size() + kLinesAtOnce - 1) / kLinesAtOnce, [&](int, size_t slice) {
        const size_t end = std::min(phrases.size(), (slice + 1) * kLinesAtOnce);
        for (size_t i = slice * kLinesAtOnce; i < end; ++i) {
          PhraseRecord& phrase = phrases[i];
          if (phrase.made_of.empty()) continue;
          phrase.type = types.word_types() + static_cast<uint32_t>(i);
          phrase.text = types.Text(phrase.type);
          phrase.words = types.word_count(phrase.type);
          phrase.occurrences = results.frequency[phrase.type];
          phrase.inside_longer = results.made[i] - phrase.occurrences;
          phrase.documents = documents[i];
          phrase.surface = surfaces.MostFrequent(phrase.type);
        }
        return absl::OkStatus();
      }));
  std::vector<PhraseRecord> made;
  made.reserve(phrases.size());
  for (PhraseRecord& phrase : phrases) {
    if (!phrase.made_of.empty()) made.push_back(std::move(phrase));
  }
  SortInventory(types, &made);
  return made;
}

}  // namespace

absl::StatusOr<std::vector<PhraseRecord>> DeliverRecords(
    const std::string& folder, FileSystem& files, ThreadLanes& lanes, const EncodedCorpus& corpus,
    const PassResults& results, const Delivery& delivery, std::vector<DeliveredFile>* written) {
  ScoreWriter scores;
  scores.score = Score;
  scores.expected = [](const SlotTable& table) { return Round9(Expected(table)); };
  scores.format = FormatScore;
  PassLogContext log;
  log.types = &results.types;
  log.codes = &results.codes;
  log.scores = scores;
  log.place_of = [&](uint64_t first) -> const Place& { return delivery.PlaceOf(first); };
  std::map<int, const PassRecord*> by_number;
  PW_RETURN_IF_ERROR(files.MakeDirectories(folder + "/audit"));
  for (const PassRecord& pass : results.passes) {
    by_number[pass.number] = &pass;
    PW_RETURN_IF_ERROR(
        WriteFileWith(folder, "audit/" + PassLogName(pass.number), files, written,
                      [&](const auto& append) -> absl::Status {
                        PW_RETURN_IF_ERROR(append(PassLogHead(pass, log)));
                        const std::vector<Quantity> shown = ShownMeasures(pass.options);
                        for (const auto* list : {&pass.accepted, &pass.near_misses}) {
                          PW_RETURN_IF_ERROR(AppendLines(
                              lanes, list->size(),
                              [&](size_t i, std::string* out) {
                                AppendSlotLine((*list)[i], i + 1, shown, log, out);
                              },
                              append));
                        }
                        return append(PassLogTail(pass));
                      }));
  }
  PW_ASSIGN_OR_RETURN(
      std::vector<uint64_t> documents,
      CountTypeDocuments(lanes, corpus.stream, results.types.word_types(), results.made.size()));
  PW_ASSIGN_OR_RETURN(std::vector<PhraseRecord> phrases,
                      Inventory(lanes, results, documents, *delivery.surfaces));
  InventoryContext context;
  context.types = &results.types;
  context.codes = &results.codes;
  context.scores = scores;
  context.shown = [&](int pass) { return ShownMeasures(by_number.at(pass)->options); };
  PW_RETURN_IF_ERROR(
      WriteFileWith(folder, "inventory.jsonl", files, written, [&](const auto& append) {
        return AppendLines(
            lanes, phrases.size(),
            [&](size_t i, std::string* out) { AppendInventoryLine(phrases[i], context, out); },
            append);
      }));
  PW_RETURN_IF_ERROR(WriteFileWith(
      folder, "inventory.tsv", files, written, [&](const auto& append) -> absl::Status {
        PW_RETURN_IF_ERROR(append(kInventoryHeader));
        return AppendLines(
            lanes, phrases.size(),
            [&](size_t i, std::string* out) { AppendInventoryRow(phrases[i], context, out); },
            append);
      }));
  return phrases;
}

}  // namespace phraseweld
