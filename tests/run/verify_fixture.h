#ifndef PHRASEWELD_TESTS_RUN_VERIFY_FIXTURE_H_
#define PHRASEWELD_TESTS_RUN_VERIFY_FIXTURE_H_

#include <gtest/gtest.h>

#include <functional>
#include <string>
#include <string_view>
#include <utility>
#include <vector>

#include "base/strings.h"
#include "config/job_file.h"
#include "files/streams.h"
#include "read/run_folder.h"
#include "run/run.h"
#include "run/verify.h"
#include "support/compress.h"
#include "support/temp_folder.h"

namespace phraseweld {

inline constexpr char kVerifyJob[] =
    "job: notes\n"
    "corpus: {files: [FOLDER/in/*], layout: LAYOUT, fields: [title, body], id: id}\n"
    "words: {function_words: english, bridge: 2}\n"
    "passes:\n"
    "  - {name: pairs, accept: {occurrences: 3, documents: 2, pmi: 1}}\n"
    "  - {name: longer, repeat: 3, rank_by: npmi, accept: {occurrences: 2, g2: 1}}\n"
    "phrases: {longest: 5, rulings: FOLDER/rulings.yaml}\n"
    "deliver: {corpus: CORPUS, spans: true, joiner: \"JOINER\", compress: COMPRESS, report: "
    "REPORT}\n"
    "run_folder: FOLDER/run\n";

inline constexpr char kVerifyRulings[] =
    "- {always: fog horn, reason: a signal}\n"
    "- {never: old chart, reason: filler}\n";

// Sentences that hold phrases of two to four words, with function words and hyphens inside, one
// phrase that yields to another, and types that miss a gate.
inline const std::vector<std::string> kSentences = {
    "The left bank light was out; left bank light seen again.",
    "A left-bank light, an old chart and the fog horn.",
    "Terms of service of the pump room: pump room key, pump\nroom door.",
    "The pump room door and terms of service, terms of the service.",
    "Old chart, old chart of the left bank. Tide gauge 12 reads 30 12.",
    "Tide gauge at the pump room; tide  gauge at the left bank light.",
    "Fog horn near the tide gauge, \"fog horn\" near the bank light.",
    "Mooring line tide line; mooring line near bank light tide gauge.",
};

inline std::string SourceText(std::string_view layout) {
  std::string text;
  for (size_t i = 0; i < 3 * kSentences.size(); ++i) {
    std::string sentence = kSentences[i % kSentences.size()];
    if (layout == "json_lines") {
      std::string escaped;
      for (const char c : sentence) {
        escaped += c == '"' ? "\\\"" : c == '\n' ? "\\n" : std::string(1, c);
      }
      AppendTo(&text, "{\"id\":\"note ", i, "\",\"title\":\"",
               i % 3 == 0 ? "Pump room" : "Tide gauge", "\",\"body\" : \"", escaped, "\"}\n");
      continue;
    }
    if (layout == "lines") {
      for (char& c : sentence) c = c == '\n' ? ' ' : c;
    }
    AppendTo(&text, sentence, layout == "paragraphs" ? "\n\n" : "\n");
  }
  return text;
}

class VerifyTest : public ::testing::Test {
 protected:
  struct Shape {
    std::string layout = "json_lines", corpus = "source", joiner = "_", compress = "none";
    std::string report = "false";
  };

  void Run(const Shape& shape) {
    const std::string text = SourceText(shape.layout);
    folder_.Put("in/a.txt", text);
    folder_.Put("in/below/b.txt.zst", ZstdFrame(text.substr(0, text.size() / 2 + 20)));
    if (shape.layout == "json_lines") folder_.Put("in/below/b.txt.zst", ZstdFrame(text));
    RunOn({{"FOLDER/in/*",
            Concat(folder_.Path("in/a.txt"), ", ", folder_.Path("in/below/b.txt.zst"))},
           {"LAYOUT", shape.layout},
           {"CORPUS", shape.corpus},
           {"JOINER", shape.joiner},
           {"COMPRESS", shape.compress},
           {"REPORT", shape.report}});
  }

  void RunOn(const std::vector<std::pair<std::string, std::string>>& values) {
    std::string yaml = kVerifyJob;
    for (const auto& [name, value] : values) {
      yaml.replace(yaml.find(name), name.size(), value);
    }
    for (size_t at; (at = yaml.find("FOLDER")) != std::string::npos;) {
      yaml.replace(at, 6, folder_.path());
    }
    folder_.Put("rulings.yaml", kVerifyRulings);
    auto job = LoadJob(FileSystem::Posix(), folder_.Put("job.yaml", yaml), {});
    ASSERT_TRUE(job.ok()) << job.status();
    RunControls controls;
    controls.fresh = true;
    const auto summary = RunJob(*job, controls, FileSystem::Posix(), Observer{});
    ASSERT_TRUE(summary.ok()) << summary.status();
  }

  // What verification finds wrong; empty where nothing is.
  std::string Faults() {
    const auto report = VerifyRun(FileSystem::Posix(), folder_.Path("run"), Observer{});
    if (report.ok()) return "";
    EXPECT_TRUE(absl::IsDataLoss(report.status())) << report.status();
    return std::string(report.status().message());
  }

  // Makes sizes and hashes of the manifest those of the files as they are, so that only what they
  // hold can give a change away.
  void MendHashes() {
    std::string manifest = folder_.Get("run/manifest.json");
    const RunManifest before =
        *ReadManifest(FileSystem::Posix(), folder_.Path("run/manifest.json"));
    for (const RunOutput& output : before.outputs) {
      const OutputDigest now =
          *DigestFile(FileSystem::Posix(), folder_.Path(Concat("run/", output.path)));
      const auto entry = [&](uint64_t bytes, const std::string& hash) {
        return Concat("\"path\":\"", output.path, "\",\"bytes\":", bytes, ",\"xxh3_128\":\"", hash,
                      "\"");
      };
      const std::string old = entry(output.bytes, output.xxh3_128);
      manifest.replace(manifest.find(old), old.size(), entry(now.bytes, ToHex(now.hash)));
    }
    folder_.Put("run/manifest.json", manifest);
  }

  // The faults once `change` was made to a file of the run folder and the hashes mended; the file
  // is put back.
  std::string FaultsAfter(const std::string& file,
                          const std::function<std::string(std::string)>& change) {
    const std::string before = folder_.Get("run/" + file);
    const std::string manifest = folder_.Get("run/manifest.json");
    const std::string after = change(before);
    EXPECT_NE(after, before) << file << " was not changed";
    folder_.Put("run/" + file, after);
    MendHashes();
    std::string faults = Faults();
    folder_.Put("run/" + file, before);
    folder_.Put("run/manifest.json", manifest);
    return faults;
  }

  std::vector<std::string> RunFiles() const {
    return *FileSystem::Posix().ListFiles(folder_.Path("run"));
  }

  TempFolder folder_;
};

inline std::vector<std::string> Lines(const std::string& text) {
  std::vector<std::string> lines;
  for (const std::string_view line : Split(text, '\n')) lines.emplace_back(line);
  return lines;
}

// Where the number behind "KEY": ends, in line `number` (from 1).
inline std::string Bump(const std::string& text, size_t number, const std::string& key) {
  std::vector<std::string> lines = Lines(text);
  std::string& line = lines.at(number - 1);
  const std::string quoted = "\"" + key + "\":";
  size_t at = line.find(quoted);
  if (at == std::string::npos) return text;
  at = line.find_first_not_of("0123456789.-", at + quoted.size()) - 1;
  line[at] = line[at] == '9' ? '8' : static_cast<char>(line[at] + 1);
  return Join(lines, "\n");
}

inline std::function<std::string(std::string)> Bumped(size_t line, const std::string& key) {
  return [=](const std::string& text) { return Bump(text, line, key); };
}

inline std::function<std::string(std::string)> Replaced(const std::string& from,
                                                        const std::string& to) {
  return [=](std::string text) {
    const size_t at = text.find(from);
    if (at != std::string::npos) text.replace(at, from.size(), to);
    return text;
  };
}

// The first line, from 1, that holds `part`.
inline size_t LineWith(const std::string& text, const std::string& part) {
  const std::vector<std::string> lines = Lines(text);
  for (size_t i = 0; i < lines.size(); ++i) {
    if (Contains(lines[i], part)) return i + 1;
  }
  ADD_FAILURE() << "no line with " << part;
  return 1;
}

}  // namespace phraseweld

#endif  // PHRASEWELD_TESTS_RUN_VERIFY_FIXTURE_H_
