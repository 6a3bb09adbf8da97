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

// A file of the run folder.
class RecordFile {
 public:
  static absl::StatusOr<RecordFile> Create(const std::string& folder, const std::string& path,
                                           FileSystem& files) {
    RecordFile file;
    file.path_ = path;
    PW_ASSIGN_OR_RETURN(
        file.out_, OutputStream::Create(files, folder + "/" + path, false, OnDisk::kWhenCommitted));
    return file;
  }
  absl::Status Append(std::string_view bytes) { return out_->Append(bytes); }
  absl::Status Finish(std::vector<DeliveredFile>* written) {
    PW_ASSIGN_OR_RETURN(OutputDigest digest, out_->Finish());
    written->push_back({path_, digest});
    return absl::OkStatus();
  }

 private:
  std::string path_;
  std::unique_ptr<OutputStream> out_;
};

constexpr size_t kLinesAtOnce = 512;  // a slice that one lane makes

// Makes `count` lines side by side, in `files.size()` files at once, and appends them in order.
// make(i, texts) appends line i of each file to its text; add_types(i, types) tells of which types
// it will want the text.
template <typename AddTypes, typename Make>
absl::Status AppendLines(ThreadLanes& lanes, size_t count, const std::vector<RecordFile*>& files,
                         const TypeTable& types, AddTypes&& add_types, Make&& make) {
  struct Slice {
    size_t begin = 0;
    std::vector<std::string> texts;
  };
  size_t next = 0;
  ThreadLanes::Steps<Slice> steps;
  steps.make = [&](Slice* slice) {
    slice->begin = next;
    next += kLinesAtOnce;
    return slice->begin < count;
  };
  steps.work = [&](int, Slice* slice) {
    slice->texts.resize(files.size());
    for (std::string& text : slice->texts) text.clear();
    const size_t end = std::min(count, slice->begin + kLinesAtOnce);
    std::vector<uint32_t> expected;
    for (size_t i = slice->begin; i < end; ++i) add_types(i, &expected);
    types.ExpectTexts(expected);
    for (size_t i = slice->begin; i < end; ++i) make(i, &slice->texts);
    return absl::OkStatus();
  };
  steps.place = [&](Slice* slice) -> absl::Status {
    for (size_t i = 0; i < files.size(); ++i) {
      PW_RETURN_IF_ERROR(files[i]->Append(slice->texts[i]));
    }
    return absl::OkStatus();
  };
  return lanes.Pipeline(4 * static_cast<size_t>(lanes.lanes()), steps);
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
        std::vector<uint32_t> expected;
        for (size_t i = slice * kLinesAtOnce; i < end; ++i) {
          if (!phrases[i].made_of.empty()) {
            expected.push_back(types.word_types() + static_cast<uint32_t>(i));
          }
        }
        types.ExpectTexts(expected);
        for (size_t i = slice * kLinesAtOnce; i < end; ++i) {
          PhraseRecord& phrase = phrases[i];
          if (phrase.made_of.empty()) continue;
          phrase.type = types.word_types() + static_cast<uint32_t>(i);
          phrase.text = types.Text(phrase.type);
          phrase.words = types.word_count(phrase.type);
          phrase.occurrences = results.frequency[phrase.type];
          phrase.inside_longer = results.made[i] - phrase.occurrences;
          phrase.documents = documents[i];
          phrase.surface = surfaces.MostFrequent(phrase.type, phrase.text);
        }
        return absl::OkStatus();
      }));
  std::vector<PhraseRecord> made;
  made.reserve(phrases.size());
  for (PhraseRecord& phrase : phrases) {
    if (!phrase.made_of.empty()) made.push_back(std::move(phrase));
  }
  PW_RETURN_IF_ERROR(SortInventory(lanes, types, &made));
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
    PW_ASSIGN_OR_RETURN(RecordFile file,
                        RecordFile::Create(folder, "audit/" + PassLogName(pass.number), files));
    PW_RETURN_IF_ERROR(file.Append(PassLogHead(pass, log)));
    const std::vector<Quantity> shown = ShownMeasures(pass.options);
    for (const auto* list : {&pass.accepted, &pass.near_misses}) {
      PW_RETURN_IF_ERROR(AppendLines(
          lanes, list->size(), {&file}, results.types,
          [&](size_t i, std::vector<uint32_t>* types) {
            types->push_back((*list)[i].slot.left);
            types->push_back((*list)[i].slot.right);
          },
          [&](size_t i, std::vector<std::string>* texts) {
            AppendSlotLine((*list)[i], i + 1, shown, log, &texts->front());
          }));
    }
    PW_RETURN_IF_ERROR(file.Append(PassLogTail(pass)));
    PW_RETURN_IF_ERROR(file.Finish(written));
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
  PW_ASSIGN_OR_RETURN(RecordFile lines, RecordFile::Create(folder, "inventory.jsonl", files));
  PW_ASSIGN_OR_RETURN(RecordFile rows, RecordFile::Create(folder, "inventory.tsv", files));
  PW_RETURN_IF_ERROR(rows.Append(kInventoryHeader));
  PW_RETURN_IF_ERROR(AppendLines(
      lanes, phrases.size(), {&lines, &rows}, results.types,
      [&](size_t i, std::vector<uint32_t>* types) { types->push_back(phrases[i].type); },
      [&](size_t i, std::vector<std::string>* texts) {
        AppendInventory(phrases[i], context, &texts->front(), &texts->back());
      }));
  PW_RETURN_IF_ERROR(lines.Finish(written));
  PW_RETURN_IF_ERROR(rows.Finish(written));
  return phrases;
}

}  // namespace phraseweld
