#include "run/corpus_reading.h"

#include <algorithm>
#include <atomic>

#include "absl/strings/str_cat.h"
#include "base/status.h"
#include "base/units.h"
#include "run/job_options.h"

namespace phraseweld {
namespace {

struct EncodedItem {
  Block block;
  std::vector<Entry> entries;
  uint64_t begin = 0;
};

// What a thread needs of its own.
struct EncodingWorker {
  EncodingWorker(const std::vector<InputFile>& inputs, const ReadOptions& options)
      : parser(inputs, options) {}
  BlockParser parser;
  std::unique_ptr<Encoder> encoder;
  uint64_t next_index = 0;
};

// One block's entries: the words of its pieces, and the marks that end passages and documents.
void EncodeBlock(const Block& block, Encoder* encoder, std::vector<Entry>* entries) {
  entries->clear();
  entries->reserve(block.bytes.size() / 4);
  const uint64_t place = block.index << 32;
  for (size_t d = 0; d < block.documents.size(); ++d) {
    const DocumentPart& document = block.documents[d];
    const size_t first = document.first_piece;
    const size_t last =
        d + 1 < block.documents.size() ? block.documents[d + 1].first_piece : block.pieces.size();
    for (size_t p = first; p < last; ++p) {
      const TextPiece& piece = block.pieces[p];
      encoder->EncodeAhead(piece.text, !piece.ends_passage, place, entries);
      if (piece.ends_passage && p + 1 < last) entries->push_back(kPassageEnd);
    }
    if (document.ends) entries->push_back(kDocumentEnd);
  }
  encoder->Settle(entries);
}

// Turns provisional ids into final ones and counts the tokens of each type.
absl::Status Renumber(const HugeVector<uint32_t>& final_ids, uint64_t chunk, ThreadLanes& lanes,
                      EncodedCorpus* corpus) {
  const uint64_t size = corpus->entries->size();
  const size_t types = corpus->vocabulary.size();
  Entry* entries = corpus->entries->data();
  std::vector<std::vector<uint64_t>> counts(static_cast<size_t>(lanes.lanes()));
  std::vector<uint64_t> words(static_cast<size_t>(lanes.lanes()), 0);
  PW_RETURN_IF_ERROR(lanes.ForEach((size + chunk - 1) / chunk, [&](int lane, size_t i) {
    auto& count = counts[static_cast<size_t>(lane)];
    if (count.empty()) count.resize(types, 0);
    const uint64_t begin = i * chunk, end = std::min(size, begin + chunk);
    uint64_t tokens = 0;
    for (uint64_t at = begin; at < end; ++at) {
      if (IsMark(entries[at])) continue;
      entries[at] = final_ids[entries[at]];
      ++count[entries[at]];
      ++tokens;
    }
    words[static_cast<size_t>(lane)] += tokens;
    corpus->entries->Release(begin, end);
    return absl::OkStatus();
  }));
  corpus->frequency.assign(types, 0);
  for (auto& count : counts) {
    for (size_t type = 0; type < count.size(); ++type) corpus->frequency[type] += count[type];
    count = {};
  }
  for (uint64_t tokens : words) corpus->words += tokens;
  for (uint64_t tokens : corpus->frequency) corpus->word_types += tokens > 0 ? 1 : 0;
  return absl::OkStatus();
}

// What has to be in memory whatever else is on disk: the words, and a few counters for each.
// They may take five eighths of the limit; the rest is for blocks under way and steps of counting.
absl::Status FitsMemory(const Job& job, const Vocabulary& vocabulary, int lanes) {
  constexpr uint64_t kMebibyte = uint64_t{1} << 20;
  const uint64_t words =
      vocabulary.memory() + uint64_t{vocabulary.size()} * 8 * static_cast<uint64_t>(lanes + 2);
  const uint64_t least = words / 5 * 8;
  if (least <= job.limits.memory) return absl::OkStatus();
  return absl::ResourceExhaustedError(
      absl::StrCat("limits.memory: ", FormatBytes(job.limits.memory),
                   " is too little for this corpus; its ", FormatCount(vocabulary.size()),
                   " different words alone take ", RoundedBytes(static_cast<double>(words)), "; ",
                   FormatBytes((least / kMebibyte + 1) * kMebibyte), " would do"));
}

}  // namespace

absl::Status EncodeCorpus(const Job& job, const std::vector<InputFile>& inputs,
                          const MemoryPlan& plan, const std::vector<std::string>& reserved,
                          const std::string& scratch_folder, FileSystem& files, ThreadLanes& lanes,
                          const Observer& observer, EncodedCorpus* corpus) {
  if (plan.on_disk) {
    PW_ASSIGN_OR_RETURN(corpus->entries, EntryArray::OnFile(files, scratch_folder + "/stream"));
  } else {
    // A word takes at least a byte, a break one more, and each line may end a document.
    PW_ASSIGN_OR_RETURN(corpus->entries,
                        EntryArray::InMemory(2 * plan.text_bytes * (plan.exact_size ? 1 : 64) +
                                             4 * inputs.size() + 1024));
  }
  const ReadOptions read_options = ReadOptionsOf(job, plan.block_bytes);
  BlockSource source(inputs, read_options);
  std::vector<std::unique_ptr<EncodingWorker>> workers(static_cast<size_t>(lanes.lanes()));
  std::atomic<uint64_t> bytes_done{0};
  uint64_t entries = 0;
  ThreadLanes::Steps<EncodedItem> steps;
  steps.make = [&](EncodedItem* item) { return source.Next(&item->block); };
  steps.work = [&](int lane, EncodedItem* item) -> absl::Status {
    auto& worker = workers[static_cast<size_t>(lane)];
    if (worker == nullptr) worker = std::make_unique<EncodingWorker>(inputs, read_options);
    // The encoder remembers words, on the understanding that it walks forward.
    if (worker->encoder == nullptr || item->block.index < worker->next_index) {
      worker->encoder = std::make_unique<Encoder>(WordOptionsOf(job), &corpus->vocabulary);
    }
    worker->next_index = item->block.index + 1;
    PW_RETURN_IF_ERROR(worker->parser.Parse(&item->block));
    EncodeBlock(item->block, worker->encoder.get(), &item->entries);
    observer.advance(bytes_done.fetch_add(item->block.bytes.size()) + item->block.bytes.size());
    return absl::OkStatus();
  };
  steps.place = [&](EncodedItem* item) {
    item->begin = entries;
    entries += item->entries.size();
    corpus->blocks.push_back({item->begin, corpus->documents});
    for (const DocumentPart& document : item->block.documents) corpus->documents += document.begins;
    corpus->bad_lines += item->block.bad_lines;
    corpus->text_bytes += item->block.bytes.size();
    return absl::OkStatus();
  };
  steps.store = [&](EncodedItem* item) {
    return corpus->entries->Write(item->begin, item->entries);
  };
  PW_RETURN_IF_ERROR(lanes.Pipeline(plan.blocks_in_flight, steps));
  workers.clear();
  corpus->digests = source.digests();
  PW_RETURN_IF_ERROR(corpus->entries->Seal(entries));
  PW_RETURN_IF_ERROR(FitsMemory(job, corpus->vocabulary, lanes.lanes()));
  PW_ASSIGN_OR_RETURN(HugeVector<uint32_t> final_ids, corpus->vocabulary.Finish(reserved));
  PW_RETURN_IF_ERROR(Renumber(final_ids, plan.chunk_entries, lanes, corpus));
  corpus->stream.entries = corpus->entries->data();
  corpus->stream.size = entries;
  corpus->stream.release = [array = corpus->entries.get()](uint64_t begin, uint64_t end) {
    array->Release(begin, end);
  };
  corpus->stream.Cut(plan.chunk_entries);
  return absl::OkStatus();
}

}  // namespace phraseweld
