#include "run/manifest.h"

#include <algorithm>

#include "absl/strings/str_cat.h"
#include "absl/strings/str_format.h"
#include "base/json.h"

namespace phraseweld {
namespace {}  // namespace

std::string ManifestJson(const Job& job, const std::vector<InputFile>& inputs,
                         const std::vector<InputDigest>& digests,
                         std::vector<DeliveredFile> outputs, const RunTotals& totals,
                         const std::vector<std::pair<std::string, double>>& timings) {
  std::string out = "{";
  AppendJsonString(&out, "program", "phraseweld");
  AppendJsonString(&out, "version", kProgramVersion);
  AppendJsonString(&out, "job", job.job);
  AppendJsonKey(&out, "inputs");
  out += "[\n";
  for (size_t i = 0; i < inputs.size(); ++i) {
    std::string input = "{";
    AppendJsonString(&input, "path", inputs[i].path);
    AppendJsonString(&input, "name", inputs[i].relative);
    AppendJsonCount(&input, "stored_bytes", digests[i].stored_bytes);
    AppendJsonCount(&input, "text_bytes", digests[i].text_bytes);
    AppendJsonString(&input, "xxh3_128", ToHex(digests[i].stored_hash));
    absl::StrAppend(&out, input, i + 1 < inputs.size() ? "},\n" : "}\n");
  }
  out += ']';
  AppendJsonKey(&out, "outputs");
  out += "[\n";
  std::sort(outputs.begin(), outputs.end(),
            [](const DeliveredFile& a, const DeliveredFile& b) { return a.path < b.path; });
  for (size_t i = 0; i < outputs.size(); ++i) {
    std::string output = "{";
    AppendJsonString(&output, "path", outputs[i].path);
    AppendJsonCount(&output, "bytes", outputs[i].digest.bytes);
    AppendJsonString(&output, "xxh3_128", ToHex(outputs[i].digest.hash));
    absl::StrAppend(&out, output, i + 1 < outputs.size() ? "},\n" : "}\n");
  }
  out += ']';
  AppendJsonKey(&out, "totals");
  std::string counts = "{";
  AppendJsonCount(&counts, "documents", totals.documents);
  AppendJsonCount(&counts, "words", totals.words);
  AppendJsonCount(&counts, "word_types", totals.word_types);
  AppendJsonCount(&counts, "passes", totals.passes);
  AppendJsonCount(&counts, "phrases", totals.phrases);
  AppendJsonCount(&counts, "tokens_out", totals.tokens_out);
  AppendJsonCount(&counts, "words_in_phrases", totals.words_in_phrases);
  AppendJsonCount(&counts, "bad_lines", totals.bad_lines);
  absl::StrAppend(&out, counts, "}");
  AppendJsonKey(&out, "timings");
  std::string seconds = "{";
  for (const auto& [stage, time] : timings) {
    AppendJsonKey(&seconds, stage);
    absl::StrAppendFormat(&seconds, "%.6f", time);
  }
  absl::StrAppend(&out, seconds, "}}\n");
  return out;
}

}  // namespace phraseweld
