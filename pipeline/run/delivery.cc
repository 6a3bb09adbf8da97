#include "run/delivery.h"

#include <algorithm>
#include <atomic>

#include "absl/strings/str_cat.h"
#include "base/json.h"
#include "base/status.h"
#include "deliver/block_walk.h"
#include "deliver/joints.h"
#include "run/job_options.h"

namespace phraseweld {
namespace {

struct DeliveryItem {
  Block block;
  BlockOutput output;
};

struct DeliveryWorker {
  DeliveryWorker(const std::vector<InputFile>& inputs, const ReadOptions& options,
                 const WordOptions& words, const WalkOptions& walk, Surfaces* surfaces)
      : parser(inputs, options), splitter(words), walk_options(walk), counter(surfaces) {
    walk_options.surfaces = &counter;
  }
  BlockParser parser;
  WordSplitter splitter;
  std::vector<WordSpan> spans;
  WalkOptions walk_options;
  Surfaces::Counter counter;
};

// Every position that the audit will name.
std::vector<uint64_t> WantedPositions(const PassResults& results) {
  std::vector<uint64_t> wanted;
  for (const PassRecord& pass : results.passes) {
    for (const auto* list : {&pass.accepted, &pass.near_misses}) {
      for (const SlotRecord& slot : *list) wanted.push_back(slot.first);
    }
  }
  std::sort(wanted.begin(), wanted.end());
  wanted.erase(std::unique(wanted.begin(), wanted.end()), wanted.end());
  return wanted;
}

absl::Status WalkBlock(const EncodedCorpus& corpus, DeliveryWorker* worker, DeliveryItem* item) {
  const Block& block = item->block;
  if (block.index >= corpus.blocks.size()) {
    return absl::AbortedError("an input grew while the run was reading it; run again");
  }
  const uint64_t begin = corpus.blocks[block.index].begin;
  const uint64_t end = block.index + 1 < corpus.blocks.size() ? corpus.blocks[block.index + 1].begin
                                                              : corpus.stream.size;
  item->output = BlockOutput{};
  BlockWalk walk(worker->walk_options, corpus.stream.entries, corpus.stream.size, begin, end,
                 block.bytes, &item->output);
  for (size_t d = 0; d < block.documents.size(); ++d) {
    const DocumentPart& document = block.documents[d];
    const size_t last =
        d + 1 < block.documents.size() ? block.documents[d + 1].first_piece : block.pieces.size();
    if (document.first_piece == last) {
      PW_RETURN_IF_ERROR(walk.EmptyDocument(document.ends));
    }
    for (size_t p = document.first_piece; p < last; ++p) {
      const TextPiece& source = block.pieces[p];
      worker->splitter.Split(source.text, &worker->spans);
      WalkPiece piece;
      piece.text = source.text;
      piece.text_offset = source.text_offset;
      piece.document = static_cast<uint32_t>(d);
      piece.field = source.field;
      piece.begins_passage = source.begins_passage;
      piece.ends_passage = source.ends_passage;
      piece.begins_document = p == document.first_piece && document.begins;
      piece.ends_document = p + 1 == last && document.ends;
      piece.words = worker->spans;
      SourceMap map(block, source);
      if (source.escaped) {
        piece.to_source = [&map](uint64_t offset) { return map.ToSource(offset); };
      } else {
        piece.to_source = [base = source.source_begin](uint64_t offset) { return base + offset; };
      }
      PW_RETURN_IF_ERROR(walk.Piece(piece));
    }
  }
  PW_RETURN_IF_ERROR(walk.Finish());
  corpus.stream.release(begin, end);
  return absl::OkStatus();
}

// Takes the blocks' outputs in order and writes the files.
class CorpusWriter {
 public:
  CorpusWriter(const Job& job, const std::vector<InputFile>& inputs, const std::string& folder,
               FileSystem& files, const EncodedCorpus& corpus, std::string source_joiner,
               Delivery* delivery, std::vector<DeliveredFile>* written)
      : job_(job),
        inputs_(inputs),
        folder_(folder),
        files_(files),
        corpus_(corpus),
        source_joiner_(std::move(source_joiner)),
        delivery_(delivery),
        counter_(delivery->surfaces.get()),
        written_(written) {}

  absl::Status Begin() {
    if (!job_.deliver.spans) return absl::OkStatus();
    PW_ASSIGN_OR_RETURN(spans_, OutputStream::Create(files_, folder_ + "/spans.jsonl", false,
                                                     OnDisk::kWhenCommitted));
    return absl::OkStatus();
  }

  absl::Status Write(const DeliveryItem& item) {
    const Block& block = item.block;
    if (block.file_offset == 0) PW_RETURN_IF_ERROR(BeginFile(block.file));
    WriteSurfaces(item.output);
    for (const BlockOutput::Found& found : item.output.found) {
      Place& place = delivery_->places[found.wanted];
      place.document = NameOf(block, found.document);
      place.passage = PassageName(found.field);
      place.byte = found.byte;
    }
    if (spans_ != nullptr) PW_RETURN_IF_ERROR(WriteSpans(block, item.output));
    if (out_ != nullptr) {
      PW_RETURN_IF_ERROR(out_->Append(
          job_.deliver.corpus == CorpusForm::kWords ? item.output.words : item.output.text));
    }
    if (joints_ != nullptr) WriteJoints(block, item.output);
    return block.ends_file ? EndFile(block.file) : absl::OkStatus();
  }

  absl::Status End() {
    counter_.Flush();
    if (spans_ == nullptr) return absl::OkStatus();
    PW_ASSIGN_OR_RETURN(OutputDigest digest, spans_->Finish());
    written_->push_back({"spans.jsonl", digest});
    return absl::OkStatus();
  }

 private:
  std::string CorpusPath(uint32_t file) const {
    return absl::StrCat("corpus/", inputs_[file].relative,
                        job_.deliver.compress == Compress::kZstd ? ".zst" : "");
  }
  std::string PassageName(uint32_t field) const {
    return job_.corpus.layout == Layout::kJsonLines ? job_.corpus.fields[field] : "";
  }
  std::string NameOf(const Block& block, uint32_t document) const {
    const uint64_t before = corpus_.blocks[block.index].documents_before;
    return DocumentName(block.documents[document].id,
                        before + document + (block.documents.front().begins ? 1 : 0));
  }

  absl::Status BeginFile(uint32_t file) {
    if (job_.deliver.corpus == CorpusForm::kNone) return absl::OkStatus();
    const std::string path = folder_ + "/" + CorpusPath(file);
    PW_RETURN_IF_ERROR(files_.MakeDirectories(path.substr(0, path.rfind('/'))));
    PW_ASSIGN_OR_RETURN(out_,
                        OutputStream::Create(files_, path, job_.deliver.compress == Compress::kZstd,
                                             OnDisk::kWhenCommitted));
    if (job_.deliver.corpus == CorpusForm::kSource) {
      PW_ASSIGN_OR_RETURN(joints_, JointsWriter::Create(files_, JointsPath(path), source_joiner_));
    }
    return absl::OkStatus();
  }

  absl::Status EndFile(uint32_t file) {
    if (out_ == nullptr) return absl::OkStatus();
    PW_ASSIGN_OR_RETURN(OutputDigest digest, out_->Finish());
    written_->push_back({CorpusPath(file), digest});
    out_.reset();
    if (joints_ == nullptr) return absl::OkStatus();
    PW_ASSIGN_OR_RETURN(digest, joints_->Finish());
    written_->push_back({JointsPath(CorpusPath(file)), digest});
    joints_.reset();
    return absl::OkStatus();
  }

  void WriteJoints(const Block& block, const BlockOutput& output) {
    joints_->Source(block.bytes);
    uint64_t at = 0;
    for (const BlockOutput::Joint& joint : output.joints) {
      joints_->Skip(joint.at - at);
      joints_->Joint(
          std::string_view(block.bytes).substr(joint.gap_begin, joint.gap_end - joint.gap_begin));
      at = joint.at + source_joiner_.size();
    }
    joints_->Skip(output.text.size() - at);
  }

  // A token that lies in several blocks is spelt from their parts.
  void WriteSurfaces(const BlockOutput& output) {
    if (output.has_carried_in) {
      spelling_ += output.carried_in;
      if (!output.carries_on) counter_.Count(output.carried_in_type, spelling_);
    }
    if (output.has_carried_out) spelling_ = output.carried_out;
  }

  absl::Status WriteSpans(const Block& block, const BlockOutput& output) {
    for (const BlockOutput::Spans& spans : output.spans) {
      if (spans.begins_passage) {
        line_ = "{\"document\":";
        AppendJsonString(&line_, NameOf(block, spans.document));
        line_ += ",\"passage\":";
        AppendJsonString(&line_, PassageName(spans.field));
        line_ += ",\"spans\":[";
      }
      line_ += spans.items;
      if (!spans.ends_passage) continue;
      if (line_.back() == ',') line_.pop_back();
      line_ += "]}\n";
      PW_RETURN_IF_ERROR(spans_->Append(line_));
    }
    return absl::OkStatus();
  }

  const Job& job_;
  const std::vector<InputFile>& inputs_;
  const std::string& folder_;
  FileSystem& files_;
  const EncodedCorpus& corpus_;
  const std::string source_joiner_;
  Delivery* delivery_;
  Surfaces::Counter counter_;
  std::vector<DeliveredFile>* written_;
  std::unique_ptr<OutputStream> out_, spans_;
  std::unique_ptr<JointsWriter> joints_;
  std::string line_, spelling_;
};

absl::Status SameInputs(const std::vector<InputFile>& inputs, const std::vector<InputDigest>& first,
                        const std::vector<InputDigest>& second) {
  for (size_t i = 0; i < first.size(); ++i) {
    if (first[i].stored_bytes == second[i].stored_bytes &&
        first[i].stored_hash == second[i].stored_hash) {
      continue;
    }
    return absl::AbortedError(absl::StrCat(
        inputs[i].path, ": changed while the run was reading it; run again when it is still"));
  }
  return absl::OkStatus();
}

}  // namespace

std::string DocumentName(std::string_view id, uint64_t ordinal) {
  return id.empty() ? absl::StrCat(ordinal) : std::string(id);
}

const Place& Delivery::PlaceOf(uint64_t position) const {
  return places[static_cast<size_t>(std::lower_bound(wanted.begin(), wanted.end(), position) -
                                    wanted.begin())];
}

absl::Status DeliverCorpus(const Job& job, const std::vector<InputFile>& inputs,
                           const MemoryPlan& plan, const std::string& folder, FileSystem& files,
                           ThreadLanes& lanes, const Observer& observer,
                           const EncodedCorpus& corpus, const PassResults& results,
                           Delivery* delivery, std::vector<DeliveredFile>* written) {
  delivery->wanted = WantedPositions(results);
  delivery->places.resize(delivery->wanted.size());
  delivery->surfaces = std::make_unique<Surfaces>(results.types, results.frequency);
  WalkOptions options;
  options.source = job.deliver.corpus == CorpusForm::kSource;
  options.words = job.deliver.corpus == CorpusForm::kWords;
  options.spans = job.deliver.spans;
  options.joiner = job.deliver.joiner;
  options.source_joiner = job.deliver.joiner;
  if (job.corpus.layout == Layout::kJsonLines) {
    options.source_joiner.clear();
    AppendJsonText(&options.source_joiner, job.deliver.joiner);
  }
  options.types = &results.types;
  options.wanted = &delivery->wanted;

  const ReadOptions read_options = ReadOptionsOf(job, plan.block_bytes);
  BlockSource source(inputs, read_options);
  CorpusWriter writer(job, inputs, folder, files, corpus, options.source_joiner, delivery, written);
  PW_RETURN_IF_ERROR(writer.Begin());
  std::vector<std::unique_ptr<DeliveryWorker>> workers(static_cast<size_t>(lanes.lanes()));
  std::atomic<uint64_t> bytes_done{0};
  ThreadLanes::Steps<DeliveryItem> steps;
  steps.make = [&](DeliveryItem* item) { return source.Next(&item->block); };
  steps.work = [&](int lane, DeliveryItem* item) -> absl::Status {
    auto& worker = workers[static_cast<size_t>(lane)];
    if (worker == nullptr) {
      worker = std::make_unique<DeliveryWorker>(inputs, read_options, WordOptionsOf(job), options,
                                                delivery->surfaces.get());
    }
    PW_RETURN_IF_ERROR(worker->parser.Parse(&item->block));
    PW_RETURN_IF_ERROR(WalkBlock(corpus, worker.get(), item));
    observer.advance(bytes_done.fetch_add(item->block.bytes.size()) + item->block.bytes.size());
    return absl::OkStatus();
  };
  steps.place = [&](DeliveryItem* item) { return writer.Write(*item); };
  PW_RETURN_IF_ERROR(lanes.Pipeline(plan.blocks_in_flight, steps));
  PW_RETURN_IF_ERROR(SameInputs(inputs, corpus.digests, source.digests()));
  PW_RETURN_IF_ERROR(writer.End());
  for (const auto& worker : workers) {
    if (worker != nullptr) worker->counter.Flush();
  }
  return delivery->surfaces->Settle(lanes);
}

}  // namespace phraseweld
