#include "run/verify_plan.h"

#include <algorithm>
#include <functional>
#include <set>
#include <tuple>
#include <utility>

#include "base/strings.h"
#include "config/job_file.h"
#include "read/run_folder.h"

namespace phraseweld {
namespace {

// Which passes the job comes to, given what each accepted: a pass repeats until it accepts nothing.
void AssignOptions(const std::string& folder, ClaimedRun* run, VerifyFaults* faults) {
  std::vector<const RunPass*> logs;
  for (size_t i = 0; i < run->data.passes.size(); ++i) {
    const RunPass* log = &run->data.passes[i];
    if (i == 0 && run->logs[0].ends_with("pass-00.jsonl")) {
      run->pass_zero = log;
    } else {
      logs.push_back(log);
    }
  }
  for (const PassOptions& options : run->job.passes) {
    for (int time = 0; time < options.repeat; ++time) {
      if (run->passes.size() == logs.size()) {
        faults->Add(Concat(folder, "/audit: the log of pass ", logs.size() + 1, " (", options.name,
                           ") is missing: job.yaml has it, and none before it ended the passes"));
        return;
      }
      const RunPass* log = logs[run->passes.size()];
      run->passes.push_back(log);
      run->options.push_back(options);
      if (log->accepted.empty()) break;
    }
  }
  if (run->passes.size() < logs.size()) {
    faults->Add(Concat(folder, "/audit: there are logs of ", logs.size(),
                       " passes, but job.yaml has ", run->passes.size()));
  }
}

// The order of section 6: more words first, then the phrase's text.
void OrderRulings(ClaimedRun* run) {
  for (const ResolvedRuling& ruling : run->rulings) {
    if (ruling.ruling.always) run->always.push_back(&ruling);
  }
  std::sort(run->always.begin(), run->always.end(),
            [](const ResolvedRuling* a, const ResolvedRuling* b) {
              if (a->forms.size() != b->forms.size()) return a->forms.size() > b->forms.size();
              const std::string text_a = Join(a->forms, " "), text_b = Join(b->forms, " ");
              return text_a != text_b ? text_a < text_b : a->forms < b->forms;
            });
}

auto Key(const RecountSlot& slot) { return std::tie(slot.left, slot.bridge, slot.right); }

bool Agrees(const RunSlot& line, const SlotRecount& count) {
  return line.table.n == count.table.n && line.table.left == count.table.left &&
         line.table.right == count.table.right && line.table.total == count.table.total &&
         line.table.documents == count.table.documents &&
         line.first.document == count.first.document && line.first.passage == count.first.passage &&
         line.first.byte == count.first.byte;
}

}  // namespace

bool ReadClaimedRun(FileSystem& files, const std::string& folder, RunManifest manifest,
                    ClaimedRun* run, VerifyFaults* faults) {
  const uint64_t faults_before = faults->count();
  const auto take = [faults](auto result, auto* target) {
    if (result.ok()) {
      *target = *std::move(result);
    } else {
      faults->Add(std::string(result.status().message()));
    }
  };
  take(ListPassLogs(files, folder), &run->logs);
  take(ReadRunFolder(files, folder), &run->data);
  run->data.manifest = std::move(manifest);
  take(LoadJob(files, Concat(folder, "/job.yaml"), {}), &run->job);
  if (faults->count() > faults_before) return false;
  take(FunctionWordForms(run->job), &run->function_words);
  take(ResolveRulings(run->job), &run->rulings);
  OrderRulings(run);
  AssignOptions(folder, run, faults);
  if (run->always.empty() != (run->pass_zero == nullptr)) {
    faults->Add(Concat(folder, "/audit: ",
                       run->always.empty()
                           ? "there is a log of pass 0, but no ruling says always"
                           : "the log of pass 0 is missing, and rulings say always"));
  }
  return faults->count() == faults_before;
}

SlotReadings::SlotReadings(const ClaimedRun& run) : run_(run) { Read(); }

void SlotReadings::Read() {
  passes_.clear();
  for (const RunPass* from : run_.passes) {
    Pass& pass = passes_.emplace_back();
    for (const RunSlot& slot : from->accepted) pass.accepted.push_back(ReadLine(slot));
    for (const RunSlot& slot : from->near_misses) pass.near_misses.push_back(ReadLine(slot));
    pass.settled = true;
    for (const auto* lines : {&pass.accepted, &pass.near_misses}) {
      for (const Line& line : *lines) pass.settled = pass.settled && line.readings.size() == 1;
    }
  }
}

// All ways to read a text as forms with one space between them.
std::vector<std::vector<std::string>> SlotReadings::ReadText(std::string_view text,
                                                             bool bridge) const {
  std::vector<std::vector<std::string>> readings;
  std::vector<std::string> forms;
  const std::function<void(size_t)> read_from = [&](size_t at) {
    const auto take = [&](std::string_view form) {
      const size_t end = at + form.size();
      forms.emplace_back(form);
      if (end == text.size()) {
        readings.push_back(forms);
      } else {
        read_from(end + 1);
      }
      forms.pop_back();
    };
    const std::string_view rest = text.substr(std::min(at, text.size()));
    take(rest.substr(0, rest.find(' ')));
    for (const std::string& form : spaced_forms_) {
      if (rest.starts_with(form) && (rest.size() == form.size() || rest[form.size()] == ' ')) {
        take(form);
      }
    }
  };
  if (text.empty()) return {{}};
  read_from(0);
  if (readings.size() == 1) return readings;
  const std::vector<std::string> plain = readings.front();
  std::erase_if(readings, [&](const std::vector<std::string>& reading) {
    return std::any_of(reading.begin(), reading.end(), [&](const std::string& form) {
      return form.empty() ||
             (bridge && std::find(run_.function_words.begin(), run_.function_words.end(), form) ==
                            run_.function_words.end());
    });
  });
  if (readings.empty()) readings.push_back(plain);
  return readings;
}

SlotReadings::Line SlotReadings::ReadLine(const RunSlot& slot) const {
  Line line;
  line.slot = &slot;
  for (const auto& left : ReadText(slot.left, false)) {
    for (const auto& bridge : ReadText(slot.bridge, true)) {
      for (const auto& right : ReadText(slot.right, false)) {
        line.readings.push_back({left, bridge, right});
      }
    }
  }
  std::sort(line.readings.begin(), line.readings.end(),
            [](const RecountSlot& a, const RecountSlot& b) { return Key(a) < Key(b); });
  return line;
}

size_t SlotReadings::Unsettled() const {
  size_t pass = 0;
  while (pass < passes_.size() && passes_[pass].settled) ++pass;
  return pass;
}

RecountRules SlotReadings::Rules() const {
  RecountRules rules;
  rules.function_words = run_.function_words;
  rules.bridge = run_.function_words.empty() ? 0 : run_.job.words.bridge;
  rules.numbers_end_runs = run_.job.words.numbers == Numbers::kNowhere;
  for (const ResolvedRuling* ruling : run_.always) rules.always.push_back(ruling->forms);
  const size_t unsettled = Unsettled();
  for (size_t i = 0; i < std::min(unsettled + 1, passes_.size()); ++i) {
    RecountPass& pass = rules.passes.emplace_back();
    pass.word_margins = run_.options[i].margins == Margins::kWords;
    std::vector<RecountSlot>& accepted = i < unsettled ? pass.accepted : pass.watched;
    for (const Line& line : passes_[i].accepted) {
      accepted.insert(accepted.end(), line.readings.begin(), line.readings.end());
    }
    for (const Line& line : passes_[i].near_misses) {
      pass.watched.insert(pass.watched.end(), line.readings.begin(), line.readings.end());
    }
  }
  return rules;
}

bool SlotReadings::Settle(const Recounter& recounter) {
  if (recounter.spaced_forms() != spaced_forms_) {
    spaced_forms_ = recounter.spaced_forms();
    Read();
    return false;
  }
  const size_t unsettled = Unsettled();
  if (unsettled == passes_.size()) return true;
  Choose(recounter.passes()[unsettled].watched, &passes_[unsettled]);
  return false;
}

// Gives each line the first of its readings, in the order of section 6, that has its counts and is
// not taken. `counts` has the readings of all lines, one after another.
void SlotReadings::Choose(const std::vector<SlotRecount>& counts, Pass* pass) {
  std::set<std::tuple<std::vector<std::string>, std::vector<std::string>, std::vector<std::string>>>
      taken;
  size_t next = 0;
  for (auto* lines : {&pass->accepted, &pass->near_misses}) {
    for (Line& line : *lines) {
      size_t chosen = line.readings.size();
      for (size_t i = 0; i < line.readings.size() && chosen == line.readings.size(); ++i) {
        if (Agrees(*line.slot, counts[next + i]) && !taken.contains(Key(line.readings[i]))) {
          chosen = i;
        }
      }
      next += line.readings.size();
      // Where none has them, the comparison will say so of the first.
      RecountSlot reading = line.readings[chosen == line.readings.size() ? 0 : chosen];
      taken.emplace(reading.left, reading.bridge, reading.right);
      line.readings = {std::move(reading)};
    }
  }
  pass->settled = true;
}

}  // namespace phraseweld
