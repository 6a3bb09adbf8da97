#ifndef PHRASEWELD_TESTS_SUPPORT_FINISHED_RUN_H_
#define PHRASEWELD_TESTS_SUPPORT_FINISHED_RUN_H_

#include <string>
#include <vector>

#include "base/job.h"
#include "base/strings.h"
#include "config/job_file.h"
#include "reference/reference.h"
#include "support/sample_run.h"
#include "support/temp_folder.h"

namespace phraseweld {

// As PutSampleRun(), with a job.yaml and the files of function words and rulings that it names.
// Texts of rulings must do without a quotation mark and a backslash.
inline std::string PutFinishedRun(const TempFolder& folder, const std::string& name, Job job,
                                  const std::vector<RefInput>& inputs) {
  if (job.job.empty()) job.job = name;
  job.run_folder = folder.Path(name);
  job.corpus.files.clear();
  for (const RefInput& input : inputs) {
    job.corpus.files.push_back(folder.Path(Concat(name, ".source/", input.name)));
  }
  if (!job.words.function_word_list.empty()) {
    std::string list;
    for (const std::string& word : job.words.function_word_list) AppendTo(&list, word, "\n");
    job.words.function_words = folder.Put(Concat(name, ".words.txt"), list);
  }
  if (!job.phrases.ruling_list.empty()) {
    std::string list;
    for (const Ruling& ruling : job.phrases.ruling_list) {
      AppendTo(&list, "- {", ruling.always ? "always" : "never", ": \"", ruling.phrase, "\"");
      if (!ruling.reason.empty()) AppendTo(&list, ", reason: \"", ruling.reason, "\"");
      list += "}\n";
    }
    job.phrases.rulings = folder.Put(Concat(name, ".rulings.yaml"), list);
  }
  const std::string run = PutSampleRun(folder, name, job, inputs);
  folder.Put(Concat(name, "/job.yaml"), WriteJobYaml(job));
  return run;
}

}  // namespace phraseweld

#endif  // PHRASEWELD_TESTS_SUPPORT_FINISHED_RUN_H_
