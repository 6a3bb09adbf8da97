#include "run/run_source.h"

#include "base/status.h"
#include "base/strings.h"
#include "deliver/joints.h"

namespace phraseweld {

RunSource::~RunSource() {
  // What cannot be removed is no reason to withhold the answer.
  if (has_scratch_) files_.RemoveAll(scratch_folder_).IgnoreError();
}

absl::StatusOr<std::unique_ptr<RunSource>> RunSource::Open(FileSystem& files,
                                                           const FinishedRun& run,
                                                           const std::string& scratch_folder,
                                                           Lanes& lanes) {
  std::unique_ptr<RunSource> source(new RunSource(files, run, scratch_folder));
  std::vector<size_t> lost;
  std::string first_reason;
  const std::vector<RunInput>& inputs = run.data.manifest.inputs;
  for (size_t i = 0; i < inputs.size(); ++i) {
    source->inputs_.push_back({inputs[i].path, inputs[i].name});
    std::string reason;
    if (inputs[i].path == "-") {
      reason = "the run read standard input";
    } else {
      PW_ASSIGN_OR_RETURN(const FileInfo info, files.Stat(inputs[i].path));
      if (!info.exists) {
        reason = Concat(inputs[i].path, " is not there");
      } else if (info.size != inputs[i].stored_bytes) {
        reason = Concat(inputs[i].path, " has changed since the run");
      }
    }
    if (reason.empty()) continue;
    if (lost.empty()) first_reason = std::move(reason);
    lost.push_back(i);
  }
  if (lost.empty()) return source;
  if (run.job.deliver.corpus != CorpusForm::kSource) {
    return absl::FailedPreconditionError(
        Concat(first_reason, ", and the run kept no corpus to restore it from (deliver.corpus: ",
               run.job.deliver.corpus == CorpusForm::kWords ? "words" : "none",
               "); put it back, seen from the working directory in which the job was run"));
  }
  PW_RETURN_IF_ERROR(source->Restore(lost, lanes));
  source->notes_.push_back(
      Concat(first_reason, ", so the source was restored from the run's own ", "corpus"));
  return source;
}

absl::Status RunSource::Restore(const std::vector<size_t>& lost, Lanes& lanes) {
  has_scratch_ = true;
  PW_RETURN_IF_ERROR(files_.MakeDirectories(scratch_folder_));
  return lanes.ForEach(lost.size(), [&](int, size_t i) -> absl::Status {
    const RunInput& input = run_.data.manifest.inputs[lost[i]];
    const std::string kept = Concat(run_.data.folder, "/corpus/", input.name,
                                    run_.job.deliver.compress == Compress::kZstd ? ".zst" : "");
    const std::string path = Concat(scratch_folder_, "/", lost[i]);
    PW_ASSIGN_OR_RETURN(std::unique_ptr<WriteFile> out, files_.CreateWrite(path));
    PW_RETURN_IF_ERROR(RestoreFile(files_, kept, [&](std::string_view bytes) {
                         return out->Append(bytes);
                       }).status());
    PW_RETURN_IF_ERROR(out->Close());
    inputs_[lost[i]].path = path;
    return absl::OkStatus();
  });
}

std::string RunSource::CheckDigests(const std::vector<InputDigest>& digests) const {
  const std::vector<RunInput>& inputs = run_.data.manifest.inputs;
  for (size_t i = 0; i < inputs.size(); ++i) {
    const bool restored = inputs_[i].path != inputs[i].path;
    if (restored || ToHex(digests[i].stored_hash) == inputs[i].xxh3_128) continue;
    return Concat(inputs[i].path, " has changed since the run: what is counted from it may not ",
                  "agree with the audit");
  }
  return "";
}

}  // namespace phraseweld
