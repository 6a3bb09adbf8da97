#include "run/context_finder.h"

#include <algorithm>
#include <atomic>
#include <map>
#include <utility>

#include "absl/container/flat_hash_map.h"
#include "base/status.h"
#include "run/delivery.h"
#include "run/job_options.h"
#include "run/passage_seam.h"
#include "run/passes.h"
#include "run/word_tree.h"

namespace phraseweld {
namespace {

// Words that are only looked for get a place behind all places of the source.
constexpr uint64_t kNoPlace = uint64_t{1} << 61;
// Around a match, before what is too much is cut off between characters.
constexpr size_t kRaw = PassageSeam::kAround;
static_assert(kRaw >= kContextBytes + 4);

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

// A match with its text as far as its piece has it. Names are filled in when the blocks come in
// order.
struct RawContext {
  uint32_t phrase = 0;
  bool broken = false;
  uint32_t document = 0;  // place in the block
  uint32_t field = 0;
  bool reaches_back = false;     // the text before may go on in an earlier piece
  bool reaches_forward = false;  // the text behind goes on in a later piece
  PhraseContext context;
};

struct Count {
  uint64_t occurrences = 0, documents = 0, across_breaks = 0;
  uint32_t first_document = WordTree::kNone, last_document = WordTree::kNone;
  size_t contexts[2] = {0, 0};  // of this block
};

// What was found in one block.
struct BlockFindings {
  absl::flat_hash_map<uint32_t, Count> counts;  // by phrase
  std::map<std::pair<uint32_t, std::string>, uint64_t> breaks;
  std::vector<RawContext> contexts;
  std::vector<Entry> runs;                            // kept ones, one after another
  std::vector<std::pair<uint32_t, size_t>> run_ends;  // document, end in `runs`
  std::vector<Entry> head, tail;  // of the runs that reach over the block's ends
  bool one_run = false;           // head is the whole block, and the run goes on behind it
};

struct Item {
  Block block;
  BlockFindings found;
};

// A sequence of the tree.
struct Sequence {
  uint32_t phrase = WordTree::kNone;
  bool keep = false;
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
        workers_(static_cast<size_t>(lanes)),
        result_(phrases.size()),
        breaks_(phrases.size()),
        last_document_(phrases.size(), 0),
        full_(2 * phrases.size()),
        runs_(std::make_unique<KeptRuns>()),
        keeps_(options.keep_all || !options.keep.empty()) {
    size_t longest = 1;
    for (size_t i = 0; i < phrases.size(); ++i) {
      AddSequence(phrases[i], static_cast<uint32_t>(i), false);
      lengths_.push_back(static_cast<uint32_t>(phrases[i].size()));
      longest = std::max(longest, phrases[i].size());
    }
    for (const auto& forms : options.keep) AddSequence(forms, WordTree::kNone, true);
    seam_ = std::make_unique<PassageSeam>(word_options_, longest);
    seam_encoder_ = std::make_unique<Encoder>(word_options_, &runs_->vocabulary);
    seam_splitter_ = std::make_unique<WordSplitter>(word_options_);
    wanting_ = options.contexts > 0 ? phrases.size() : 0;
  }

  absl::StatusOr<Findings> Run(const std::vector<std::string>& function_words, ThreadLanes& lanes,
                               const Observer& observer);

 private:
  struct Unfinished {
    uint32_t phrase;
    bool broken;
    size_t place;
  };
  struct Worker {
    Worker(const std::vector<InputFile>& inputs, const ReadOptions& read, const WordOptions& words)
        : parser(inputs, read), splitter(words) {}
    BlockParser parser;
    WordSplitter splitter;
    std::unique_ptr<Encoder> encoder;
    uint64_t next_index = 0;
    std::vector<Entry> entries;
    std::vector<WordSpan> spans;
    std::vector<size_t> kept_at;  // where sequences to keep begin
  };

  void AddSequence(const std::vector<std::string>& forms, uint32_t phrase, bool keep);
  // Counts a match; true where its text is wanted too.
  static bool Add(Count* count, uint32_t document, bool broken, size_t contexts);
  absl::Status Work(int lane, Item* item);
  void FindIn(const Block& block, size_t piece, uint32_t document, Worker* worker,
              BlockFindings* found);
  void KeepRuns(const TextPiece& piece, uint32_t document, bool first, bool last, Worker* worker,
                BlockFindings* found);
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
  WordTree tree_;
  std::vector<std::vector<Sequence>> sequences_;  // all that are the same words, by the first
  std::map<std::vector<std::string>, uint32_t> sequence_of_;
  std::vector<std::unique_ptr<Worker>> workers_;

  // In the order of the corpus.
  std::vector<PhraseFindings> result_;
  std::vector<std::map<std::string, uint64_t>> breaks_;
  std::vector<uint64_t> last_document_;  // ordinal of the last one with a match
  uint64_t documents_ = 0;               // that began in blocks before
  std::unique_ptr<PassageSeam> seam_;
  std::unique_ptr<Encoder> seam_encoder_;
  std::unique_ptr<WordSplitter> seam_splitter_;
  // Contexts whose text goes on in the next piece.
  std::vector<Unfinished> unfinished_;
  std::vector<std::atomic<bool>> full_;  // 2 * phrase + broken: it has its contexts
  std::atomic<bool> enough_{false};
  size_t wanting_ = 0;  // phrases that lack contexts in a run
  std::unique_ptr<KeptRuns> runs_;
  const bool keeps_;
  std::vector<uint32_t> lengths_;  // words of each phrase
  std::vector<Entry> open_run_;
  uint64_t open_document_ = 0;
  uint64_t kept_document_ = 0;  // of the last run that was kept
};

void Finder::AddSequence(const std::vector<std::string>& forms, uint32_t phrase, bool keep) {
  const auto [place, is_new] =
      sequence_of_.try_emplace(forms, static_cast<uint32_t>(sequences_.size()));
  if (is_new) {
    std::vector<uint32_t> words;
    for (const std::string& form : forms) {
      words.push_back(runs_->vocabulary.Intern(form, kNoPlace, false));
    }
    tree_.Add(words, place->second);
    sequences_.emplace_back();
  }
  sequences_[place->second].push_back({phrase, keep});
}

bool Finder::Add(Count* count, uint32_t document, bool broken, size_t contexts) {
  if (broken) {
    ++count->across_breaks;
  } else {
    ++count->occurrences;
    if (count->first_document == WordTree::kNone) count->first_document = document;
    count->documents += count->last_document != document ? 1 : 0;
    count->last_document = document;
  }
  return count->contexts[broken ? 1 : 0]++ < contexts;
}

absl::Status Finder::Work(int lane, Item* item) {
  auto& worker = workers_[static_cast<size_t>(lane)];
  if (worker == nullptr) worker = std::make_unique<Worker>(inputs_, read_options_, word_options_);
  Block& block = item->block;
  // The encoder remembers words, on the understanding that it walks forward.
  if (worker->encoder == nullptr || block.index < worker->next_index) {
    worker->encoder = std::make_unique<Encoder>(word_options_, &runs_->vocabulary);
  }
  worker->next_index = block.index + 1;
  PW_RETURN_IF_ERROR(worker->parser.Parse(&block));
  item->found = BlockFindings{};
  uint64_t place = block.index << 32;
  for (size_t d = 0; d < block.documents.size(); ++d) {
    const size_t end =
        d + 1 < block.documents.size() ? block.documents[d + 1].first_piece : block.pieces.size();
    for (size_t p = block.documents[d].first_piece; p < end; ++p) {
      const TextPiece& piece = block.pieces[p];
      worker->entries.clear();
      worker->encoder->Encode(piece.text, !piece.ends_passage, place, &worker->entries);
      place += worker->entries.size();
      FindIn(block, p, static_cast<uint32_t>(d), worker.get(), &item->found);
      if (keeps_) {
        KeepRuns(piece, static_cast<uint32_t>(d), p == 0, p + 1 == block.pieces.size(),
                 worker.get(), &item->found);
      }
    }
  }
  return absl::OkStatus();
}

void Finder::FindIn(const Block& block, size_t piece_number, uint32_t document, Worker* worker,
                    BlockFindings* found) {
  const TextPiece& piece = block.pieces[piece_number];
  bool is_split = false;
  const auto spans = [&]() -> const std::vector<WordSpan>& {
    if (!is_split) worker->splitter.Split(piece.text, &worker->spans);
    is_split = true;
    return worker->spans;
  };
  worker->kept_at.clear();
  tree_.Find(worker->entries, [&](uint32_t sequence, size_t at, uint32_t token,
                                  uint32_t break_after) {
    const bool broken = break_after != WordTree::kNone;
    for (const Sequence& wanted : sequences_[sequence]) {
      if (wanted.keep && !broken) worker->kept_at.push_back(at);
      if (wanted.phrase == WordTree::kNone) continue;
      const bool text = Add(&found->counts[wanted.phrase], document, broken, options_.contexts) &&
                        !full_[2 * wanted.phrase + (broken ? 1 : 0)].load();
      if (!text && !broken) continue;
      const std::vector<WordSpan>& words = spans();
      if (broken) {
        const uint32_t from = words[break_after].end, to = words[break_after + 1].begin;
        ++found->breaks[{wanted.phrase, BreakName(piece.text.substr(from, to - from))}];
      }
      if (!text) continue;
      const uint32_t last = token + lengths_[wanted.phrase] - 1;
      RawContext raw;
      raw.phrase = wanted.phrase;
      raw.broken = broken;
      raw.document = document;
      raw.field = piece.field;
      const size_t begin = words[token].begin, end = words[last].end;
      const size_t from = begin > kRaw ? begin - kRaw : 0;
      raw.reaches_back = from == 0 && !piece.begins_passage;
      raw.reaches_forward = piece.text.size() - end < kRaw && !piece.ends_passage;
      raw.context.byte = piece.text_offset + begin;
      raw.context.before = piece.text.substr(from, begin - from);
      raw.context.match = piece.text.substr(begin, end - begin);
      raw.context.after = piece.text.substr(end, kRaw);
      found->contexts.push_back(std::move(raw));
    }
  });
}

void Finder::KeepRuns(const TextPiece& piece, uint32_t document, bool first, bool last,
                      Worker* worker, BlockFindings* found) {
  const std::vector<Entry>& entries = worker->entries;
  size_t begin = 0, end = entries.size();
  if (first && !piece.begins_passage) {
    while (begin < end && !IsMark(entries[begin])) ++begin;
    found->head.assign(entries.begin(), entries.begin() + static_cast<ptrdiff_t>(begin));
    found->one_run = begin == end && !piece.ends_passage;
  }
  if (last && !piece.ends_passage) {
    while (end > begin && !IsMark(entries[end - 1])) --end;
    found->tail.assign(entries.begin() + static_cast<ptrdiff_t>(end), entries.end());
  }
  size_t next_hit = 0;
  for (size_t at = begin; at < end;) {
    if (!options_.keep_all) {
      while (next_hit < worker->kept_at.size() && worker->kept_at[next_hit] < at) ++next_hit;
      if (next_hit == worker->kept_at.size() || worker->kept_at[next_hit] >= end) break;
      const size_t hit = worker->kept_at[next_hit];
      for (at = hit; at > begin && !IsMark(entries[at - 1]);) --at;
    }
    const size_t run = at;
    while (at < end && !IsMark(entries[at])) ++at;
    if (run < at) {
      found->runs.insert(found->runs.end(), entries.begin() + static_cast<ptrdiff_t>(run),
                         entries.begin() + static_cast<ptrdiff_t>(at));
      found->run_ends.emplace_back(document, found->runs.size());
    }
    ++at;
  }
}

// Gives `piece` to the contexts that end in the text before it.
void Finder::GoOn(std::string_view piece, bool ends_passage) {
  std::erase_if(unfinished_, [&](const Unfinished& place) {
    std::string& after = ContextOf(place).after;
    after += piece.substr(0, kRaw - after.size());
    if (after.size() < kRaw && !ends_passage) return false;
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
    const std::string_view earlier = seam_->text();
    const size_t missing = std::min(kRaw - context.before.size(), earlier.size());
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
  const PassageSeam::Joined joined = seam_->Join(piece.text);
  const std::string_view text = joined.text;
  const bool whole_piece = text.size() - joined.cut == piece.text.size();
  std::vector<Entry> entries;
  seam_encoder_->Encode(text.substr(joined.exact_from), false, kNoPlace, &entries);
  std::vector<WordSpan> words;
  bool is_split = false;
  tree_.Find(entries, [&](uint32_t sequence, size_t, uint32_t token, uint32_t break_after) {
    for (const Sequence& wanted : sequences_[sequence]) {
      if (wanted.phrase == WordTree::kNone) continue;
      if (!is_split) seam_splitter_->Split(text.substr(joined.exact_from), &words);
      is_split = true;
      const uint32_t last = token + lengths_[wanted.phrase] - 1;
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
      raw.reaches_forward = whole_piece && text.size() - end < kRaw && !piece.ends_passage;
      const size_t from = begin > kRaw ? begin - kRaw : 0;
      raw.context.byte = joined.offset + begin;
      raw.context.before = text.substr(from, begin - from);
      raw.context.match = text.substr(begin, end - begin);
      raw.context.after = text.substr(end, kRaw);
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
    tree_.Find(open_run_, [&](uint32_t sequence, size_t, uint32_t, uint32_t) {
      for (const Sequence& wanted : sequences_[sequence]) kept = kept || wanted.keep;
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
  if (keeps_) PlaceRuns(block, found);
  if (!block.pieces.empty()) {
    const TextPiece& last = block.pieces.back();
    if (last.ends_passage || last.begins_passage) seam_->Clear();
    if (!last.ends_passage) seam_->Keep(last.text, last.text_offset);
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
  if (!keeps_) return absl::OkStatus();
  EndOpenRun();
  std::vector<Entry>& entries = runs_->entries;
  if (!entries.empty()) entries.push_back(kDocumentEnd);
  PW_ASSIGN_OR_RETURN(const std::vector<uint32_t> final_ids,
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
    PW_RETURN_IF_ERROR(Work(lane, item));
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
