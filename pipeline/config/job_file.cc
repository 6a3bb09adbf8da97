#include "config/job_file.h"

#include <utility>

#include "absl/status/status.h"
#include "base/status.h"
#include "base/strings.h"
#include "base/units.h"
#include "config/faults.h"
#include "config/function_words.h"
#include "config/job_reader.h"
#include "config/keys.h"
#include "config/overrides.h"
#include "config/rulings.h"
#include "config/yaml_tree.h"

namespace phraseweld {
namespace {

// A job file is written by hand; what is larger is a document given by mistake.
constexpr uint64_t kLargestJobFile = uint64_t{4} << 20;

absl::StatusOr<std::string> ReadJobFile(FileSystem& files, const std::string& path) {
  PW_ASSIGN_OR_RETURN(const FileInfo info, files.Stat(path));
  if (!info.exists) {
    return absl::InvalidArgumentError(Concat(path, ": there is no such job file"));
  }
  if (info.is_directory) {
    return absl::InvalidArgumentError(Concat(path, ": this is a folder, not a job file"));
  }
  if (info.size > kLargestJobFile) {
    return absl::InvalidArgumentError(
        Concat(path, ": at ", RoundedBytes(info.size), " this is too large for a job file"));
  }
  return ReadWhole(files, path);
}

std::string Stem(const std::string& path) {
  const std::string name = path.substr(path.rfind('/') + 1);
  const size_t dot = name.rfind('.');
  return dot == std::string::npos || dot == 0 ? name : name.substr(0, dot);
}

void FillDependentDefaults(const std::string& path, const FaultPlace& whole, Job* job, Faults* faults) {
  if (job->job.empty()) {
    job->job = Stem(path);
    const Key& key = JobKeys().front();
    if (!key.check(job->job).ok()) {
      faults->Add(whole,
                  Concat("job is not set, and '", job->job,
                         "' from the file's name cannot stand in; set job to ", Wanted(key)));
    }
  }
  if (job->run_folder.empty()) job->run_folder = Concat("runs/", job->job);
}

}  // namespace

absl::StatusOr<Job> LoadJob(FileSystem& files, const std::string& path,
                            const std::vector<std::string>& overrides) {
  PW_ASSIGN_OR_RETURN(std::string text, ReadJobFile(files, path));
  Faults faults;
  const Source* source = faults.AddSource(path, std::move(text), true);
  YamlNodePtr root = ParseYaml(source, &faults);
  if (root == nullptr) return faults.Status();
  root = ApplyOverrides(std::move(root), overrides, &faults);
  JobPlaces places;
  Job job = ReadJob(*root, &faults, &places);
  FillDependentDefaults(path, {source, 0, 0}, &job, &faults);
  job.words.function_word_list =
      ReadFunctionWords(files, job.words.function_words, places.function_words, &faults);
  if (!job.phrases.rulings.empty()) {
    job.phrases.ruling_list = ReadRulings(files, job.phrases.rulings, places.rulings, &faults);
  }
  PW_RETURN_IF_ERROR(faults.Status());
  return job;
}

}  // namespace phraseweld
