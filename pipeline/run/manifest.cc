#include "run/manifest.h"

#include <algorithm>

#include "absl/strings/str_cat.h"
#include "absl/strings/str_format.h"
#include "base/json.h"

namespace phraseweld {
namespace {

void AppendCount(std::string* out, const char* key, uint64_t value) {
  AppendJsonKey(out, key);
  absl::StrAppend(out, value);
}

void AppendText(std::string* out, const char* key, std::string_view text) {
  AppendJsonKey(out, key);
  AppendJsonString(out, text);
}

}  // namespace

std::string ManifestJson(const Job& job, const std::vector<InputFile>& inputs,
                         const std::vector<InputDigest>& digests,
                         std::vector<DeliveredFile> outputs, const RunTotals& totals,
                         const std::vector<std::pair<std::string, double>>& timings) {
  std::string out = "{";
  AppendText(&out, "program", "phraseweld");
  AppendText(&out, "version", kProgramVersion);
  AppendText(&out, "job", job.job);
  AppendJsonKey(&out, "inputs");
  out += "[\n";
  for (size_t i = 0; i < inputs.size(); ++i) {
    std::string input = "{";
    AppendText(&input, "path", inputs[i].path);
    AppendText(&input, "name", inputs[i].relative);
    AppendCount(&input, "stored_bytes", digests[i].stored_bytes);
    AppendCount(&input, "text_bytes", digests[i].text_bytes);
    AppendText(&input, "xxh3_128", ToHex(digests[i].stored_hash));
    absl::StrAppend(&out, input, i + 1 < inputs.size() ? "},\n" : "}\n");
  }
  out += ']';
  AppendJsonKey(&out, "outputs");
  out += "[\n";
  std::sort(outputs.begin(), outputs.end(),
            [](const DeliveredFile& a, const DeliveredFile& b) { return a.path < b.path; });
  for (size_t i = 0; i < outputs.size(); ++i) {
    std::string output = "{";
    AppendText(&output, "path", outputs[i].path);
    AppendCount(&output, "bytes", outputs[i].digest.bytes);
    AppendText(&output, "xxh3_128", ToHex(outputs[i].digest.hash));
    absl::StrAppend(&out, output, i + 1 < outputs.size() ? "},\n" : "}\n");
  }
  out += ']';
  AppendJsonKey(&out, "totals");
  std::string counts = "{";
  AppendCount(&counts, "documents", totals.documents);
  AppendCount(&counts, "words", totals.words);
  AppendCount(&counts, "word_types", totals.word_types);
  AppendCount(&counts, "passes", totals.passes);
  AppendCount(&counts, "phrases", totals.phrases);
  AppendCount(&counts, "tokens_out", totals.tokens_out);
  AppendCount(&counts, "words_in_phrases", totals.words_in_phrases);
  AppendCount(&counts, "bad_lines", totals.bad_lines);
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
