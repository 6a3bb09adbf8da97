#include "run/run.h"

#include <chrono>
#include <future>
#include <memory>

#include "absl/strings/str_cat.h"
#include "base/status.h"
#include "base/units.h"
#include "config/job_file.h"
#include "files/run_folder_writer.h"
#include "run/corpus_reading.h"
#include "run/delivery.h"
#include "run/manifest.h"
#include "run/passes.h"
#include "run/plan.h"
#include "run/report.h"

namespace phraseweld {
namespace {

// A report that takes no more than this is made under any limit: the least limit and what a run may
// take beside it.
constexpr uint64_t kPageInAnyCase = uint64_t{96} << 20;

// Standard input can be read once, and the job reads its inputs twice.
absl::StatusOr<std::vector<InputFile>> KeepStandardInput(std::vector<InputFile> inputs,
                                                         const std::string& scratch,
                                                         FileSystem& files) {
  for (InputFile& input : inputs) {
    if (input.path != "-") continue;
    PW_ASSIGN_OR_RETURN(std::unique_ptr<InputStream> in, InputStream::Open(files, "-"));
    input.path = scratch + "/stdin";
    PW_ASSIGN_OR_RETURN(std::unique_ptr<WriteFile> out, files.CreateWrite(input.path));
    std::vector<char> buffer(size_t{1} << 18);
    for (;;) {
      PW_ASSIGN_OR_RETURN(size_t size, in->Read(buffer.data(), buffer.size()));
      if (size == 0) break;
      PW_RETURN_IF_ERROR(out->Append(std::string_view(buffer.data(), size)));
    }
    PW_RETURN_IF_ERROR(out->Close());
  }
  return inputs;
}

absl::StatusOr<DeliveredFile> DeliverText(const std::string& folder, const std::string& path,
                                          std::string_view text, FileSystem& files) {
  PW_ASSIGN_OR_RETURN(
      std::unique_ptr<OutputStream> out,
      OutputStream::Create(files, folder + "/" + path, false, OnDisk::kWhenCommitted));
  PW_RETURN_IF_ERROR(out->Append(text));
  PW_ASSIGN_OR_RETURN(OutputDigest digest, out->Finish());
  return DeliveredFile{path, digest};
}

RunSummary Summarise(const EncodedCorpus& corpus, const PassResults& results,
                     const std::vector<PhraseRecord>& phrases) {
  RunSummary summary;
  summary.totals.documents = corpus.documents;
  summary.totals.words = corpus.words;
  summary.totals.word_types = corpus.word_types;
  summary.totals.bad_lines = corpus.bad_lines;
  summary.totals.passes =
      static_cast<uint64_t>(results.passes.empty() ? 0 : results.passes.back().number);
  summary.totals.phrases = phrases.size();
  summary.totals.tokens_out = results.tokens_out;
  for (const PhraseRecord& phrase : phrases) {
    ++summary.phrases_by_length[phrase.words];
    summary.totals.words_in_phrases += phrase.occurrences * static_cast<uint64_t>(phrase.words);
  }
  if (corpus.bad_lines > 0) {
    summary.warnings.push_back(absl::StrCat(
        corpus.bad_lines, " lines are no JSON objects and were passed through untouched"));
  }
  for (const ResolvedRuling& ruling : results.rulings) {
    if (ruling.used) continue;
    summary.warnings.push_back(absl::StrCat(
        ruling.ruling.file, ":", ruling.ruling.line, ": '", ruling.ruling.phrase,
        ruling.ruling.always ? "' is ruled always, and occurs nowhere"
                             : "' is ruled never, and would not have been made anyway"));
  }
  summary.amounts.text_bytes = corpus.text_bytes;
  summary.amounts.entries = corpus.stream.size;
  summary.amounts.words = corpus.word_types;
  summary.amounts.phrases = phrases.size();
  for (const PassRecord& pass : results.passes) {
    summary.amounts.slots = std::max(summary.amounts.slots, pass.slots);
    summary.amounts.slot_types = std::max(summary.amounts.slot_types, pass.slot_types);
    summary.amounts.most_joined = std::max(summary.amounts.most_joined, pass.joined);
  }
  summary.scratch_bytes = results.scratch_bytes;
  summary.rounds = results.rounds;
  return summary;
}

// What the mining holds in memory.
struct Holdings {
  EncodedCorpus corpus;
  PassResults results;
  Delivery delivery;
  std::vector<PhraseRecord> phrases;
};

// What is left of the mining once its results are on disk.
struct Mined {
  RunSummary summary;
  std::vector<InputDigest> digests;
  std::vector<DeliveredFile> written;
  std::future<void> freed;  // ready when what it held in memory is gone; waits at its end
};

// The job itself: read, pass by pass, rewrite, records.
absl::StatusOr<Mined> Mine(const Job& job, const std::vector<InputFile>& inputs,
                           const RunControls& controls, const RunFolderWriter& folder,
                           FileSystem& files, ThreadLanes& lanes, const Observer& observer,
                           Timings* timings) {
  PW_ASSIGN_OR_RETURN(std::vector<std::string> function_words, FunctionWordForms(job));
  PW_ASSIGN_OR_RETURN(std::vector<ResolvedRuling> rulings, ResolveRulings(job));
  PW_ASSIGN_OR_RETURN(const std::vector<uint64_t> sizes, InputSizes(files, inputs));
  const MemoryPlan plan = PlanMemory(job, inputs, sizes, lanes.lanes(), controls);

  timings->Begin("read");
  observer.stage({0, "", "read", plan.text_bytes, "bytes"});
  auto holdings = std::make_unique<Holdings>();
  EncodedCorpus& corpus = holdings->corpus;
  PassResults& results = holdings->results;
  Delivery& delivery = holdings->delivery;
  PW_RETURN_IF_ERROR(EncodeCorpus(job, inputs, plan, function_words, folder.scratch(), files, lanes,
                                  observer, &corpus));
  PW_RETURN_IF_ERROR(RunPasses(job, plan, function_words, std::move(rulings), folder.scratch(),
                               files, lanes, observer, timings, &corpus, &results));
  timings->Begin("rewrite");
  observer.stage({0, "", "rewrite", corpus.text_bytes, "bytes"});
  Mined mined;
  PW_RETURN_IF_ERROR(DeliverCorpus(job, inputs, plan, folder.folder(), files, lanes, observer,
                                   corpus, results, &delivery, &mined.written));
  timings->Begin("records");
  PW_ASSIGN_OR_RETURN(holdings->phrases, DeliverRecords(folder.folder(), files, lanes, corpus,
                                                        results, delivery, &mined.written));
  PW_ASSIGN_OR_RETURN(DeliveredFile job_file,
                      DeliverText(folder.folder(), "job.yaml", WriteJobYaml(job), files));
  mined.written.push_back(job_file);
  mined.summary = Summarise(corpus, results, holdings->phrases);
  mined.digests = corpus.digests;
  timings->End();
  // Millions of small pieces: they go while the folder is committed.
  mined.freed = std::async(
      std::launch::async,
      [held = std::shared_ptr<Holdings>(std::move(holdings))]() mutable { held.reset(); });
  return mined;
}

}  // namespace

absl::StatusOr<RunSummary> RunJob(const Job& job, const RunControls& controls, FileSystem& files,
                                  const Observer& observer) {
  const auto begun = std::chrono::steady_clock::now();
  // What can be wrong with the job is said before a folder is touched.
  PW_RETURN_IF_ERROR(FunctionWordForms(job).status());
  PW_RETURN_IF_ERROR(ResolveRulings(job).status());
  PW_ASSIGN_OR_RETURN(const std::vector<InputFile> named, ResolveInputs(job.corpus.files));
  PW_ASSIGN_OR_RETURN(std::unique_ptr<RunFolderWriter> folder,
                      RunFolderWriter::Open(files, job.run_folder, controls.fresh));
  PW_ASSIGN_OR_RETURN(const std::vector<InputFile> inputs,
                      KeepStandardInput(named, folder->scratch(), files));
  ThreadLanes lanes(job.limits.threads, observer.stop);
  Timings timings;
  PW_ASSIGN_OR_RETURN(Mined mined,
                      Mine(job, inputs, controls, *folder, files, lanes, observer, &timings));
  const auto deliver_manifest = [&] {
    timings.End();
    return DeliverText(folder->folder(), "manifest.json",
                       ManifestJson(job, named, mined.digests, mined.written, mined.summary.totals,
                                    timings.seconds()),
                       files)
        .status();
  };
  PW_RETURN_IF_ERROR(deliver_manifest());
  const uint64_t page_memory = PageMemory(mined.summary.totals.phrases, lanes.lanes());
  if (job.deliver.report && page_memory > std::max(job.limits.memory, kPageInAnyCase)) {
    mined.summary.warnings.push_back(absl::StrCat(
        "report.html was left out: for ", FormatCount(mined.summary.totals.phrases),
        " phrases it takes about ", RoundedBytes(static_cast<double>(page_memory)),
        " of memory, more than limits.memory; `phraseweld report` makes it from the run"));
  } else if (job.deliver.report) {
    // The page is made from the run folder like any later one, and then listed in it.
    mined.freed.wait();
    timings.Begin("report");
    observer.stage({0, "", "report", 0, ""});
    const std::string page = "report.html";
    PW_ASSIGN_OR_RETURN(WrittenReport report,
                        WriteReport(files, folder->folder(), inputs, folder->folder() + "/" + page,
                                    lanes, observer));
    mined.written.push_back({page, report.digest});
    PW_RETURN_IF_ERROR(deliver_manifest());
  }
  PW_RETURN_IF_ERROR(folder->Commit());
  for (const DeliveredFile& file : mined.written) {
    mined.summary.outputs.emplace_back(file.path, file.digest.bytes);
  }
  mined.summary.run_folder = job.run_folder;
  mined.summary.seconds =
      std::chrono::duration<double>(std::chrono::steady_clock::now() - begun).count();
  return mined.summary;
}

}  // namespace phraseweld
