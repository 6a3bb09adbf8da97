#include "run/verify.h"

#include <memory>
#include <utility>

#include "base/status.h"
#include "base/strings.h"
#include "config/job_file.h"
#include "read/run_folder.h"
#include "run/verify_folder.h"
#include "run/verify_plan.h"
#include "run/verify_records.h"
#include "run/verify_walk.h"

namespace phraseweld {
namespace {

// What was counted must be what was hashed before.
void CheckDigests(const RunManifest& manifest, const std::vector<InputDigest>& digests,
                  VerifyFaults* faults) {
  for (size_t i = 0; i < digests.size(); ++i) {
    const RunInput& input = manifest.inputs[i];
    if (digests[i].text_bytes != input.text_bytes) {
      faults->Add(input.path, "decompressed size", Concat(digests[i].text_bytes, " bytes"),
                  Concat(input.text_bytes, " bytes"));
    }
    if (ToHex(digests[i].stored_hash) != input.xxh3_128) {
      faults->Add(input.path, "XXH3-128 while counting", ToHex(digests[i].stored_hash),
                  input.xxh3_128);
    }
  }
}

absl::Status RecountAll(const FolderCheck& check, const ClaimedRun& run,
                        const std::vector<InputFile>& inputs) {
  SlotReadings readings(run);
  for (;;) {
    const RecountRules rules = readings.Rules();
    Recounter recounter(rules);
    VerifyFaults faults;
    VerifyWalk walk(check, run.job, inputs, &faults, &recounter);
    PW_RETURN_IF_ERROR(walk.Walk());
    if (walk.digests().size() == inputs.size() && !readings.Settle(recounter)) continue;
    check.faults->Append(faults);
    CheckDigests(check.manifest, walk.digests(), check.faults);
    if (walk.digests().size() != inputs.size()) return absl::OkStatus();  // it could not be read
    check.report->documents = recounter.documents();
    check.report->words = recounter.words();
    PW_RETURN_IF_ERROR(CheckAudit(check, run, rules, recounter));
    PW_RETURN_IF_ERROR(CheckInventory(check, run, rules, recounter));
    CheckTotals(check, run, recounter, walk.bad_lines());
    return absl::OkStatus();
  }
}

}  // namespace

absl::StatusOr<VerifyReport> VerifyRun(FileSystem& files, const std::string& folder,
                                       const Observer& observer) {
  PW_ASSIGN_OR_RETURN(const RunManifest manifest,
                      ReadManifest(files, Concat(folder, "/manifest.json")));
  VerifyReport report;
  VerifyFaults faults;
  const FolderCheck check{files, folder, observer, manifest, &report, &faults};
  bool job_intact = false, sources_intact = false, readable = false;
  CheckManifestText(check);
  PW_RETURN_IF_ERROR(CheckOutputs(check, &job_intact));
  PW_RETURN_IF_ERROR(CheckInputs(check, &sources_intact));
  ClaimedRun run;
  if (ReadClaimedRun(files, folder, manifest, &run, &faults)) {
    CheckOutputNames(check, run.job, run.logs);
    if (!job_intact) {
      // Where it reads otherwise than it was written, that is the place.
      ByteComparer comparer(files, Concat(folder, "/job.yaml"), "", &faults);
      comparer.Next(WriteJobYaml(run.job));
      comparer.Finish();
    }
    PassingFolder passing(files);
    std::vector<InputFile> inputs;
    PW_RETURN_IF_ERROR(CheckRestored(check, run.job, &passing, &inputs, &readable));
    // From another source, or by another job, everything would come out otherwise.
    if (sources_intact && job_intact && readable) {
      PW_RETURN_IF_ERROR(RecountAll(check, run, inputs));
    }
  }
  PW_RETURN_IF_ERROR(faults.Status(folder));
  return report;
}

}  // namespace phraseweld
