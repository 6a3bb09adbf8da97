#include "run/finished_run.h"

#include <utility>

#include "base/status.h"
#include "base/strings.h"
#include "config/job_file.h"
#include "read/run_folder.h"
#include "score/measures.h"

namespace phraseweld {
namespace {

// Which options each pass was carried out under: a pass repeats until it accepts nothing.
absl::Status AssignOptions(FinishedRun* run) {
  size_t pass = 0;
  const std::vector<RunPass>& passes = run->data.passes;
  if (!passes.empty() && passes[0].head.number == 0) {
    run->options.emplace_back();
    ++pass;
  }
  for (const PassOptions& options : run->job.passes) {
    for (int time = 0; time < options.repeat && pass < passes.size(); ++time, ++pass) {
      run->options.push_back(options);
      if (passes[pass].balance.accepted == 0) {
        ++pass;
        break;
      }
    }
  }
  if (run->options.size() != passes.size()) {
    return absl::DataLossError(Concat(run->data.folder, ": job.yaml has other passes than audit/",
                                      "; the run folder is damaged, so make it anew"));
  }
  return absl::OkStatus();
}

}  // namespace

double FinishedRun::Value(const RunSlot& slot, Quantity quantity) {
  for (const auto& [of, value] : slot.scores) {
    if (of == quantity) return value;
  }
  return Score(quantity, slot.table);
}

absl::StatusOr<FinishedRun> LoadFinishedRun(FileSystem& files, const std::string& folder) {
  SerialLanes lanes;
  return LoadFinishedRun(files, folder, lanes);
}

absl::StatusOr<FinishedRun> LoadFinishedRun(FileSystem& files, const std::string& folder,
                                            Lanes& lanes) {
  FinishedRun run;
  PW_ASSIGN_OR_RETURN(run.data, ReadRunFolder(files, folder, lanes));
  PW_ASSIGN_OR_RETURN(run.job, LoadJob(files, Concat(folder, "/job.yaml"), {}));
  PW_RETURN_IF_ERROR(AssignOptions(&run));
  for (size_t i = 0; i < run.options.size(); ++i) {
    if (run.options[i].margins != Margins::kWords) continue;
    RunPass& pass = run.data.passes[i];
    for (auto* slots : {&pass.accepted, &pass.near_misses}) {
      for (RunSlot& slot : *slots) slot.table.all = pass.head.tokens_in;
    }
  }
  return run;
}

PhraseTrails::PhraseTrails(const FinishedRun& run) {
  for (const RunPhrase& phrase : run.data.phrases) trails_[phrase.phrase].made = &phrase;
  for (size_t i = 0; i < run.data.passes.size(); ++i) {
    const RunPass& pass = run.data.passes[i];
    for (const RunSlot& slot : pass.accepted) trails_[slot.phrase].accepted.push_back({i, &slot});
    for (const RunSlot& slot : pass.near_misses) {
      trails_[slot.phrase].near_misses.push_back({i, &slot});
    }
  }
}

const PhraseTrail& PhraseTrails::Find(const std::string& phrase) const {
  const auto found = trails_.find(phrase);
  return found == trails_.end() ? none_ : found->second;
}

std::string GateText(const RunSlot& slot, Quantity quantity, double least, int pass) {
  return Concat(QuantityName(quantity), " ", FormatScore(FinishedRun::Value(slot, quantity)), " < ",
                FormatScore(least), " in pass ", pass);
}

}  // namespace phraseweld
