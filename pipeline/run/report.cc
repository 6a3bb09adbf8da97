#include "run/report.h"

#include <algorithm>
#include <memory>
#include <utility>

#include "absl/container/flat_hash_map.h"
#include "base/status.h"
#include "base/strings.h"
#include "config/job_file.h"
#include "run/context_finder.h"
#include "run/passes.h"
#include "run/run_source.h"

namespace phraseweld {
namespace {

PageMerge MergeOf(const RunSlot& slot, int pass) {
  PageMerge merge;
  merge.pass = pass;
  merge.rank = slot.rank;
  merge.left = slot.left;
  merge.bridge = slot.bridge;
  merge.right = slot.right;
  merge.table = slot.table;
  merge.expected = slot.expected;
  merge.scores = slot.scores;
  merge.joined = slot.joined;
  merge.yielded = slot.yielded;
  return merge;
}

PagePass PassOf(const RunPass& from) {
  PagePass pass;
  pass.pass = from.head.number;
  pass.name = from.head.name;
  pass.tokens_in = from.head.tokens_in;
  pass.types_in = from.head.types_in;
  pass.slots = from.head.slots;
  pass.slot_types = from.head.slot_types;
  pass.rank_by = from.head.rank_by.value_or(Quantity::kPmi);
  for (const Gate& gate : from.head.accept) pass.accept.emplace_back(gate.quantity, gate.least);
  pass.accepted = from.balance.accepted;
  pass.joined = from.balance.joined;
  pass.words_absorbed = from.balance.words_absorbed;
  pass.tokens_out = from.balance.tokens_out;
  return pass;
}

// A phrase's forms. A form may hold a space, and then the text alone does not tell; its spelling,
// where there is one, mostly does. Empty where nothing does.
std::vector<std::string> FormsOfPhrase(const Job& job, const std::string& text,
                                       const std::string& surface, int words) {
  std::vector<std::string> forms;
  for (const std::string_view form : Split(text, ' ')) forms.emplace_back(form);
  if (forms.size() == static_cast<size_t>(words)) return forms;
  forms = FormsOf(job, surface);
  if (forms.size() != static_cast<size_t>(words) || Join(forms, " ") != text) forms.clear();
  return forms;
}

// Words of a near miss. Sides that are phrases have their words in the inventory.
int WordsOf(const RunSlot& slot, const absl::flat_hash_map<std::string, int>& phrase_words) {
  const auto words = [&](const std::string& side) {
    const auto phrase = phrase_words.find(side);
    return phrase == phrase_words.end() ? 1 : phrase->second;
  };
  const int between =
      slot.bridge.empty()
          ? 0
          : 1 + static_cast<int>(std::count(slot.bridge.begin(), slot.bridge.end(), ' '));
  return words(slot.left) + between + words(slot.right);
}

std::vector<PageContext> ContextsOf(std::vector<PhraseContext> found) {
  std::vector<PageContext> contexts;
  for (PhraseContext& context : found) {
    contexts.push_back({std::move(context.document), std::move(context.passage), context.byte,
                        std::move(context.before), std::move(context.match),
                        std::move(context.after)});
  }
  return contexts;
}

absl::Status AddContexts(const FinishedRun& run, const std::vector<InputFile>& inputs,
                         ThreadLanes& lanes, const Observer& observer, PageData* page) {
  std::vector<std::vector<std::string>> phrases;
  std::vector<std::vector<PageContext>*> targets;
  const auto want = [&](std::vector<std::string> forms, std::vector<PageContext>* target) {
    if (forms.empty()) return;
    phrases.push_back(std::move(forms));
    targets.push_back(target);
  };
  for (size_t i = 0; i < std::min(page->phrases.size(), kPhrasesWithContexts); ++i) {
    PagePhrase& phrase = page->phrases[i];
    want(FormsOfPhrase(run.job, phrase.phrase, phrase.surface, phrase.words), &phrase.contexts);
  }
  for (PageNearMiss& miss : page->near_misses) {
    want(FormsOfPhrase(run.job, miss.phrase, miss.phrase, miss.words), &miss.contexts);
  }
  FindOptions options;
  options.contexts = kContextsShown;
  options.first_contexts_alone = true;
  observer.stage({0, "", "contexts", 0, "bytes"});
  PW_ASSIGN_OR_RETURN(Findings findings,
                      FindPhrases(run.job, inputs, phrases, options, lanes, observer));
  for (size_t i = 0; i < targets.size(); ++i) {
    *targets[i] = ContextsOf(std::move(findings.phrases[i].contexts));
  }
  return absl::OkStatus();
}

}  // namespace

PageData ReportData(const FinishedRun& run) {
  const RunManifest& manifest = run.data.manifest;
  PageData page;
  page.program = Concat(manifest.program, " ", manifest.version);
  page.job = manifest.job;
  page.files = manifest.inputs.size();
  for (const RunInput& input : manifest.inputs) page.bytes += input.text_bytes;
  page.documents = manifest.totals.documents;
  for (auto& [key, value] : JobSettings(run.job)) {
    // What changes how fast a run is and not what it makes would tell two equal pages apart.
    if (key.starts_with("limits.") || key.starts_with("debug.")) continue;
    page.settings.emplace_back(std::move(key), std::move(value));
  }
  for (const Ruling& ruling : run.job.phrases.ruling_list) {
    page.rulings.push_back(
        {ruling.always, ruling.phrase, Join(FormsOf(run.job, ruling.phrase), " "), ruling.reason});
  }
  absl::flat_hash_map<std::string, int> phrase_words;
  absl::flat_hash_map<std::string, PagePhrase*> rows;
  page.phrases.reserve(run.data.phrases.size());
  for (const RunPhrase& from : run.data.phrases) {
    PagePhrase& phrase = page.phrases.emplace_back();
    phrase.phrase = from.phrase;
    phrase.surface = from.surface;
    phrase.words = from.words;
    phrase.pass = from.pass;
    phrase.occurrences = from.occurrences;
    phrase.inside_longer = from.inside_longer;
    phrase.documents = from.documents;
    for (const RunDerivation& made : from.made_of) {
      if (made.pass > 0) continue;
      PageMerge& merge = phrase.made_of.emplace_back();
      merge.joined = made.joined;
    }
    phrase_words.emplace(from.phrase, from.words);
    rows.emplace(from.phrase, &phrase);
  }
  for (const RunPass& pass : run.data.passes) {
    page.passes.push_back(PassOf(pass));
    for (const RunSlot& slot : pass.accepted) {
      const auto row = rows.find(slot.phrase);
      if (row == rows.end() || slot.joined == 0) continue;
      row->second->made_of.push_back(MergeOf(slot, pass.head.number));
    }
    for (const RunSlot& slot : pass.near_misses) {
      PageNearMiss& miss = page.near_misses.emplace_back();
      miss.phrase = slot.phrase;
      miss.words = WordsOf(slot, phrase_words);
      miss.merge = MergeOf(slot, pass.head.number);
      miss.failed = slot.failed.value_or(Quantity::kOccurrences);
    }
  }
  return page;
}

absl::StatusOr<WrittenReport> WriteReport(FileSystem& files, const std::string& folder,
                                          std::vector<InputFile> inputs, const std::string& output,
                                          ThreadLanes& lanes, const Observer& observer) {
  PW_ASSIGN_OR_RETURN(const FinishedRun run, LoadFinishedRun(files, folder, lanes));
  WrittenReport report;
  PageData page = ReportData(run);
  std::unique_ptr<RunSource> source;
  if (inputs.empty()) {
    auto opened = RunSource::Open(files, run, PassingPath(Concat(folder, ".scratch")), lanes);
    if (opened.ok()) {
      source = *std::move(opened);
      inputs = source->inputs();
      report.notes = source->notes();
    } else if (absl::IsFailedPrecondition(opened.status())) {
      report.notes.push_back(Concat("the page has no contexts: ", opened.status().message()));
    } else {
      return opened.status();
    }
  }
  if (!inputs.empty()) PW_RETURN_IF_ERROR(AddContexts(run, inputs, lanes, observer, &page));
  PW_ASSIGN_OR_RETURN(std::unique_ptr<OutputStream> out,
                      OutputStream::Create(files, output, false));
  PW_RETURN_IF_ERROR(out->Append(RenderPage(page)));
  PW_ASSIGN_OR_RETURN(report.digest, out->Finish());
  return report;
}

}  // namespace phraseweld
