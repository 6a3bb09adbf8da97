#include "run/source_recount.h"

#include <algorithm>
#include <map>
#include <utility>

#include "absl/container/flat_hash_map.h"
#include "base/slot_index.h"
#include "base/status.h"
#include "base/strings.h"
#include "count/documents.h"
#include "run/run.h"

namespace phraseweld {
namespace {

// Sequences of words as a tree, one word a branch.
class SequenceTree {
 public:
  explicit SequenceTree(uint32_t types) { first_.Resize(types); }
  void Add(const std::vector<uint32_t>& words, size_t sequence) {
    first_.Set(words[0]);
    uint32_t node = 0;
    for (const uint32_t word : words) {
      const auto next = static_cast<uint32_t>(ends_.size());
      const auto [branch, is_new] = branches_.try_emplace(Key(node, word), next);
      if (is_new) ends_.push_back(kNone);
      node = branch->second;
    }
    ends_[node] = sequence;
  }
  bool Begins(uint32_t word) const { return first_.Has(word); }
  // The node behind `word`, 0 where there is none.
  uint32_t Next(uint32_t node, uint32_t word) const {
    const auto branch = branches_.find(Key(node, word));
    return branch == branches_.end() ? 0 : branch->second;
  }
  static constexpr size_t kNone = ~size_t{0};
  // The sequence that ends at a node.
  size_t End(uint32_t node) const { return ends_[node]; }

 private:
  static uint64_t Key(uint32_t node, uint32_t word) { return (uint64_t{node} << 32) | word; }
  TypeBits first_;
  absl::flat_hash_map<uint64_t, uint32_t> branches_;
  std::vector<size_t> ends_ = {kNone};
};

}  // namespace

SourceRecount::SourceRecount(FileSystem& files, const FinishedRun& run, std::string scratch_folder)
    : files_(files),
      run_(run),
      scratch_folder_(std::move(scratch_folder)),
      lanes_(run.job.limits.threads, nullptr),
      corpus_(std::make_unique<EncodedCorpus>()) {}

SourceRecount::~SourceRecount() {
  counter_.reset();
  corpus_.reset();
  // What cannot be removed is no reason to withhold the answer.
  if (plan_.on_disk) files_.RemoveAll(scratch_folder_).IgnoreError();
}

absl::StatusOr<std::unique_ptr<SourceRecount>> SourceRecount::Read(
    FileSystem& files, const FinishedRun& run, const std::string& scratch_folder,
    const Observer& observer) {
  std::unique_ptr<SourceRecount> recount(new SourceRecount(files, run, scratch_folder));
  PW_ASSIGN_OR_RETURN(
      recount->source_,
      RunSource::Open(files, run, Concat(scratch_folder, ".source"), recount->lanes_));
  const std::vector<InputFile>& inputs = recount->source_->inputs();
  PW_ASSIGN_OR_RETURN(const std::vector<uint64_t> sizes, InputSizes(files, inputs));
  recount->plan_ = PlanMemory(run.job, inputs, sizes, recount->lanes_.lanes(), RunControls{});
  if (recount->plan_.on_disk) PW_RETURN_IF_ERROR(files.MakeDirectories(scratch_folder));
  PW_ASSIGN_OR_RETURN(recount->function_words_, FunctionWordForms(run.job));
  EncodedCorpus& corpus = *recount->corpus_;
  observer.stage({0, "", "read", recount->plan_.text_bytes, "bytes"});
  PW_RETURN_IF_ERROR(EncodeCorpus(run.job, inputs, recount->plan_, recount->function_words_,
                                  scratch_folder, files, recount->lanes_, observer, &corpus));
  if (const std::string fault = recount->source_->CheckDigests(corpus.digests); !fault.empty()) {
    return absl::FailedPreconditionError(
        Concat(fault, "; put the old input back or run the job anew"));
  }
  recount->numbers_.Resize(corpus.vocabulary.size());
  for (uint32_t word = 0; word < corpus.vocabulary.size(); ++word) {
    if (corpus.vocabulary.is_number(word)) recount->numbers_.Set(word);
  }
  return recount;
}

void SourceRecount::Count(std::vector<SequenceCount>* sequences) const {
  const Vocabulary& vocabulary = corpus_->vocabulary;
  SequenceTree tree(vocabulary.size());
  for (size_t i = 0; i < sequences->size(); ++i) {
    std::vector<uint32_t> words;
    for (const std::string& form : (*sequences)[i].forms) words.push_back(vocabulary.Find(form));
    const bool known = std::find(words.begin(), words.end(), kBreak) == words.end();
    if (known) tree.Add(words, i);
  }
  constexpr uint64_t kNever = ~uint64_t{0};
  std::vector<uint64_t> last_document(sequences->size(), kNever);
  const StreamView& stream = corpus_->stream;
  uint64_t document = 0;
  for (size_t chunk = 0; chunk < stream.chunks(); ++chunk) {
    for (uint64_t at = stream.cuts[chunk]; at < stream.cuts[chunk + 1]; ++at) {
      const Entry entry = stream.entries[at];
      if (entry == kDocumentEnd) ++document;
      if (!IsToken(entry) || !tree.Begins(entry)) continue;
      bool crossed = false;
      uint32_t node = tree.Next(0, entry);
      for (uint64_t next = at + 1; node != 0; ++next) {
        if (const size_t sequence = tree.End(node); sequence != SequenceTree::kNone) {
          SequenceCount& count = (*sequences)[sequence];
          if (crossed) {
            ++count.across_breaks;
          } else {
            ++count.occurrences;
            count.documents += last_document[sequence] != document ? 1 : 0;
            last_document[sequence] = document;
          }
        }
        for (; next < stream.size && stream.entries[next] == kBreak; ++next) crossed = true;
        if (next == stream.size || IsMark(stream.entries[next])) break;
        node = tree.Next(node, stream.entries[next]);
      }
    }
    stream.release(stream.cuts[chunk], stream.cuts[chunk + 1]);
  }
}

absl::StatusOr<std::unique_ptr<SlotCounter>> SourceRecount::NewCounter(const SlotRules& rules) {
  CounterOptions options;
  options.rules = rules;
  options.types_now = corpus_->vocabulary.size();
  options.expected_slots = corpus_->words;
  options.lanes = lanes_.lanes();
  options.on_disk = plan_.on_disk;
  options.working_bytes = plan_.working_bytes;
  options.scratch_folder = scratch_folder_;
  options.files = &files_;
  PW_ASSIGN_OR_RETURN(std::unique_ptr<SlotCounter> counter, SlotCounter::Create(options));
  const StreamView& stream = corpus_->stream;
  PW_RETURN_IF_ERROR(lanes_.ForEach(stream.chunks(), [&](int lane, size_t i) {
    counter->AddAll(lane, stream.entries, stream.cuts[i], stream.cuts[i + 1]);
    stream.release(stream.cuts[i], stream.cuts[i + 1]);
    return absl::OkStatus();
  }));
  PW_RETURN_IF_ERROR(
      counter->Update(lanes_, std::max(corpus_->vocabulary.size(), results_.types.size())));
  return counter;
}

absl::StatusOr<std::vector<std::string>> SourceRecount::FrequentPairs(size_t most) {
  // Without function words every slot is a pair of adjacent words.
  PW_ASSIGN_OR_RETURN(const std::unique_ptr<SlotCounter> counter, NewCounter(SlotRules{}));
  std::vector<std::map<uint64_t, uint64_t>> types_by_n(static_cast<size_t>(lanes_.lanes()));
  PW_RETURN_IF_ERROR(counter->Visit(lanes_, 1, [&](int lane, const Slot&, const SlotTable& table) {
    ++types_by_n[static_cast<size_t>(lane)][table.n];
  }));
  std::map<uint64_t, uint64_t> all;
  for (const auto& lane : types_by_n) {
    for (const auto& [n, types] : lane) all[n] += types;
  }
  uint64_t least = 1, types = 0;
  for (auto n = all.rbegin(); n != all.rend() && types < most; ++n) {
    least = n->first;
    types += n->second;
  }
  std::vector<std::vector<std::pair<uint64_t, Slot>>> found(static_cast<size_t>(lanes_.lanes()));
  PW_RETURN_IF_ERROR(
      counter->Visit(lanes_, least, [&](int lane, const Slot& slot, const SlotTable& table) {
        found[static_cast<size_t>(lane)].emplace_back(table.n, slot);
      }));
  std::vector<std::pair<uint64_t, std::string>> pairs;
  for (const auto& lane : found) {
    for (const auto& [n, slot] : lane) {
      pairs.emplace_back(n, Concat(corpus_->vocabulary.form(slot.left), " ",
                                   corpus_->vocabulary.form(slot.right)));
    }
  }
  std::sort(pairs.begin(), pairs.end(), [](const auto& a, const auto& b) {
    return a.first != b.first ? a.first > b.first : a.second < b.second;
  });
  std::vector<std::string> texts;
  for (auto& [n, text] : pairs) {
    if (texts.size() < most) texts.push_back(std::move(text));
  }
  return texts;
}

absl::Status SourceRecount::PreparePassOne() {
  if (counter_ != nullptr) return absl::OkStatus();
  Job rulings_alone = run_.job;
  rulings_alone.passes.clear();
  PW_ASSIGN_OR_RETURN(std::vector<ResolvedRuling> rulings, ResolveRulings(run_.job));
  Timings timings;
  PW_RETURN_IF_ERROR(RunPasses(rulings_alone, plan_, function_words_, std::move(rulings),
                               scratch_folder_, files_, lanes_, Observer{}, &timings, corpus_.get(),
                               &results_));
  tokens_ = results_.tokens_out;
  rules_.codes = results_.codes;
  if (run_.job.words.numbers == Numbers::kNowhere) rules_.barriers = &numbers_;
  PW_ASSIGN_OR_RETURN(counter_, NewCounter(rules_));
  return absl::OkStatus();
}

SlotTable SourceRecount::WithMargins(const Slot& slot, SlotTable table) const {
  if (run_.job.passes.empty() || run_.job.passes[0].margins == Margins::kSlots) return table;
  if (slot.bridge == 0) {
    table.left = results_.frequency[slot.left];
    table.right = results_.frequency[slot.right];
    table.total = tokens_;
  }
  table.all = tokens_;
  return table;
}

absl::Status SourceRecount::FillDocuments(std::vector<RecountedSlot>* slots) {
  if (slots->empty()) return absl::OkStatus();
  const SlotIndex index(slots->size(), results_.types.size(), rules_.codes,
                        [&](size_t i) -> const Slot& { return (*slots)[i].slot; });
  PW_ASSIGN_OR_RETURN(const SlotPlaces places,
                      CountSlotDocuments(lanes_, corpus_->stream, rules_, index, slots->size()));
  for (size_t i = 0; i < slots->size(); ++i) (*slots)[i].table.documents = places.documents[i];
  return absl::OkStatus();
}

absl::StatusOr<std::vector<RecountedSlot>> SourceRecount::PassOne(uint64_t least) {
  PW_RETURN_IF_ERROR(PreparePassOne());
  const TypeTable& types = results_.types;
  const bool no_number_first = run_.job.words.numbers == Numbers::kNotFirst;
  std::map<std::vector<uint32_t>, bool> never;
  for (const ResolvedRuling& ruling : results_.rulings) {
    if (!ruling.ruling.always) never[ruling.words] = true;
  }
  std::vector<std::vector<RecountedSlot>> found(static_cast<size_t>(lanes_.lanes()));
  PW_RETURN_IF_ERROR(counter_->Visit(
      lanes_, std::max<uint64_t>(least, 1),
      [&](int lane, const Slot& slot, const SlotTable& table) {
        if (no_number_first && numbers_.HasChecked(slot.left)) return;
        const std::vector<uint32_t> words = types.SlotWords(slot, results_.codes);
        if (words.size() > static_cast<size_t>(run_.job.phrases.longest) || never.contains(words)) {
          return;
        }
        found[static_cast<size_t>(lane)].push_back(
            {slot, types.Text(words), WithMargins(slot, table)});
      }));
  std::vector<RecountedSlot> slots;
  for (auto& lane : found) {
    std::move(lane.begin(), lane.end(), std::back_inserter(slots));
    lane.clear();
  }
  std::sort(slots.begin(), slots.end(), [](const RecountedSlot& a, const RecountedSlot& b) {
    return a.table.n != b.table.n ? a.table.n > b.table.n : a.phrase < b.phrase;
  });
  PW_RETURN_IF_ERROR(FillDocuments(&slots));
  return slots;
}

absl::StatusOr<std::vector<std::optional<SlotTable>>> SourceRecount::Tables(
    const std::vector<Slot>& slots) {
  std::vector<std::optional<SlotTable>> tables(slots.size());
  if (slots.empty()) return tables;
  const SlotIndex index(slots.size(), results_.types.size(), rules_.codes,
                        [&](size_t i) -> const Slot& { return slots[i]; });
  // Each slot type is visited once, so no two lanes write to one place.
  PW_RETURN_IF_ERROR(counter_->Visit(lanes_, 1, [&](int, const Slot& slot, const SlotTable& table) {
    const uint32_t place = index.Find(slot);
    if (place != SlotIndex::kAbsent) tables[place] = WithMargins(slot, table);
  }));
  PW_ASSIGN_OR_RETURN(const SlotPlaces places,
                      CountSlotDocuments(lanes_, corpus_->stream, rules_, index, slots.size()));
  for (size_t i = 0; i < slots.size(); ++i) {
    if (tables[i]) tables[i]->documents = places.documents[i];
  }
  return tables;
}

std::optional<Slot> SourceRecount::SlotOf(const std::vector<std::string>& forms) const {
  std::vector<uint32_t> words;
  for (const std::string& form : forms) {
    words.push_back(corpus_->vocabulary.Find(form));
    if (words.back() == kBreak) return std::nullopt;
  }
  const uint32_t function_types = results_.codes.function_types();
  const size_t between = words.size() - 2;
  if (words.size() < 2 || words.front() < function_types || words.back() < function_types ||
      between > static_cast<size_t>(results_.codes.bridge())) {
    return std::nullopt;
  }
  uint64_t digits = 0;
  for (size_t i = 1; i + 1 < words.size(); ++i) {
    if (words[i] >= function_types) return std::nullopt;
    digits = digits * function_types + words[i];
  }
  return Slot{words.front(), words.back(), results_.codes.Code(static_cast<int>(between), digits)};
}

bool SourceRecount::IsFunctionWord(const std::string& form) const {
  const uint32_t word = corpus_->vocabulary.Find(form);
  return word < function_words_.size();
}

bool SourceRecount::IsNumber(const std::string& form) const {
  return numbers_.HasChecked(corpus_->vocabulary.Find(form));
}

}  // namespace phraseweld
