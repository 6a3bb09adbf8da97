#include "run/verify_walk.h"

#include <algorithm>
#include <utility>

#include "base/json.h"
#include "base/status.h"
#include "base/strings.h"
#include "run/job_options.h"

namespace phraseweld {
namespace {

// Of text at once; not what a run takes, so that the two do not cut texts at the same places.
constexpr size_t kBlockBytes = size_t{700} << 10;

}  // namespace

// Makes the rewritten file anew from the source and compares it. Positions are those of the source.
class VerifyWalk::RewrittenSource {
 public:
  RewrittenSource(FileSystem& files, const std::string& path, std::string joiner,
                  VerifyFaults* faults)
      : joiner_(std::move(joiner)), comparer_(files, path, "", faults) {}

  void Add(std::string_view bytes) { pending_ += bytes; }
  // The joiner stands for [from, to). Passages need not come in the order of their places.
  void Join(uint64_t from, uint64_t to) { joins_.emplace_back(from, to); }
  // No join before `to` is to come.
  void Release(uint64_t to) {
    std::sort(joins_.begin(), joins_.end());
    for (const auto& [from, join_end] : joins_) {
      Pass(from);
      comparer_.Next(joiner_);
      at_ = join_end;
    }
    joins_.clear();
    Pass(to);
    pending_.erase(0, at_ - begin_);
    begin_ = at_;
  }
  void Finish() {
    Release(begin_ + pending_.size());
    comparer_.Finish();
  }

 private:
  void Pass(uint64_t to) {
    comparer_.Next(std::string_view(pending_).substr(at_ - begin_, to - at_));
    at_ = to;
  }

  const std::string joiner_;
  ByteComparer comparer_;
  std::vector<std::pair<uint64_t, uint64_t>> joins_;
  std::string pending_;
  uint64_t begin_ = 0;  // position of pending_[0]
  uint64_t at_ = 0;     // all before it is compared
};

VerifyWalk::VerifyWalk(const FolderCheck& check, const Job& job, std::vector<InputFile> inputs,
                       VerifyFaults* faults, Recounter* recounter)
    : check_(check),
      job_(job),
      inputs_(std::move(inputs)),
      faults_(faults),
      recounter_(recounter),
      splitter_(WordOptionsOf(job), SplitPath::kExact),
      folder_(WordOptionsOf(job)) {}

VerifyWalk::~VerifyWalk() = default;

absl::Status VerifyWalk::Walk() {
  uint64_t total = 0, done = 0;
  for (const RunInput& input : check_.manifest.inputs) total += input.text_bytes;
  check_.observer.stage({0, "", "recount", total, "bytes"});
  if (job_.deliver.spans) {
    spans_ =
        std::make_unique<ByteComparer>(check_.files, InFolder(check_, "spans.jsonl"), "", faults_);
  }
  const ReadOptions options = ReadOptionsOf(job_, kBlockBytes);
  BlockSource source(inputs_, options);
  BlockParser parser(inputs_, options);
  Block block;
  for (;;) {
    PW_RETURN_IF_ERROR(Stopped(check_.observer));
    absl::StatusOr<bool> more = source.Next(&block);
    absl::Status status = more.status();
    if (status.ok() && *more) status = parser.Parse(&block);
    if (!status.ok()) {
      faults_->Add(std::string(status.message()));
      return absl::OkStatus();
    }
    if (!*more) break;
    Take(block);
    done += block.bytes.size();
    check_.observer.advance(done);
  }
  if (spans_ != nullptr) spans_->Finish();
  digests_ = source.digests();
  recounter_->Finish();
  return absl::OkStatus();
}

void VerifyWalk::Take(const Block& block) {
  if (block.file_offset == 0) BeginFile(block.file);
  if (source_ != nullptr) source_->Add(block.bytes);
  bad_lines_ += block.bad_lines;
  for (size_t d = 0; d < block.documents.size(); ++d) {
    const DocumentPart& document = block.documents[d];
    const size_t end =
        d + 1 < block.documents.size() ? block.documents[d + 1].first_piece : block.pieces.size();
    if (document.begins) BeginDocument(document.id);
    for (size_t p = document.first_piece; p < end; ++p) {
      const TextPiece& piece = block.pieces[p];
      if (piece.begins_passage) BeginPassage(piece.field);
      TakePiece(block, piece);
      if (piece.ends_passage) EndPassage();
    }
    if (document.ends) EndDocument();
  }
  if (source_ != nullptr) {
    source_->Release(run_.words.empty() ? block.file_offset + block.bytes.size()
                                        : places_.front().first);
  }
  if (block.ends_file) EndFile();
}

void VerifyWalk::BeginFile(uint32_t file) {
  const RunInput& input = check_.manifest.inputs[file];
  const std::string path = InFolder(check_, RewrittenPath(job_, input));
  if (job_.deliver.corpus == CorpusForm::kWords) {
    words_ = std::make_unique<ByteComparer>(check_.files, path, "", faults_);
  } else if (job_.deliver.corpus == CorpusForm::kSource) {
    std::string joiner = job_.deliver.joiner;
    if (job_.corpus.layout == Layout::kJsonLines) {
      joiner.clear();
      AppendJsonText(&joiner, job_.deliver.joiner);
    }
    source_ = std::make_unique<RewrittenSource>(check_.files, path, std::move(joiner), faults_);
  }
}

void VerifyWalk::EndFile() {
  if (words_ != nullptr) words_->Finish();
  if (source_ != nullptr) source_->Finish();
  words_.reset();
  source_.reset();
}

void VerifyWalk::BeginDocument(std::string_view id) {
  document_ = id.empty() ? Concat(recounter_->documents() + 1) : std::string(id);
  document_has_words_ = false;
  recounter_->BeginDocument(document_);
}

void VerifyWalk::EndDocument() {
  if (words_ != nullptr) words_->Next("\n");
}

void VerifyWalk::BeginPassage(uint32_t field) {
  const std::string name =
      job_.corpus.layout == Layout::kJsonLines ? job_.corpus.fields[field] : "";
  recounter_->BeginPassage(name);
  gap_.clear();
  passage_offset_ = 0;
  passage_has_spans_ = false;
  if (spans_ == nullptr) return;
  text_ = "{\"document\":";
  AppendJsonString(&text_, document_);
  text_ += ",\"passage\":";
  AppendJsonString(&text_, name);
  text_ += ",\"spans\":[";
  spans_->Next(text_);
}

void VerifyWalk::EndPassage() {
  EndRun();
  if (spans_ != nullptr) spans_->Next("]}\n");
}

void VerifyWalk::TakePiece(const Block& block, const TextPiece& piece) {
  splitter_.Split(piece.text, &spans_of_piece_);
  SourceMap map(block, piece);
  const auto place_of = [&](uint64_t offset) {
    return block.file_offset + (piece.escaped ? map.ToSource(offset) : piece.source_begin + offset);
  };
  uint64_t at = 0;  // end of the word before
  for (const WordSpan& word : spans_of_piece_) {
    gap_ += piece.text.substr(at, word.begin - at);
    if (!run_.words.empty() && GapIsOpen(gap_, job_.words.hyphens == Hyphens::kJoin)) {
      run_.text += gap_;
    } else {
      EndRun();
      run_.text_offset = passage_offset_ + word.begin;
    }
    gap_.clear();
    const std::string_view text = piece.text.substr(word.begin, word.end - word.begin);
    const uint64_t begin = run_.text.size();
    run_.text += text;
    run_.words.push_back(
        {recounter_->Word(folder_.Form(text), word.number), begin, begin + text.size()});
    if (source_ != nullptr) {
      const uint64_t from = place_of(word.begin);
      places_.emplace_back(from, place_of(word.end));
    } else {
      places_.emplace_back(0, 0);
    }
    at = word.end;
  }
  gap_ += piece.text.substr(at);
  passage_offset_ += piece.text.size();
}

void VerifyWalk::EndRun() {
  if (run_.words.empty()) return;
  Deliver(recounter_->AddRun(run_));
  run_.text.clear();
  run_.words.clear();
  places_.clear();
}

void VerifyWalk::Deliver(const std::vector<RecountToken>& tokens) {
  for (const RecountToken& token : tokens) {
    if (words_ != nullptr) {
      if (document_has_words_) words_->Next(" ");
      document_has_words_ = true;
      words_->Next(recounter_->Text(token.type, job_.deliver.joiner));
    }
    if (!recounter_->is_phrase(token.type)) continue;
    const size_t last = token.first_word + token.words - 1;
    if (source_ != nullptr) {
      for (size_t i = token.first_word; i < last; ++i) {
        source_->Join(places_[i].second, places_[i + 1].first);
      }
    }
    if (spans_ != nullptr) {
      text_ = Concat(passage_has_spans_ ? ",[" : "[",
                     run_.text_offset + run_.words[token.first_word].begin, ",",
                     run_.text_offset + run_.words[last].end, ",");
      AppendJsonString(&text_, recounter_->Text(token.type));
      text_ += ']';
      spans_->Next(text_);
      passage_has_spans_ = true;
    }
  }
}

}  // namespace phraseweld
