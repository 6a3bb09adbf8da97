#include "run/context_finder.h"

#include <algorithm>
#include <atomic>
#include <map>
#include <utility>

#include "base/status.h"
#include "run/block_finder.h"
#include "run/delivery.h"
#include "run/job_options.h"
#include "run/passage_seam.h"
#include "run/passes.h"

namespace phraseweld {
namespace {

constexpr size_t kBlocksInFlight = 6;

bool IsContinuation(char byte) { return (static_cast<unsigned char>(byte) & 0xC0) == 0x80; }

void CutBefore(std::string* text) {
  if (text->size() <= kContextBytes) return;
  size_t begin = text->size() - kContextBytes;
  for (int i = 0; i < 3 && IsContinuation((*text)[begin]); ++i) ++begin;
  text->erase(0, begin);
}

void CutAfter(std::string* text) {
  if (text->size() <= kContextBytes) return;
  size_t end = kContextBytes;
  for (int i = 0; i < 3 && IsContinuation((*text)[end]); ++i) --end;
  text->resize(end);
}

struct Item {
  Block block;
  BlockFindings found;
};

class Finder {
 public:
  Finder(const Job& job, const std::vector<InputFile>& inputs,
         const std::vector<std::vector<std::string>>& phrases, const FindOptions& options,
         size_t block_bytes, int lanes)
      : job_(job),
        inputs_(inputs),
        options_(options),
        read_options_(ReadOptionsOf(job, block_bytes)),
        word_options_(WordOptionsOf(job)),
        runs_(std::make_unique<KeptRuns>()),
        wanted_(job, phrases, options, &runs_->vocabulary),
        workers_(static_cast<size_t>(lanes)),
        result_(phrases.size()),
        breaks_(phrases.size()),
        last_document_(phrases.size(), 0),
        seam_(word_options_, wanted_.longest()),
        seam_encoder_(word_options_, &runs_->vocabulary),
        seam_splitter_(word_options_),
        full_(2 * phrases.size()),
        wanting_(options.contexts > 0 ? phrases.size() : 0) {}

  absl::StatusOr<Findings> Run(const std::vector<std::string>& function_words, ThreadLanes& lanes,
                               const Observer& observer);

 private:
  struct Unfinished {
    uint32_t phrase;
    bool broken;
    size_t place;
  };
  BlockFinder& WorkerOf(int lane);
  void Place(Item* item);
  void PlaceSeam(const Block& block);
  void PlaceContext(RawContext raw, const Block& block);
  void PlaceRuns(const Block& block, const BlockFindings& found);
  void GoOn(std::string_view piece, bool ends_passage);
  void EndOpenRun();
  void AppendRun(uint64_t document, absl::Span<const Entry> run);
  uint64_t Ordinal(const Block& block, uint32_t document) const {
    return documents_ + document + (block.documents.front().begins ? 1 : 0);
  }
  PhraseContext& ContextOf(const Unfinished& place) {
    PhraseFindings& phrase = result_[place.phrase];
    return (place.broken ? phrase.broken_contexts : phrase.contexts)[place.place];
  }
  absl::Status Finish(const std::vector<std::string>& function_words, Findings* findings);

  const Job& job_;
  const std::vector<InputFile>& inputs_;
  const FindOptions& options_;
  const ReadOptions read_options_;
  const WordOptions word_options_;
  std::unique_ptr<KeptRuns> runs_;
  const Wanted wanted_;
  std::vector<std::unique_ptr<BlockFinder>> workers_;

  // In the order of the corpus.
  std::vector<PhraseFindings> result_;
  std::vector<std::map<std::string, uint64_t>> breaks_;
  std::vector<uint64_t> last_document_;  // ordinal of the last one with a match
  uint64_t documents_ = 0;               // that began in blocks before
  PassageSeam seam_;
  Encoder seam_encoder_;
  WordSplitter seam_splitter_;
  // Contexts whose text goes on in the next piece.
  std::vector<Unfinished> unfinished_;
  std::vector<std::atomic<bool>> full_;  // 2 * phrase + broken: it has its contexts
  std::atomic<bool> enough_{false};
  size_t wanting_ = 0;  // phrases that lack contexts in a run
  std::vector<Entry> open_run_;
  uint64_t open_document_ = 0;
  uint64_t kept_document_ = 0;  // of the last run that was kept
};

BlockFinder& Finder::WorkerOf(int lane) {
  auto& worker = workers_[static_cast<size_t>(lane)];
  if (worker == nullptr) {
    worker = std::make_unique<BlockFinder>(
        inputs_, read_options_, word_options_, wanted_,
        [this](uint32_t phrase, bool broken) {
          return full_[2 * phrase + (broken ? 1 : 0)].load();
        },
        &runs_->vocabulary);
  }
  return *worker;
}

// Gives `piece` to the contexts that end in the text before it.
void Finder::GoOn(std::string_view piece, bool ends_passage) {
  std::erase_if(unfinished_, [&](const Unfinished& place) {
    std::string& after = ContextOf(place).after;
    after += piece.substr(0, kRawContextBytes - after.size());
    if (after.size() < kRawContextBytes && !ends_passage) return false;
    CutAfter(&after);
    return true;
  });
}

void Finder::PlaceContext(RawContext raw, const Block& block) {
  PhraseFindings& phrase = result_[raw.phrase];
  std::vector<PhraseContext>& contexts = raw.broken ? phrase.broken_contexts : phrase.contexts;
  if (contexts.size() >= options_.contexts) return;
  PhraseContext& context = raw.context;
  if (raw.reaches_back) {
    const std::string_view earlier = seam_.text();
    const size_t missing = std::min(kRawContextBytes - context.before.size(), earlier.size());
    context.before.insert(0, earlier.substr(earlier.size() - missing));
  }
  CutBefore(&context.before);
  const bool goes_on = raw.reaches_forward;
  if (!goes_on) CutAfter(&context.after);
  context.document = DocumentName(block.documents[raw.document].id, Ordinal(block, raw.document));
  if (job_.corpus.layout == Layout::kJsonLines) context.passage = job_.corpus.fields[raw.field];
  if (goes_on) unfinished_.push_back({raw.phrase, raw.broken, contexts.size()});
  contexts.push_back(std::move(context));
  if (contexts.size() < options_.contexts) return;
  full_[2 * raw.phrase + (raw.broken ? 1 : 0)] = true;
  if (!raw.broken) --wanting_;
}

// What reaches over the front of the block.
void Finder::PlaceSeam(const Block& block) {
  const TextPiece& piece = block.pieces.front();
  GoOn(piece.text, piece.ends_passage);
  const PassageSeam::Joined joined = seam_.Join(piece.text);
  const std::string_view text = joined.text;
  const bool whole_piece = text.size() - joined.cut == piece.text.size();
  std::vector<Entry> entries;
  seam_encoder_.Encode(text.substr(joined.exact_from), false, kNoPlace, &entries);
  std::vector<WordSpan> words;
  bool is_split = false;
  wanted_.tree().Find(
      entries, [&](uint32_t sequence, size_t, uint32_t token, uint32_t break_after) {
        for (const Wanted::Sequence& wanted : wanted_.sequences(sequence)) {
          if (wanted.phrase == WordTree::kNone) continue;
          if (!is_split) seam_splitter_.Split(text.substr(joined.exact_from), &words);
          is_split = true;
          const uint32_t last = token + wanted_.words_of(wanted.phrase) - 1;
          const size_t begin = joined.exact_from + words[token].begin;
          const size_t end = joined.exact_from + words[last].end;
          if (begin >= joined.cut || end <= joined.cut) continue;
          PhraseFindings& phrase = result_[wanted.phrase];
          const bool broken = break_after != WordTree::kNone;
          if (broken) {
            ++phrase.across_breaks;
            const size_t from = joined.exact_from + words[break_after].end;
            const size_t to = joined.exact_from + words[break_after + 1].begin;
            ++breaks_[wanted.phrase][BreakName(text.substr(from, to - from))];
          } else {
            ++phrase.occurrences;
            uint64_t& last_document = last_document_[wanted.phrase];
            phrase.documents += last_document != Ordinal(block, 0) ? 1 : 0;
            last_document = Ordinal(block, 0);
          }
          RawContext raw;
          raw.phrase = wanted.phrase;
          raw.broken = broken;
          raw.field = piece.field;
          raw.reaches_forward =
              whole_piece && text.size() - end < kRawContextBytes && !piece.ends_passage;
          const size_t from = begin > kRawContextBytes ? begin - kRawContextBytes : 0;
          raw.context.byte = joined.offset + begin;
          raw.context.before = text.substr(from, begin - from);
          raw.context.match = text.substr(begin, end - begin);
          raw.context.after = text.substr(end, kRawContextBytes);
          PlaceContext(std::move(raw), block);
        }
      });
}

void Finder::AppendRun(uint64_t document, absl::Span<const Entry> run) {
  std::vector<Entry>& kept = runs_->entries;
  if (kept_document_ != 0 && kept_document_ != document) kept.push_back(kDocumentEnd);
  kept.insert(kept.end(), run.begin(), run.end());
  kept.push_back(kBreak);
  kept_document_ = document;
}

void Finder::EndOpenRun() {
  bool kept = options_.keep_all && !open_run_.empty();
  if (!kept) {
    wanted_.tree().Find(open_run_, [&](uint32_t sequence, size_t, uint32_t, uint32_t) {
      for (const Wanted::Sequence& wanted : wanted_.sequences(sequence)) kept = kept || wanted.keep;
    });
  }
  if (kept) AppendRun(open_document_, open_run_);
  open_run_.clear();
}

void Finder::PlaceRuns(const Block& block, const BlockFindings& found) {
  if (!block.pieces.empty() && !block.pieces.front().begins_passage) {
    open_run_.insert(open_run_.end(), found.head.begin(), found.head.end());
    if (found.one_run) return;
  }
  EndOpenRun();
  size_t begin = 0;
  for (const auto& [document, end] : found.run_ends) {
    AppendRun(Ordinal(block, document), absl::MakeSpan(found.runs).subspan(begin, end - begin));
    begin = end;
  }
  open_run_ = found.tail;
  if (!block.documents.empty()) {
    open_document_ = Ordinal(block, static_cast<uint32_t>(block.documents.size() - 1));
  }
}

void Finder::Place(Item* item) {
  const Block& block = item->block;
  BlockFindings& found = item->found;
  const bool goes_on = !block.pieces.empty() && !block.pieces.front().begins_passage;
  if (goes_on) {
    PlaceSeam(block);
  } else {
    GoOn("", true);
  }
  for (const auto& [phrase, count] : found.counts) {
    PhraseFindings& result = result_[phrase];
    result.occurrences += count.occurrences;
    result.across_breaks += count.across_breaks;
    if (count.first_document == WordTree::kNone) continue;
    const bool again = Ordinal(block, count.first_document) == last_document_[phrase];
    result.documents += count.documents - (again ? 1 : 0);
    last_document_[phrase] = Ordinal(block, count.last_document);
  }
  for (const auto& [key, times] : found.breaks) breaks_[key.first][key.second] += times;
  for (RawContext& raw : found.contexts) PlaceContext(std::move(raw), block);
  if (wanted_.keeps_runs()) PlaceRuns(block, found);
  if (!block.pieces.empty()) {
    const TextPiece& last = block.pieces.back();
    if (last.ends_passage || last.begins_passage) seam_.Clear();
    if (!last.ends_passage) seam_.Keep(last.text, last.text_offset);
  }
  for (const DocumentPart& document : block.documents) documents_ += document.begins ? 1 : 0;
  if (options_.first_contexts_alone && wanting_ == 0 && unfinished_.empty()) enough_ = true;
}

absl::Status Finder::Finish(const std::vector<std::string>& function_words, Findings* findings) {
  GoOn("", true);
  for (size_t i = 0; i < result_.size(); ++i) {
    result_[i].breaks.assign(breaks_[i].begin(), breaks_[i].end());
    std::stable_sort(result_[i].breaks.begin(), result_[i].breaks.end(),
                     [](const auto& a, const auto& b) { return a.second > b.second; });
  }
  findings->phrases = std::move(result_);
  if (!wanted_.keeps_runs()) return absl::OkStatus();
  EndOpenRun();
  std::vector<Entry>& entries = runs_->entries;
  if (!entries.empty()) entries.push_back(kDocumentEnd);
  PW_ASSIGN_OR_RETURN(const HugeVector<uint32_t> final_ids,
                      runs_->vocabulary.Finish(function_words));
  for (Entry& entry : entries) entry = IsMark(entry) ? entry : final_ids[entry];
  findings->runs = std::move(runs_);
  return absl::OkStatus();
}

absl::StatusOr<Findings> Finder::Run(const std::vector<std::string>& function_words,
                                     ThreadLanes& lanes, const Observer& observer) {
  Findings findings;
  BlockSource source(inputs_, read_options_);
  std::atomic<uint64_t> bytes_done{0};
  ThreadLanes::Steps<Item> steps;
  steps.make = [&](Item* item) -> absl::StatusOr<bool> {
    if (enough_) return false;
    PW_ASSIGN_OR_RETURN(const bool more, source.Next(&item->block));
    findings.whole = !more;
    return more;
  };
  steps.work = [&](int lane, Item* item) -> absl::Status {
    PW_RETURN_IF_ERROR(WorkerOf(lane).Find(&item->block, &item->found));
    observer.advance(bytes_done.fetch_add(item->block.bytes.size()) + item->block.bytes.size());
    return absl::OkStatus();
  };
  steps.place = [&](Item* item) {
    // What is under way when there is enough must leave no trace.
    if (!enough_) Place(item);
    return absl::OkStatus();
  };
  PW_RETURN_IF_ERROR(lanes.Pipeline(kBlocksInFlight, steps));
  findings.whole = findings.whole && !enough_;
  if (findings.whole) findings.digests = source.digests();
  workers_.clear();
  PW_RETURN_IF_ERROR(Finish(function_words, &findings));
  return findings;
}

}  // namespace

absl::StatusOr<Findings> FindPhrases(const Job& job, const std::vector<InputFile>& inputs,
                                     const std::vector<std::vector<std::string>>& phrases,
                                     const FindOptions& options, ThreadLanes& lanes,
                                     const Observer& observer, size_t block_bytes) {
  PW_ASSIGN_OR_RETURN(const std::vector<std::string> function_words, FunctionWordForms(job));
  Finder finder(job, inputs, phrases, options, block_bytes, lanes.lanes());
  return finder.Run(function_words, lanes, observer);
}

}  // namespace phraseweld
