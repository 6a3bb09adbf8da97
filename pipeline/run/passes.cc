#include "run/passes.h"

#include <algorithm>
#include <atomic>
#include <map>
#include <memory>

#include "absl/strings/str_cat.h"
#include "absl/strings/str_join.h"
#include "audit/pass_log.h"
#include "base/slot_index.h"
#include "base/status.h"
#include "base/units.h"
#include "count/documents.h"
#include "count/slot_counter.h"
#include "merge/merger.h"
#include "merge/rulings.h"
#include "run/job_options.h"
#include "run/recount.h"
#include "score/chooser.h"

namespace phraseweld {
namespace {

// Near misses that a lane keeps at first; enough unless many of them are in too few documents.
constexpr size_t kNearCapacity = 4 * kMostNearMisses;

// The state of the pass loop.
class PassLoop {
 public:
  PassLoop(const Job& job, const MemoryPlan& plan, const std::string& scratch_folder,
           FileSystem& files, ThreadLanes& lanes, const Observer& observer, Timings* timings,
           EncodedCorpus* corpus, PassResults* results)
      : job_(job),
        plan_(plan),
        scratch_folder_(scratch_folder),
        files_(files),
        lanes_(lanes),
        observer_(observer),
        timings_(timings),
        corpus_(*corpus),
        results_(*results) {}

  absl::Status Prepare(uint32_t function_types, std::vector<ResolvedRuling> rulings);
  absl::Status JoinRulings();
  absl::StatusOr<bool> RunPass(const PassOptions& options, bool is_last);
  absl::Status Run();

 private:
  absl::Status CountAll(SlotCounter* counter);
  absl::StatusOr<std::unique_ptr<SlotCounter>> NewCounter(const char* purpose);
  absl::StatusOr<Choice> Choose(const PassOptions& options, uint64_t tokens);
  absl::Status FillDocuments(std::vector<Candidate>* pending);
  // `ranks`: of the accepted candidates, by their places.
  absl::Status MergeAccepted(PassRecord* record, const std::vector<uint32_t>& ranks,
                             bool count_changes);
  absl::Status PhrasesFitMemory(size_t accepted);
  void Adjust(uint32_t type, uint64_t more, uint64_t less);
  void BeginStage(const char* name) {
    timings_->Begin(absl::StrCat("pass ", number_, " ", name));
    done_ = 0;
    observer_.stage({number_, name_, name, corpus_.stream.size, "tokens"});
  }
  // Work over all chunks of the stream.
  template <typename Work>
  absl::Status ForChunks(Work&& work) {
    return lanes_.ForEach(corpus_.stream.chunks(), [&](int lane, size_t i) {
      const uint64_t begin = corpus_.stream.cuts[i], end = corpus_.stream.cuts[i + 1];
      work(lane, i, begin, end);
      corpus_.stream.release(begin, end);
      observer_.advance(done_.fetch_add(end - begin) + end - begin);
      return absl::OkStatus();
    });
  }

  const Job& job_;
  const MemoryPlan& plan_;
  const std::string& scratch_folder_;
  FileSystem& files_;
  ThreadLanes& lanes_;
  const Observer& observer_;
  Timings* timings_;
  EncodedCorpus& corpus_;
  PassResults& results_;

  TypeBits numbers_;
  SlotRules slot_rules_;
  PhraseRules phrase_rules_;
  std::unique_ptr<SlotCounter> counter_;
  // Where the slots of the candidates stand, a list a chunk of the stream, none where that would
  // take too much memory; how many candidates there are.
  std::vector<std::vector<FoundSlot>> found_;
  size_t candidates_ = 0;
  uint64_t tokens_ = 0, types_ = 0;
  uint64_t phrase_bytes_ = 0;
  int number_ = 0;
  std::string name_;
  std::atomic<uint64_t> done_{0};
};

absl::Status PassLoop::Prepare(uint32_t function_types, std::vector<ResolvedRuling> rulings) {
  const Vocabulary& vocabulary = corpus_.vocabulary;
  if (!BridgeCodes::Fits(function_types, job_.words.bridge)) {
    return absl::InvalidArgumentError(absl::StrCat(
        function_types, " function words are too many for words.bridge: ", job_.words.bridge,
        "; a smaller bridge or a shorter list will do"));
  }
  results_.codes = BridgeCodes(function_types, job_.words.bridge);
  results_.types = TypeTable(
      vocabulary.size(), [&vocabulary](uint32_t word) { return vocabulary.form(word); },
      [&vocabulary](absl::Span<const uint32_t> words) { vocabulary.Expect(words); });
  results_.frequency = corpus_.frequency;
  results_.rulings = std::move(rulings);
  slot_rules_.codes = results_.codes;
  if (job_.words.numbers != Numbers::kAnywhere) {
    numbers_.Resize(vocabulary.size());
    for (uint32_t word = 0; word < vocabulary.size(); ++word) {
      if (vocabulary.is_number(word)) numbers_.Set(word);
    }
  }
  if (job_.words.numbers == Numbers::kNowhere) slot_rules_.barriers = &numbers_;
  if (job_.words.numbers == Numbers::kNotFirst) phrase_rules_.numbers_not_first = &numbers_;
  phrase_rules_.types = &results_.types;
  phrase_rules_.codes = &results_.codes;
  phrase_rules_.longest = job_.phrases.longest;
  phrase_rules_.token_frequency = &results_.frequency;
  for (size_t i = 0; i < results_.rulings.size(); ++i) {
    ResolvedRuling& ruling = results_.rulings[i];
    for (const std::string& form : ruling.forms) {
      const uint32_t word = vocabulary.Find(form);
      if (word == kBreak) {
        ruling.words.clear();
        break;
      }
      ruling.words.push_back(word);
    }
    if (!ruling.ruling.always && !ruling.words.empty()) phrase_rules_.never[ruling.words] = i;
  }
  tokens_ = corpus_.words;
  types_ = corpus_.word_types;
  return absl::OkStatus();
}

void PassLoop::Adjust(uint32_t type, uint64_t more, uint64_t less) {
  if (type >= results_.frequency.size()) results_.frequency.resize(results_.types.size(), 0);
  uint64_t& frequency = results_.frequency[type];
  types_ -= frequency > 0 ? 1 : 0;
  frequency += more;
  frequency -= less;
  types_ += frequency > 0 ? 1 : 0;
}

// Pass 0: what the rulings say is always joined.
absl::Status PassLoop::JoinRulings() {
  // Distinct phrases, longer ones first, then by their text; a phrase is made once whoever rules
  // it.
  std::map<std::pair<int64_t, std::vector<std::string>>, size_t> order;
  for (size_t i = 0; i < results_.rulings.size(); ++i) {
    const ResolvedRuling& ruling = results_.rulings[i];
    if (ruling.ruling.always) {
      order.try_emplace({-static_cast<int64_t>(ruling.forms.size()), ruling.forms}, i);
    }
  }
  if (order.empty()) return absl::OkStatus();
  std::vector<size_t> ruling_order;
  for (const auto& [key, ruling] : order) ruling_order.push_back(ruling);
  const auto text = [&](size_t i) { return absl::StrJoin(results_.rulings[i].forms, " "); };
  std::sort(ruling_order.begin(), ruling_order.end(), [&](size_t a, size_t b) {
    const size_t words_a = results_.rulings[a].forms.size();
    const size_t words_b = results_.rulings[b].forms.size();
    return words_a != words_b ? words_a > words_b : text(a) < text(b);
  });
  number_ = 0;
  name_ = "rulings";
  BeginStage("merge");
  PassRecord record;
  record.options.name = name_;
  record.tokens_in = tokens_;
  record.types_in = types_;
  std::vector<RuledPhrase> phrases;
  for (size_t i : ruling_order) {
    if (!results_.rulings[i].words.empty()) {
      phrases.push_back(
          {results_.rulings[i].words, results_.types.Intern(results_.rulings[i].words)});
    }
  }
  std::vector<std::vector<uint64_t>> joined(static_cast<size_t>(lanes_.lanes()),
                                            std::vector<uint64_t>(phrases.size(), 0));
  const RulingJoiner joiner(phrases, slot_rules_.barriers, results_.types.word_types());
  PW_RETURN_IF_ERROR(ForChunks([&](int lane, size_t, uint64_t begin, uint64_t end) {
    joiner.Join(corpus_.stream.entries, begin, end, &joined[static_cast<size_t>(lane)]);
  }));
  PW_ASSIGN_OR_RETURN(
      std::vector<uint64_t> documents,
      CountTypeDocuments(lanes_, corpus_.stream, results_.types.word_types(), phrases.size()));
  results_.made.resize(phrases.size(), 0);
  size_t next = 0;
  for (size_t i : ruling_order) {
    ResolvedRuling& ruling = results_.rulings[i];
    RuledRecord ruled;
    ruled.reason = ruling.ruling.reason;
    ruled.text = absl::StrJoin(ruling.forms, " ");
    if (!ruling.words.empty()) {
      for (const auto& lane : joined) ruled.joined += lane[next];
      ruled.phrase = phrases[next].phrase;
      ruled.documents = documents[next];
      results_.made[next] = ruled.joined;
      Adjust(ruled.phrase, ruled.joined, 0);
      for (uint32_t word : ruling.words) Adjust(word, 0, ruled.joined);
      ++next;
    }
    ruling.used = ruled.joined > 0;
    record.joined += ruled.joined;
    record.words_absorbed += ruled.joined * (ruling.forms.size() - 1);
    record.ruled.push_back(std::move(ruled));
  }
  tokens_ -= record.words_absorbed;
  record.tokens_out = tokens_;
  results_.passes.push_back(std::move(record));
  return absl::OkStatus();
}

absl::StatusOr<std::unique_ptr<SlotCounter>> PassLoop::NewCounter(const char* purpose) {
  CounterOptions options;
  options.rules = slot_rules_;
  options.types_now = results_.types.size();
  options.expected_slots = tokens_;
  options.lanes = lanes_.lanes();
  options.on_disk = plan_.on_disk;
  options.working_bytes = plan_.working_bytes;
  options.scratch_folder = absl::StrCat(scratch_folder_, "/", purpose);
  PW_RETURN_IF_ERROR(files_.MakeDirectories(options.scratch_folder));
  options.files = &files_;
  return SlotCounter::Create(options);
}

absl::Status PassLoop::CountAll(SlotCounter* counter) {
  PW_RETURN_IF_ERROR(ForChunks([&](int lane, size_t, uint64_t begin, uint64_t end) {
    counter->AddAll(lane, corpus_.stream.entries, begin, end);
  }));
  return counter->Update(lanes_, results_.types.size());
}

absl::Status PassLoop::FillDocuments(std::vector<Candidate>* pending) {
  candidates_ = pending->size();
  if (pending->empty()) return absl::OkStatus();
  const SlotIndex index(pending->size(), results_.types.size(), slot_rules_.codes,
                        [&](size_t i) -> const Slot& { return (*pending)[i].slot; });
  uint64_t slots = 0;
  for (const Candidate& candidate : *pending) slots += candidate.table.n;
  found_.clear();
  const bool keep = slots * sizeof(FoundSlot) <= plan_.found_bytes;
  PW_ASSIGN_OR_RETURN(SlotPlaces places,
                      CountSlotDocuments(lanes_, corpus_.stream, slot_rules_, index,
                                         pending->size(), keep ? &found_ : nullptr));
  for (size_t i = 0; i < pending->size(); ++i) {
    (*pending)[i].table.documents = places.documents[i];
    (*pending)[i].first = places.first[i];
    (*pending)[i].place = static_cast<uint32_t>(i);
  }
  return absl::OkStatus();
}

absl::StatusOr<Choice> PassLoop::Choose(const PassOptions& options, uint64_t tokens) {
  phrase_rules_.tokens = tokens;
  for (size_t capacity = kNearCapacity;; capacity *= 16) {
    BeginStage("choose");
    Chooser chooser(options, phrase_rules_, results_.rulings.size(), lanes_.lanes(), capacity);
    PW_RETURN_IF_ERROR(counter_->Visit(lanes_, chooser.least_occurrences(),
                                       [&](int lane, const Slot& slot, const SlotTable& table) {
                                         chooser.Consider(lane, slot, table);
                                       }));
    results_.rounds = std::max(results_.rounds, counter_->rounds());
    std::vector<Candidate> pending = chooser.Pending();
    BeginStage("documents");
    PW_RETURN_IF_ERROR(FillDocuments(&pending));
    PW_ASSIGN_OR_RETURN(std::optional<Choice> choice, chooser.Choose(lanes_, std::move(pending)));
    if (choice) return *std::move(choice);
  }
}

absl::Status PassLoop::MergeAccepted(PassRecord* record, const std::vector<uint32_t>& ranks,
                                     bool count_changes) {
  BeginStage("merge");
  std::vector<AcceptedSlot> accepted;
  accepted.reserve(record->accepted.size());
  results_.types.Reserve(record->accepted.size());
  std::vector<uint32_t> words;
  for (SlotRecord& slot : record->accepted) {
    words.clear();
    results_.types.AppendSlotWords(slot.slot, results_.codes, &words);
    slot.phrase = results_.types.Intern(words);
    accepted.push_back({slot.slot, slot.phrase});
  }
  if (results_.types.size() >= std::min<uint64_t>(counter_->type_limit(), kMostTypes)) {
    return absl::ResourceExhaustedError(
        absl::StrCat("pass ", number_,
                     " makes more phrases than a run can tell apart; a higher "
                     "gate or a `take` keeps them fewer"));
  }
  // Only a scan needs it.
  const SlotIndex index(found_.empty() ? accepted.size() : 0, results_.types.size(),
                        slot_rules_.codes,
                        [&](size_t i) -> const Slot& { return accepted[i].slot; });
  const Merger merger(slot_rules_, accepted, results_.types.word_types());
  std::vector<std::vector<uint64_t>> joined(static_cast<size_t>(lanes_.lanes()),
                                            std::vector<uint64_t>(accepted.size(), 0));
  PW_RETURN_IF_ERROR(ForChunks([&](int lane, size_t chunk, uint64_t begin, uint64_t end) {
    OnSlotChange on_change;
    if (count_changes) {
      on_change = [&](const Slot& before, const Slot& after) {
        counter_->Change(lane, before, after);
      };
    }
    std::vector<uint64_t>* const counts = &joined[static_cast<size_t>(lane)];
    Entry* const entries = corpus_.stream.entries;
    if (found_.empty()) {
      merger.Merge(index, entries, begin, end, counts, on_change);
    } else {
      merger.MergeFound(entries, begin, end, found_[chunk], ranks, counts, on_change);
      std::vector<FoundSlot>().swap(found_[chunk]);
    }
  }));
  results_.made.resize(results_.types.size() - results_.types.word_types(), 0);
  for (size_t rank = 0; rank < accepted.size(); ++rank) {
    SlotRecord& slot = record->accepted[rank];
    for (const auto& lane : joined) slot.joined += lane[rank];
    counter_->Remove(0, slot.slot, slot.joined);
    results_.made[slot.phrase - results_.types.word_types()] += slot.joined;
    Adjust(slot.phrase, slot.joined, 0);
    Adjust(slot.slot.left, 0, slot.joined);
    Adjust(slot.slot.right, 0, slot.joined);
    if (slot.slot.bridge != 0) {
      for (uint32_t word : results_.codes.Words(slot.slot.bridge)) Adjust(word, 0, slot.joined);
    }
    record->joined += slot.joined;
    record->words_absorbed +=
        slot.joined * static_cast<uint64_t>(1 + results_.codes.Length(slot.slot.bridge));
  }
  tokens_ -= record->words_absorbed;
  return absl::OkStatus();
}

// Words and phrases have to be in memory whatever is on disk.
absl::Status PassLoop::PhrasesFitMemory(size_t accepted) {
  // A record, its places in the indexes, its text, its derivation, and where it first stands.
  constexpr uint64_t kPhraseBytes = 900;
  phrase_bytes_ += accepted * kPhraseBytes;
  const uint64_t least = (phrase_bytes_ + corpus_.vocabulary.memory()) / 5 * 8;
  if (!plan_.on_disk || least <= job_.limits.memory) return absl::OkStatus();
  constexpr uint64_t kMebibyte = uint64_t{1} << 20;
  return absl::ResourceExhaustedError(absl::StrCat(
      "limits.memory: ", FormatBytes(job_.limits.memory), " is too little for what pass ", number_,
      " accepts: with its ", FormatCount(accepted), " phrases ",
      FormatBytes((least / kMebibyte + 1) * kMebibyte),
      " would do up to here; higher gates or a `take` make fewer phrases"));
}

absl::StatusOr<bool> PassLoop::RunPass(const PassOptions& options, bool is_last) {
  ++number_;
  name_ = options.name;
  PassRecord record;
  record.number = number_;
  record.options = options;
  record.tokens_in = tokens_;
  record.types_in = types_;
  BeginStage("count");
  if (counter_ == nullptr) {
    PW_ASSIGN_OR_RETURN(counter_, NewCounter("counts"));
    PW_RETURN_IF_ERROR(CountAll(counter_.get()));
  } else {
    PW_RETURN_IF_ERROR(counter_->Update(lanes_, results_.types.size()));
  }
  if (job_.debug.recount) {
    PW_ASSIGN_OR_RETURN(std::unique_ptr<SlotCounter> fresh, NewCounter("recount"));
    PW_RETURN_IF_ERROR(CountAll(fresh.get()));
    PW_RETURN_IF_ERROR(CompareCounts(number_, lanes_, counter_.get(), fresh.get()));
  }
  record.slots = counter_->slots();
  record.slot_types = counter_->slot_types();
  PW_ASSIGN_OR_RETURN(Choice choice, Choose(options, tokens_));
  for (size_t i = 0; i < choice.never_used.size(); ++i) {
    if (choice.never_used[i]) results_.rulings[i].used = true;
  }
  const auto record_of = [](const Candidate& candidate) {
    SlotRecord slot;
    slot.slot = candidate.slot;
    slot.table = candidate.table;
    slot.first = candidate.first;
    slot.failed = candidate.failed;
    return slot;
  };
  for (const Candidate& candidate : choice.accepted)
    record.accepted.push_back(record_of(candidate));
  for (const Candidate& candidate : choice.near_misses) {
    record.near_misses.push_back(record_of(candidate));
  }
  std::vector<uint32_t> ranks(candidates_, SlotIndex::kAbsent);
  for (size_t rank = 0; rank < choice.accepted.size(); ++rank) {
    ranks[choice.accepted[rank].place] = static_cast<uint32_t>(rank);
  }
  const bool any = !record.accepted.empty();
  PW_RETURN_IF_ERROR(PhrasesFitMemory(record.accepted.size()));
  if (any) PW_RETURN_IF_ERROR(MergeAccepted(&record, ranks, !is_last));
  timings_->End();
  record.tokens_out = tokens_;
  PW_RETURN_IF_ERROR(CheckBalance(record, results_.codes));
  results_.passes.push_back(std::move(record));
  return any;
}

absl::Status PassLoop::Run() {
  PW_RETURN_IF_ERROR(JoinRulings());
  for (size_t i = 0; i < job_.passes.size(); ++i) {
    const PassOptions& options = job_.passes[i];
    for (int time = 1; time <= options.repeat; ++time) {
      const bool is_last = i + 1 == job_.passes.size() && time == options.repeat;
      PW_ASSIGN_OR_RETURN(bool any, RunPass(options, is_last));
      if (!any) break;
    }
  }
  results_.tokens_out = tokens_;
  if (counter_ != nullptr) results_.scratch_bytes = counter_->scratch_bytes();
  results_.frequency.resize(results_.types.size(), 0);
  results_.made.resize(results_.types.size() - results_.types.word_types(), 0);
  return absl::OkStatus();
}

}  // namespace

std::vector<std::string> FormsOf(const Job& job, std::string_view text) {
  const WordOptions options = WordOptionsOf(job);
  WordSplitter splitter(options, SplitPath::kExact);
  WordFolder folder(options);
  std::vector<WordSpan> spans;
  splitter.Split(text, &spans);
  std::vector<std::string> forms;
  for (const WordSpan& span : spans) {
    forms.push_back(folder.Form(text.substr(span.begin, span.end - span.begin)));
  }
  return forms;
}

absl::StatusOr<std::vector<std::string>> FunctionWordForms(const Job& job) {
  std::vector<std::string> forms;
  std::string faults;
  for (const std::string& entry : job.words.function_word_list) {
    std::vector<std::string> words = FormsOf(job, entry);
    if (words.size() == 1) {
      forms.push_back(std::move(words.front()));
    } else {
      absl::StrAppend(&faults, "\n  '", entry, "' is ", words.size(), " words");
    }
  }
  if (!faults.empty()) {
    return absl::InvalidArgumentError(
        absl::StrCat("words.function_words: ", job.words.function_words,
                     ": every entry must be one word", faults));
  }
  std::vector<std::string> distinct;
  for (std::string& form : forms) {
    if (std::find(distinct.begin(), distinct.end(), form) == distinct.end()) {
      distinct.push_back(std::move(form));
    }
  }
  return distinct;
}

absl::StatusOr<std::vector<ResolvedRuling>> ResolveRulings(const Job& job) {
  std::vector<ResolvedRuling> rulings;
  std::map<std::vector<std::string>, const Ruling*> seen;
  std::string faults;
  for (const Ruling& ruling : job.phrases.ruling_list) {
    ResolvedRuling resolved;
    resolved.ruling = ruling;
    resolved.forms = FormsOf(job, ruling.phrase);
    const std::string place =
        absl::StrCat(ruling.file, ":", ruling.line, ": '", ruling.phrase, "' ");
    if (resolved.forms.size() < 2) {
      absl::StrAppend(&faults, faults.empty() ? "" : "\n", place, "is ",
                      resolved.forms.empty() ? "no word" : "one word",
                      "; a ruling is about a phrase of two words or more");
      continue;
    }
    auto [other, is_new] = seen.try_emplace(resolved.forms, &ruling);
    if (!is_new && other->second->always != ruling.always) {
      absl::StrAppend(&faults, faults.empty() ? "" : "\n", place, "is ruled ",
                      ruling.always ? "always" : "never", " here and ",
                      other->second->always ? "always" : "never", " in line ", other->second->line,
                      "; keep one of the two");
      continue;
    }
    if (is_new) rulings.push_back(std::move(resolved));
  }
  if (!faults.empty()) return absl::InvalidArgumentError(faults);
  return rulings;
}

absl::Status RunPasses(const Job& job, const MemoryPlan& plan,
                       const std::vector<std::string>& function_words,
                       std::vector<ResolvedRuling> rulings, const std::string& scratch_folder,
                       FileSystem& files, ThreadLanes& lanes, const Observer& observer,
                       Timings* timings, EncodedCorpus* corpus, PassResults* results) {
  PassLoop loop(job, plan, scratch_folder, files, lanes, observer, timings, corpus, results);
  PW_RETURN_IF_ERROR(
      loop.Prepare(static_cast<uint32_t>(function_words.size()), std::move(rulings)));
  return loop.Run();
}

}  // namespace phraseweld
