#include "run/trace.h"

#include <utility>

#include "absl/container/flat_hash_map.h"
#include "absl/container/flat_hash_set.h"
#include "base/status.h"
#include "base/strings.h"
#include "run/finished_run.h"
#include "run/lanes.h"
#include "run/passes.h"
#include "run/run_source.h"
#include "run/trace_reasons.h"
#include "run/trace_splits.h"

namespace phraseweld {
namespace {

constexpr size_t kContexts = 3;

// Builds the tree of a phrase that was made.
class TreeBuilder {
 public:
  TreeBuilder(const FinishedRun& run, const PartTrails& trails) : run_(run), trails_(trails) {}

  TraceNode Node(const std::string& text) {
    TraceNode node;
    node.text = text;
    const PhraseTrail& trail = trails_.Find(text);
    if (trail.made != nullptr) {
      node.made = *trail.made;
      for (const RunDerivation& made : trail.made->made_of) {
        if (made.pass == 0) node.ruled += made.joined;
      }
    }
    node.told_above = !told_.insert(text).second && !trail.accepted.empty();
    if (node.told_above) return node;
    for (const PhraseTrail::Line& line : trail.accepted) {
      TraceNode::Step step;
      step.slot = LoggedSlot(run_, line, TraceOrigin::kAccepted);
      step.sides.push_back(Node(line.slot->left));
      step.sides.push_back(Node(line.slot->right));
      node.steps.push_back(std::move(step));
    }
    return node;
  }

 private:
  const FinishedRun& run_;
  const PartTrails& trails_;
  absl::flat_hash_set<std::string> told_;
};

// The slot types of a tree of which some slots yielded.
void CollectYielding(TraceNode* node, std::vector<TraceSlot*>* slots) {
  for (TraceNode::Step& step : node->steps) {
    if (step.slot.yielded > 0) slots->push_back(&step.slot);
    for (TraceNode& side : step.sides) CollectYielding(&side, slots);
  }
}

std::string MadeVerdict(const RunPhrase& made) {
  std::string text = Concat("made in pass ", made.pass, ", ", made.made(), " times in ",
                            made.documents, made.documents == 1 ? " document" : " documents");
  AppendTo(&text, ": ", made.occurrences, " by itself, ", made.inside_longer,
           " inside longer phrases");
  return text;
}

std::vector<std::string> FormsOfText(const std::string& text) {
  std::vector<std::string> forms;
  for (const std::string_view form : Split(text, ' ')) forms.emplace_back(form);
  return forms;
}

class Tracer {
 public:
  Tracer(FileSystem& files, const FinishedRun& run, std::vector<std::string> forms,
         ThreadLanes& lanes, const Observer& observer, Trace* trace)
      : files_(files),
        run_(run),
        forms_(std::move(forms)),
        observer_(observer),
        trails_(run, forms_),
        lanes_(lanes),
        trace_(*trace) {}

  absl::Status Run() {
    trace_.run = run_.data.folder;
    trace_.phrase = Join(forms_, " ");
    trace_.words = static_cast<int>(forms_.size());
    const PhraseTrail& trail = trails_.Find(trace_.phrase);
    trace_.made = trail.made != nullptr;
    absl::StatusOr<std::unique_ptr<RunSource>> source =
        RunSource::Open(files_, run_, PassingPath(run_.data.folder + ".scratch"), lanes_);
    if (source.ok()) {
      source_ = *std::move(source);
      trace_.notes = source_->notes();
    } else if (absl::IsFailedPrecondition(source.status())) {
      trace_.notes.push_back(Concat("the source cannot be read: ", source.status().message()));
    } else {
      return source.status();
    }
    return trace_.made ? TraceMade(*trail.made) : TraceAbsent();
  }

 private:
  // Looks for the phrase and for other sequences, which come after it in the findings.
  absl::StatusOr<Findings> Find(const FindOptions& options,
                                std::vector<std::vector<std::string>> others) {
    observer_.stage({0, "", "scan", 0, "bytes"});
    others.insert(others.begin(), forms_);
    PW_ASSIGN_OR_RETURN(Findings findings, FindPhrases(run_.job, source_->inputs(), others, options,
                                                       lanes_, observer_));
    trace_.counted = findings.whole;
    trace_.found = std::move(findings.phrases[0]);
    if (findings.whole) {
      const std::string changed = source_->CheckDigests(findings.digests);
      if (!changed.empty()) trace_.notes.push_back(changed);
    }
    return findings;
  }

  absl::Status TraceMade(const RunPhrase& made) {
    trace_.tree = TreeBuilder(run_, trails_).Node(trace_.phrase);
    trace_.verdict = MadeVerdict(made);
    if (source_ == nullptr) return absl::OkStatus();
    std::vector<TraceSlot*> yielding;
    CollectYielding(&trace_.tree, &yielding);
    FindOptions options;
    options.contexts = kContexts;
    options.first_contexts_alone = yielding.empty();
    std::vector<WatchedSlot> watched;
    for (const TraceSlot* slot : yielding) {
      WatchedSlot watch{slot->left, slot->bridge, slot->right};
      options.keep.push_back(FormsOfText(
          Concat(slot->left, " ", slot->bridge, slot->bridge.empty() ? "" : " ", slot->right)));
      watched.push_back(std::move(watch));
    }
    PW_ASSIGN_OR_RETURN(Findings findings, Find(options, {}));
    if (yielding.empty()) return absl::OkStatus();
    PW_ASSIGN_OR_RETURN(Replay replay, ReplayRun(run_, findings.runs.get(), watched, forms_));
    for (size_t i = 0; i < yielding.size(); ++i) {
      for (ReplayedPass& pass : replay.passes) {
        if (pass.number != yielding[i]->pass) continue;
        yielding[i]->yielded_to = std::move(pass.slots[i].yielded_to);
      }
    }
    // Places of the phrase lie in kept runs alone where its own slots yielded.
    if (trace_.tree.steps.size() == 1 && trace_.tree.steps[0].slot.yielded > 0) {
      trace_.ends = std::move(replay.ends);
    }
    return absl::OkStatus();
  }

  absl::Status TraceAbsent() {
    SplitTracer splits(run_, forms_, trails_);
    trace_.parts = splits.Parts();
    std::string absent;
    if (source_ != nullptr) {
      FindOptions options;
      options.contexts = kContexts;
      options.keep = splits.Sides();
      options.keep.push_back(forms_);
      options.keep_all = splits.WantsAll();
      std::vector<std::vector<std::string>> words;
      for (const TracePart& part : trace_.parts) {
        if (part.word && !part.function_word) words.push_back({part.text});
      }
      PW_ASSIGN_OR_RETURN(Findings findings, Find(options, std::move(words)));
      splits.UseNumbers(findings.runs->vocabulary);
      size_t word = 0;
      for (TracePart& part : trace_.parts) {
        if (!part.word || part.function_word) continue;
        part.times = findings.phrases[++word].occurrences;
        if (part.times == 0) AppendTo(&absent, absent.empty() ? "'" : ", '", part.text, "'");
      }
      PW_ASSIGN_OR_RETURN(const Replay replay,
                          ReplayRun(run_, findings.runs.get(), splits.Watched(), forms_));
      trace_.splits = splits.Splits(&replay);
      trace_.ends = replay.ends;
    } else {
      trace_.splits = splits.Splits(nullptr);
    }
    if (trace_.found.occurrences == 0 && trace_.found.across_breaks > 0) {
      for (TraceSplit& split : trace_.splits) {
        for (TraceSlot& slot : split.passes) slot.why = CrossingWords(trace_.found);
      }
    }
    const Ruling* never = nullptr;
    for (const Ruling& ruling : run_.job.phrases.ruling_list) {
      if (!ruling.always && FormsOf(run_.job, ruling.phrase) == forms_) never = &ruling;
    }
    JudgeAbsence(run_, forms_, never, absent, &trace_);
    if (trace_.verdict.empty()) trace_.verdict = splits.StandsAgainst();
    return absl::OkStatus();
  }

  FileSystem& files_;
  const FinishedRun& run_;
  const std::vector<std::string> forms_;
  const Observer& observer_;
  const PartTrails trails_;
  ThreadLanes& lanes_;
  Trace& trace_;
  std::unique_ptr<RunSource> source_;
};

}  // namespace

absl::StatusOr<Trace> TracePhrase(FileSystem& files, const std::string& folder,
                                  const std::string& phrase, const Observer& observer) {
  ThreadLanes lanes(0, observer.stop);
  PW_ASSIGN_OR_RETURN(const FinishedRun run, LoadFinishedRun(files, folder, lanes));
  std::vector<std::string> forms = FormsOf(run.job, phrase);
  if (forms.size() < 2) {
    return absl::InvalidArgumentError(
        Concat("'", phrase, "' is ", forms.empty() ? "no word" : "one word",
               " by the rules of this run; a phrase has two words or more"));
  }
  Trace trace;
  PW_RETURN_IF_ERROR(Tracer(files, run, std::move(forms), lanes, observer, &trace).Run());
  return trace;
}

}  // namespace phraseweld
