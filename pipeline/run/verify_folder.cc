#include "run/verify_folder.h"

#include <algorithm>
#include <cstdlib>
#include <filesystem>
#include <memory>
#include <set>

#include "absl/strings/str_format.h"
#include "base/json.h"
#include "base/status.h"
#include "base/strings.h"
#include "deliver/joints.h"
#include "files/streams.h"

namespace phraseweld {
namespace {

constexpr std::string_view kManifest = "manifest.json";
constexpr std::string_view kReport = "report.html";  // may be made long after the run

// Compares a file's size and hash with what the manifest says; `*done` counts bytes over files.
// False where they differ or the file cannot be read, which is a fault.
absl::StatusOr<bool> CheckDigest(const FolderCheck& check, const std::string& path, uint64_t bytes,
                                 std::string_view hash, uint64_t* done) {
  const uint64_t before = *done;
  const std::string listed = Concat(" as in ", InFolder(check, kManifest));
  const auto digest = [&]() -> absl::StatusOr<OutputDigest> {
    PW_ASSIGN_OR_RETURN(const FileInfo info, check.files.Stat(path));
    if (!info.exists || info.is_directory) {
      return absl::NotFoundError(Concat(path, ": ", info.exists ? "a folder" : "nothing",
                                        " stands where ", InFolder(check, kManifest),
                                        " has a file (seen from ",
                                        std::filesystem::current_path().string(), ")"));
    }
    PW_ASSIGN_OR_RETURN(const std::unique_ptr<ReadFile> file, check.files.OpenRead(path));
    std::vector<char> buffer(size_t{1} << 18);
    Hasher hasher;
    for (;;) {
      PW_RETURN_IF_ERROR(Stopped(check.observer));
      PW_ASSIGN_OR_RETURN(const size_t got, file->Read(buffer.data(), buffer.size()));
      if (got == 0) break;
      hasher.Update({buffer.data(), got});
      *done += got;
      check.observer.advance(*done);
    }
    return OutputDigest{*done - before, hasher.Value()};
  }();
  if (absl::IsCancelled(digest.status())) return digest.status();
  if (!digest.ok()) {
    check.faults->Add(std::string(digest.status().message()));
    return false;
  }
  if (digest->bytes != bytes) {
    check.faults->Add(path, "size", Concat(digest->bytes, " bytes"),
                      Concat(bytes, " bytes", listed));
    return false;
  }
  if (ToHex(digest->hash) != hash) {
    check.faults->Add(path, "XXH3-128", ToHex(digest->hash), Concat(hash, listed));
    return false;
  }
  return true;
}

}  // namespace

absl::Status Stopped(const Observer& observer) {
  if (observer.stop == nullptr || !observer.stop->load(std::memory_order_relaxed)) {
    return absl::OkStatus();
  }
  return absl::CancelledError("interrupted; nothing was proved and nothing changed");
}

std::string InFolder(const FolderCheck& check, std::string_view path) {
  return Concat(check.folder, "/", path);
}

std::string RewrittenPath(const Job& job, const RunInput& input) {
  return Concat("corpus/", input.name, job.deliver.compress == Compress::kZstd ? ".zst" : "");
}

void CheckManifestText(const FolderCheck& check) {
  const RunManifest& manifest = check.manifest;
  const auto text = [](std::string* out, std::string_view key, std::string_view value) {
    AppendJsonKey(out, key);
    AppendJsonString(out, value);
  };
  const auto count = [](std::string* out, std::string_view key, uint64_t value) {
    AppendJsonKey(out, key);
    AppendTo(out, value);
  };
  std::string all = "{";
  text(&all, "program", "phraseweld");
  text(&all, "version", manifest.version);
  text(&all, "job", manifest.job);
  std::vector<std::string> entries;
  for (const RunInput& input : manifest.inputs) {
    std::string& entry = entries.emplace_back("{");
    text(&entry, "path", input.path);
    text(&entry, "name", input.name);
    count(&entry, "stored_bytes", input.stored_bytes);
    count(&entry, "text_bytes", input.text_bytes);
    text(&entry, "xxh3_128", input.xxh3_128);
    entry += '}';
  }
  const auto list = [&](std::string_view key) {
    AppendTo(&all, ",\"", key, "\":[\n", Join(entries, ",\n"), entries.empty() ? "]" : "\n]");
    entries.clear();
  };
  list("inputs");
  for (const RunOutput& output : manifest.outputs) {
    std::string& entry = entries.emplace_back("{");
    text(&entry, "path", output.path);
    count(&entry, "bytes", output.bytes);
    text(&entry, "xxh3_128", output.xxh3_128);
    entry += '}';
  }
  list("outputs");
  const ManifestTotals& totals = manifest.totals;
  std::string sums = "{";
  count(&sums, "documents", totals.documents);
  count(&sums, "words", totals.words);
  count(&sums, "word_types", totals.word_types);
  count(&sums, "passes", totals.passes);
  count(&sums, "phrases", totals.phrases);
  count(&sums, "tokens_out", totals.tokens_out);
  count(&sums, "words_in_phrases", totals.words_in_phrases);
  count(&sums, "bad_lines", totals.bad_lines);
  std::string seconds = "{";
  for (const auto& [stage, time] : manifest.timings) {
    AppendJsonKey(&seconds, stage);
    seconds += absl::StrFormat("%.6f", time);
  }
  AppendTo(&all, ",\"totals\":", sums, "},\"timings\":", seconds, "}}\n");
  ByteComparer comparer(check.files, InFolder(check, kManifest), "", check.faults);
  comparer.Next(all);
  comparer.Finish();
}

absl::Status CheckOutputs(const FolderCheck& check, bool* job_intact) {
  uint64_t total = 0, done = 0;
  for (const RunOutput& output : check.manifest.outputs) total += output.bytes;
  check.observer.stage({0, "", "hash the results", total, "bytes"});
  std::set<std::string> listed;
  *job_intact = false;
  for (const RunOutput& output : check.manifest.outputs) {
    PW_ASSIGN_OR_RETURN(const bool good, CheckDigest(check, InFolder(check, output.path),
                                                     output.bytes, output.xxh3_128, &done));
    if (output.path == "job.yaml") *job_intact = good;
    if (!listed.insert(output.path).second) {
      check.faults->Add(Concat(InFolder(check, kManifest), ": ", output.path, " is listed twice"));
    }
  }
  check.report->files = check.manifest.outputs.size();
  check.report->file_bytes = done;
  PW_ASSIGN_OR_RETURN(const std::vector<std::string> present, check.files.ListFiles(check.folder));
  for (const std::string& path : present) {
    if (path == kManifest || path == kReport || listed.contains(path)) continue;
    check.faults->Add(Concat(InFolder(check, path), ": the manifest does not list this file"));
  }
  return absl::OkStatus();
}

absl::Status CheckInputs(const FolderCheck& check, bool* intact) {
  uint64_t total = 0, done = 0;
  for (const RunInput& input : check.manifest.inputs) total += input.stored_bytes;
  check.observer.stage({0, "", "hash the sources", total, "bytes"});
  *intact = true;
  for (const RunInput& input : check.manifest.inputs) {
    if (input.path == "-") continue;
    PW_ASSIGN_OR_RETURN(const bool good,
                        CheckDigest(check, input.path, input.stored_bytes, input.xxh3_128, &done));
    *intact = *intact && good;
  }
  check.report->inputs = check.manifest.inputs.size();
  return absl::OkStatus();
}

void CheckOutputNames(const FolderCheck& check, const Job& job,
                      const std::vector<std::string>& audit_logs) {
  std::set<std::string> expected = {"inventory.jsonl", "inventory.tsv", "job.yaml"};
  for (const std::string& log : audit_logs) expected.insert(log.substr(check.folder.size() + 1));
  if (job.deliver.spans) expected.insert("spans.jsonl");
  for (const RunInput& input : check.manifest.inputs) {
    if (job.deliver.corpus == CorpusForm::kNone) break;
    const std::string path = RewrittenPath(job, input);
    expected.insert(path);
    if (job.deliver.corpus == CorpusForm::kSource) expected.insert(JointsPath(path));
  }
  const std::string place = InFolder(check, kManifest);
  for (const RunOutput& output : check.manifest.outputs) {
    if (expected.erase(output.path) > 0 || output.path == kReport) continue;
    check.faults->Add(Concat(place, ": ", output.path, " is no file of a run of this job"));
  }
  for (const std::string& path : expected) {
    check.faults->Add(Concat(place, ": ", path, " is not listed, and a run of this job has it"));
  }
}

absl::Status CheckRestored(const FolderCheck& check, const Job& job, PassingFolder* passing,
                           std::vector<InputFile>* inputs, bool* readable) {
  uint64_t total = 0, done = 0;
  for (const RunInput& input : check.manifest.inputs) total += input.text_bytes;
  check.report->text_bytes = total;
  const bool rewritten = job.deliver.corpus == CorpusForm::kSource;
  if (rewritten) check.observer.stage({0, "", "restore", total, "bytes"});
  *readable = true;
  inputs->clear();
  for (const RunInput& input : check.manifest.inputs) {
    const bool is_stdin = input.path == "-";
    inputs->push_back({input.path, input.name});
    if (!rewritten) {
      if (!is_stdin) continue;
      *readable = false;
      check.faults->Add(
          "standard input: it is gone, and with this deliver.corpus the run kept no way back to "
          "it; "
          "only a run with deliver.corpus: source, or on files, can be proved");
      continue;
    }
    const std::string path = InFolder(check, RewrittenPath(job, input));
    std::string source = input.path;
    std::unique_ptr<WriteFile> copy;
    if (is_stdin) {
      PW_ASSIGN_OR_RETURN(const std::string folder, passing->Path());
      source = Concat(folder, "/stdin");
      PW_ASSIGN_OR_RETURN(copy, check.files.CreateWrite(source));
      inputs->back().path = source;
    }
    std::unique_ptr<ByteComparer> comparer;
    if (!is_stdin)
      comparer = std::make_unique<ByteComparer>(check.files, source, path, check.faults);
    const absl::StatusOr<OutputDigest> digest =
        RestoreFile(check.files, path, [&](std::string_view bytes) -> absl::Status {
          PW_RETURN_IF_ERROR(Stopped(check.observer));
          done += bytes.size();
          check.observer.advance(done);
          if (copy != nullptr) return copy->Append(bytes);
          comparer->Next(bytes);
          return absl::OkStatus();
        });
    if (absl::IsCancelled(digest.status())) return digest.status();
    if (!digest.ok()) {
      check.faults->Add(std::string(digest.status().message()));
      *readable = *readable && !is_stdin;
      continue;
    }
    ++check.report->restored;
    if (comparer != nullptr) {
      comparer->Finish();
      continue;
    }
    PW_RETURN_IF_ERROR(copy->Close());
    if (digest->bytes == input.stored_bytes && ToHex(digest->hash) == input.xxh3_128) continue;
    *readable = false;
    check.faults->Add(path, "undone, it is not what came from standard input; XXH3-128",
                      Concat(ToHex(digest->hash), " (", digest->bytes, " bytes)"),
                      Concat(input.xxh3_128, " (", input.stored_bytes, " bytes)"));
  }
  return absl::OkStatus();
}

}  // namespace phraseweld
