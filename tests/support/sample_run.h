#ifndef PHRASEWELD_TESTS_SUPPORT_SAMPLE_RUN_H_
#define PHRASEWELD_TESTS_SUPPORT_SAMPLE_RUN_H_

#include <cstdint>
#include <filesystem>
#include <map>
#include <string>
#include <vector>

#include "base/hash.h"
#include "base/job.h"
#include "base/json.h"
#include "base/strings.h"
#include "files/file_system.h"
#include "files/streams.h"
#include "reference/reference.h"
#include "support/temp_folder.h"

namespace phraseweld {

// Writes inputs below `folder`/`name`.source and, from what the reference makes of them, a run
// folder `folder`/`name` without a job.yaml. Returns the run folder's path. `job.corpus.files` is
// not looked at.
inline std::string PutSampleRun(const TempFolder& folder, const std::string& name, const Job& job,
                                const std::vector<RefInput>& inputs) {
  std::filesystem::remove_all(folder.Path(name));
  std::string manifest = "{\"program\":\"phraseweld\",\"version\":\"0.1.0\",\"job\":";
  AppendJsonString(&manifest, job.job);
  manifest += ",\"inputs\":[";
  for (const RefInput& input : inputs) {
    const std::string path = folder.Put(Concat(name, ".source/", input.name), input.bytes);
    const OutputDigest digest = *DigestFile(FileSystem::Posix(), path);
    if (manifest.back() != '[') manifest += ',';
    manifest += "{\"path\":";
    AppendJsonString(&manifest, path);
    manifest += ",\"name\":";
    AppendJsonString(&manifest, input.name);
    manifest += Concat(",\"stored_bytes\":", digest.bytes, ",\"text_bytes\":", digest.bytes,
                       ",\"xxh3_128\":\"", ToHex(digest.hash), "\"}");
  }
  manifest += "],\"outputs\":[";
  uint64_t passes = 0, phrases = 0;
  for (const auto& [path, bytes] : ReferenceRun(job, inputs)) {
    const std::string whole = folder.Put(Concat(name, "/", path), bytes);
    const OutputDigest digest = *DigestFile(FileSystem::Posix(), whole);
    if (manifest.back() != '[') manifest += ',';
    manifest += Concat("{\"path\":\"", path, "\",\"bytes\":", digest.bytes, ",\"xxh3_128\":\"",
                       ToHex(digest.hash), "\"}");
    if (path.starts_with("audit/") && path != "audit/pass-00.jsonl") ++passes;
    if (path == "inventory.jsonl") {
      for (const char byte : bytes) phrases += byte == '\n';
    }
  }
  // The counts that no test of a reader of run folders looks at are 0.
  manifest +=
      Concat("],\"totals\":{\"documents\":0,\"words\":0,\"word_types\":0,\"passes\":", passes,
             ",\"phrases\":", phrases,
             ",\"tokens_out\":0,\"words_in_phrases\":0,\"bad_lines\":0},"
             "\"timings\":{\"read\":0.25,\"unit\":\"s\"},\"added_later\":[1]}\n");
  folder.Put(Concat(name, "/manifest.json"), manifest);
  return folder.Path(name);
}

}  // namespace phraseweld

#endif  // PHRASEWELD_TESTS_SUPPORT_SAMPLE_RUN_H_
