#include "run/verify.h"

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include <atomic>
#include <filesystem>
#include <functional>
#include <memory>
#include <string>
#include <string_view>
#include <utility>
#include <vector>

#include "base/strings.h"
#include "config/job_file.h"
#include "deliver/joints.h"
#include "files/streams.h"
#include "read/run_folder.h"
#include "run/run.h"
#include "support/compress.h"
#include "support/temp_folder.h"

namespace phraseweld {
namespace {

using ::testing::AllOf;
using ::testing::HasSubstr;
using ::testing::IsEmpty;
using ::testing::Not;

constexpr char kJob[] =
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

constexpr char kRulings[] =
    "- {always: fog horn, reason: a signal}\n"
    "- {never: old chart, reason: filler}\n";

// Sentences that hold phrases of two to four words, with function words and hyphens inside, one
// phrase that yields to another, and types that miss a gate.
const std::vector<std::string> kSentences = {
    "The left bank light was out; left bank light seen again.",
    "A left-bank light, an old chart and the fog horn.",
    "Terms of service of the pump room: pump room key, pump\nroom door.",
    "The pump room door and terms of service, terms of the service.",
    "Old chart, old chart of the left bank. Tide gauge 12 reads 30 12.",
    "Tide gauge at the pump room; tide  gauge at the left bank light.",
    "Fog horn near the tide gauge, \"fog horn\" near the bank light.",
    "Mooring line tide line; mooring line near bank light tide gauge.",
};

std::string SourceText(std::string_view layout) {
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
    std::string yaml = kJob;
    for (const auto& [name, value] : values) {
      yaml.replace(yaml.find(name), name.size(), value);
    }
    for (size_t at; (at = yaml.find("FOLDER")) != std::string::npos;) {
      yaml.replace(at, 6, folder_.path());
    }
    folder_.Put("rulings.yaml", kRulings);
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

std::vector<std::string> Lines(const std::string& text) {
  std::vector<std::string> lines;
  for (const std::string_view line : Split(text, '\n')) lines.emplace_back(line);
  return lines;
}

// Where the number behind "KEY": ends, in line `number` (from 1).
std::string Bump(const std::string& text, size_t number, const std::string& key) {
  std::vector<std::string> lines = Lines(text);
  std::string& line = lines.at(number - 1);
  const std::string quoted = "\"" + key + "\":";
  size_t at = line.find(quoted);
  if (at == std::string::npos) return text;
  at = line.find_first_not_of("0123456789.-", at + quoted.size()) - 1;
  line[at] = line[at] == '9' ? '8' : static_cast<char>(line[at] + 1);
  return Join(lines, "\n");
}

std::function<std::string(std::string)> Bumped(size_t line, const std::string& key) {
  return [=](const std::string& text) { return Bump(text, line, key); };
}

std::function<std::string(std::string)> Replaced(const std::string& from, const std::string& to) {
  return [=](std::string text) {
    const size_t at = text.find(from);
    if (at != std::string::npos) text.replace(at, from.size(), to);
    return text;
  };
}

// The first line, from 1, that holds `part`.
size_t LineWith(const std::string& text, const std::string& part) {
  const std::vector<std::string> lines = Lines(text);
  for (size_t i = 0; i < lines.size(); ++i) {
    if (Contains(lines[i], part)) return i + 1;
  }
  ADD_FAILURE() << "no line with " << part;
  return 1;
}

TEST_F(VerifyTest, ARunOfEveryLayoutAndFormIsProved) {
  for (const char* layout : {"text", "lines", "paragraphs", "json_lines"}) {
    for (const char* corpus : {"source", "words", "none"}) {
      for (const char* compress : {"none", "zstd"}) {
        SCOPED_TRACE(Concat(layout, " ", corpus, " ", compress));
        Run({layout, corpus, compress[0] == 'n' ? "_" : "\\\"+", compress});
        EXPECT_THAT(Faults(), IsEmpty());
      }
    }
  }
}

TEST_F(VerifyTest, TheReportTellsWhatWasProved) {
  Run({});
  const auto report = VerifyRun(FileSystem::Posix(), folder_.Path("run"), Observer{});
  ASSERT_TRUE(report.ok()) << report.status();
  const RunData run = *ReadRunFolder(FileSystem::Posix(), folder_.Path("run"));
  EXPECT_EQ(report->files, run.manifest.outputs.size());
  EXPECT_EQ(report->inputs, 2u);
  EXPECT_EQ(report->restored, 2u);
  EXPECT_EQ(report->documents, 48u);
  EXPECT_EQ(report->words, run.manifest.totals.words);
  EXPECT_EQ(report->passes, run.manifest.totals.passes);
  EXPECT_EQ(report->phrases, run.phrases.size());
  uint64_t accepted = 0, near_misses = 0, merges = 0;
  for (const RunPass& pass : run.passes) {
    accepted += pass.accepted.size();
    near_misses += pass.near_misses.size();
    merges += pass.balance.joined;
  }
  EXPECT_EQ(report->accepted, accepted);
  EXPECT_EQ(report->near_misses, near_misses);
  EXPECT_EQ(report->merges, merges);
  // The sample has something of everything.
  EXPECT_GT(accepted, 5u);
  EXPECT_GT(near_misses, 2u);
  EXPECT_GE(report->passes, 3u);
}

TEST_F(VerifyTest, AnyFlippedByteOfTheRunFolderIsFoundAndItsFileNamed) {
  Run({"json_lines", "source", "_", "none", "true"});
  const std::string manifest = folder_.Get("run/manifest.json");
  const size_t version = manifest.find("\"version\":\"") + 11;
  const size_t timings = manifest.find("\"timings\":{") + 11;
  for (const std::string& file : RunFiles()) {
    const std::string bytes = folder_.Get("run/" + file);
    // About forty places a file, at its very ends as well.
    const size_t step = bytes.size() / 40 + 1;
    for (size_t at = 0; at < bytes.size(); at += at + step < bytes.size() ? step : 1) {
      if (at + step >= bytes.size() && at + 1 < bytes.size()) at = bytes.size() - 1;
      if (file == "manifest.json") {
        // How long it took, and by which version, is told and not proved.
        if (at >= timings && at + 3 < bytes.size()) continue;
        if (at >= version && bytes[at] != '"' && at < version + 5) continue;
      }
      std::string flipped = bytes;
      flipped[at] = static_cast<char>(flipped[at] ^ 1);
      folder_.Put("run/" + file, flipped);
      const auto report = VerifyRun(FileSystem::Posix(), folder_.Path("run"), Observer{});
      EXPECT_THAT(std::string(report.status().message()), HasSubstr(folder_.Path("run/" + file)))
          << "byte " << at;
    }
    folder_.Put("run/" + file, bytes);
  }
  EXPECT_THAT(Faults(), IsEmpty());
}

// The audit, the inventory and the texts hold nothing that the recount could not tell but the
// number of slot types.
TEST_F(VerifyTest, AnyFlippedByteIsFoundWithTheHashesMended) {
  Run({});
  for (const std::string& file : RunFiles()) {
    if (file == "manifest.json" || file == "job.yaml" || file.ends_with(".joints.zst")) continue;
    const std::string bytes = folder_.Get("run/" + file);
    const size_t slot_types = bytes.find("\"slot_types\":");
    const size_t step = bytes.size() / 30 + 1;
    for (size_t at = step / 2; at < bytes.size(); at += step) {
      if (at > slot_types && at < slot_types + 16) continue;
      const std::string faults = FaultsAfter(file, [at](std::string text) {
        text[at] = static_cast<char>(text[at] ^ 1);
        return text;
      });
      EXPECT_THAT(faults, HasSubstr(folder_.Path("run/" + file))) << "byte " << at;
    }
  }
}

TEST_F(VerifyTest, AChangedByteOfTheSourceIsFoundWithItsPlace) {
  Run({});
  const std::string text = folder_.Get("in/a.txt");
  std::string changed = text;
  const size_t at = text.find("left bank light seen");
  changed[at] = 'L';
  folder_.Put("in/a.txt", changed);
  EXPECT_THAT(Faults(),
              AllOf(HasSubstr(Concat(folder_.Path("in/a.txt"), ": XXH3-128: found ")),
                    HasSubstr(Concat("corpus/a.txt: undone, it is not ", folder_.Path("in/a.txt"),
                                     " from byte ", at, " (line 1): found \"left"))));
  folder_.Put("in/a.txt", text + "x");
  EXPECT_THAT(Faults(), HasSubstr(Concat(folder_.Path("in/a.txt"), ": size: found ",
                                         text.size() + 1, " bytes, expected ", text.size())));
  std::filesystem::remove(folder_.Path("in/a.txt"));
  EXPECT_THAT(Faults(), HasSubstr(Concat(folder_.Path("in/a.txt"), ": nothing stands where")));
}

TEST_F(VerifyTest, AFileTooFewOrTooManyIsNamed) {
  Run({});
  for (const char* file : {"inventory.tsv", "audit/pass-02.jsonl", "corpus/a.txt", "spans.jsonl",
                           "corpus/below/b.txt.joints.zst", "job.yaml", "audit/pass-00.jsonl"}) {
    const std::string bytes = folder_.Get(Concat("run/", file));
    std::filesystem::remove(folder_.Path(Concat("run/", file)));
    EXPECT_THAT(Faults(), HasSubstr(folder_.Path(Concat("run/", file))));
    folder_.Put(Concat("run/", file), bytes);
  }
  folder_.Put("run/corpus/c.txt", "");
  EXPECT_THAT(Faults(), HasSubstr(Concat(folder_.Path("run/corpus/c.txt"),
                                         ": the manifest does not list this file")));
  std::filesystem::remove(folder_.Path("run/corpus/c.txt"));
  folder_.Put("run/report.html", "made later");
  EXPECT_THAT(Faults(), IsEmpty());
}

TEST_F(VerifyTest, ALogTakenFromFolderAndManifestIsMissed) {
  Run({});
  const std::string log = "audit/pass-02.jsonl";
  std::string manifest = folder_.Get("run/manifest.json");
  for (const char* name : {"audit/pass-02.jsonl", "audit/pass-03.jsonl", "audit/pass-04.jsonl"}) {
    const size_t entry = manifest.find(Concat("{\"path\":\"", name));
    if (entry == std::string::npos) continue;
    manifest.erase(entry, manifest.find('\n', entry) + 1 - entry);
    std::filesystem::remove(folder_.Path(Concat("run/", name)));
  }
  folder_.Put("run/manifest.json", manifest);
  EXPECT_THAT(Faults(), HasSubstr("/audit: the log of pass 2 (longer) is missing"));
}

TEST_F(VerifyTest, NumbersOfTheAuditAreRecounted) {
  Run({});
  const std::string log = "audit/pass-01.jsonl";
  for (const char* key : {"rank", "n", "left_slots", "right_slots", "slots", "expected",
                          "documents", "pmi", "npmi", "g2", "joined", "yielded", "byte"}) {
    for (const size_t line : {size_t{2}, LineWith(folder_.Get("run/" + log), "near_miss")}) {
      EXPECT_THAT(FaultsAfter(log, Bumped(line, key)),
                  AllOf(HasSubstr(Concat(folder_.Path("run/" + log), ":", line, ": ")),
                        HasSubstr(Concat(key, ": found "))))
          << key;
    }
  }
  for (const char* key : {"pass", "tokens_in", "types_in", "slots", "occurrences"}) {
    EXPECT_THAT(FaultsAfter(log, Bumped(1, key)), HasSubstr(Concat(key, ": found "))) << key;
  }
  const size_t last = LineWith(folder_.Get("run/" + log), "\"balance\"");
  for (const char* key : {"accepted", "joined", "words_absorbed", "tokens_out"}) {
    EXPECT_THAT(FaultsAfter(log, Bumped(last, key)),
                HasSubstr(Concat(folder_.Path("run/" + log), ":", last, ": ", key, ": found ")))
        << key;
  }
  for (const char* key : {"joined", "documents"}) {
    EXPECT_THAT(FaultsAfter("audit/pass-00.jsonl", Bumped(2, key)),
                HasSubstr(Concat("audit/pass-00.jsonl:2: ", key, ": found ")));
  }
  EXPECT_THAT(FaultsAfter("audit/pass-00.jsonl", Replaced("a signal", "no signal")),
              HasSubstr("reason: found \"no signal\", expected \"a signal\""));
}

// Line `a` and the line after it change places, and take each other's rank.
std::string Swapped(const std::string& text, size_t a) {
  std::vector<std::string> lines = Lines(text);
  const auto rank = [](std::string& line) {
    const size_t begin = line.find("\"rank\":");
    return std::make_pair(begin, line.find(',', begin) - begin);
  };
  std::string& first = lines.at(a - 1);
  std::string& second = lines.at(a);
  const auto [at_first, size_first] = rank(first);
  const auto [at_second, size_second] = rank(second);
  const std::string rank_first = first.substr(at_first, size_first);
  first.replace(at_first, size_first, second.substr(at_second, size_second));
  second.replace(at_second, size_second, rank_first);
  std::swap(first, second);
  return Join(lines, "\n");
}

TEST_F(VerifyTest, LinesInAnotherOrderAreFound) {
  Run({});
  const std::string log = "audit/pass-01.jsonl";
  EXPECT_THAT(FaultsAfter(log, [](const std::string& text) { return Swapped(text, 2); }),
              HasSubstr(Concat(folder_.Path("run/" + log), ":3: order: found ")));
  const size_t near_miss = LineWith(folder_.Get("run/" + log), "near_miss");
  EXPECT_THAT(FaultsAfter(log, [=](const std::string& text) { return Swapped(text, near_miss); }),
              HasSubstr(Concat(log, ":", near_miss + 1, ": order: found ")));
}

std::function<std::string(std::string)> WithoutLine(size_t line) {
  return [line](const std::string& text) {
    std::vector<std::string> lines = Lines(text);
    lines.erase(lines.begin() + static_cast<ptrdiff_t>(line - 1));
    return Join(lines, "\n");
  };
}

TEST_F(VerifyTest, ALineThatIsMissingOrStandsTwiceIsFound) {
  Run({});
  const std::string log = "audit/pass-01.jsonl";
  const size_t near_miss = LineWith(folder_.Get("run/" + log), "near_miss");
  EXPECT_THAT(FaultsAfter(log, WithoutLine(near_miss)),
              HasSubstr(Concat(log, ":", near_miss, ": rank: found 2, expected 1")));
  EXPECT_THAT(FaultsAfter(log, WithoutLine(2)),
              HasSubstr(Concat(log, ":2: rank: found 2, expected 1")));
  EXPECT_THAT(FaultsAfter(log,
                          [](const std::string& text) {
                            std::vector<std::string> lines = Lines(text);
                            lines.insert(lines.begin() + 2, lines[1]);
                            return Join(lines, "\n");
                          }),
              HasSubstr(" stands twice in this pass"));
  // An accepted type told as a near miss, and the other way round.
  EXPECT_THAT(FaultsAfter(log,
                          [&](const std::string& text) {
                            std::vector<std::string> lines = Lines(text);
                            std::string& line = lines.at(near_miss - 1);
                            line.replace(line.find("near_miss"), 9, "accepted");
                            line.erase(line.find(",\"failed\""), std::string::npos);
                            line += '}';
                            return Join(lines, "\n");
                          }),
              HasSubstr(" of the accepted \""));
}

TEST_F(VerifyTest, TheInventoryIsRecounted) {
  Run({});
  const std::string inventory = "inventory.jsonl";
  const std::string before = folder_.Get("run/" + inventory);
  for (const char* key :
       {"words", "pass", "occurrences", "inside_longer", "documents", "joined", "pmi"}) {
    const size_t line = LineWith(before, "\"pmi\"");
    EXPECT_THAT(FaultsAfter(inventory, Bumped(line, key)),
                AllOf(HasSubstr(Concat(folder_.Path("run/" + inventory), ":", line, ": ")),
                      HasSubstr(Concat(key, ": found "))))
        << key;
  }
  EXPECT_THAT(FaultsAfter(inventory, WithoutLine(2)),
              HasSubstr("inventory.jsonl: place 2: found no line, expected \""));
  EXPECT_THAT(FaultsAfter(inventory, Replaced("\"surface\":\"", "\"surface\":\"X")),
              HasSubstr("inventory.jsonl:1: surface: found \"X"));
  EXPECT_THAT(FaultsAfter(inventory,
                          [](const std::string& text) {
                            std::vector<std::string> lines = Lines(text);
                            std::swap(lines[1], lines[2]);
                            return Join(lines, "\n");
                          }),
              HasSubstr("inventory.jsonl:2: phrase in this place: found "));
  EXPECT_THAT(FaultsAfter("inventory.tsv", Replaced("\t2\t", "\t3\t")),
              HasSubstr("inventory.tsv: byte "));
  EXPECT_THAT(FaultsAfter("inventory.tsv", WithoutLine(3)), HasSubstr("(line 3): found "));
  EXPECT_THAT(FaultsAfter("manifest.json",
                          Bumped(LineWith(folder_.Get("run/manifest.json"), "words_in_phrases"),
                                 "words_in_phrases")),
              HasSubstr("manifest.json: totals.words_in_phrases: found "));
}

TEST_F(VerifyTest, TheDeliveredTextsAreMadeAnew) {
  Run({});
  EXPECT_THAT(FaultsAfter("corpus/a.txt", Replaced("light", "night")),
              AllOf(HasSubstr("corpus/a.txt: undone, it is not "),
                    HasSubstr(Concat(folder_.Path("run/corpus/a.txt"), ": byte ")),
                    HasSubstr("found \"night")));
  EXPECT_THAT(FaultsAfter("spans.jsonl", Replaced("[[0,", "[[1,")),
              HasSubstr("spans.jsonl: byte "));
  Run({"lines", "words"});
  EXPECT_THAT(FaultsAfter("corpus/a.txt", Replaced("_", " ")), HasSubstr("corpus/a.txt: byte "));
}

// Both files changed to fit each other, so that undoing them succeeds.
TEST_F(VerifyTest, AJointChangedWithEverythingThatDependsOnItIsFound) {
  Run({"lines"});
  const std::string path = folder_.Path("run/corpus/a.txt");
  const std::string rewritten = folder_.Get("run/corpus/a.txt");
  const std::string source = folder_.Get("in/a.txt");
  const auto write = [&](size_t wrong, size_t skipped) {
    auto joints = *JointsWriter::Create(FileSystem::Posix(), JointsPath(path), "_");
    std::string text, undone;
    size_t at = 0;
    for (size_t i = 0; i < rewritten.size(); ++i) {
      if (rewritten[i] != '_') {
        joints->Skip(1);
        text += rewritten[i];
        undone += rewritten[i];
        continue;
      }
      const std::string gap =
          source.compare(undone.size(), 2, "  ") == 0 ? "  " : source.substr(undone.size(), 1);
      if (at == skipped) {
        joints->Skip(gap.size());
        text += gap;
        undone += gap;
      } else {
        const std::string written = at == wrong ? "\t" : gap;
        joints->Joint(written);
        text += '_';
        undone += written;
      }
      ++at;
    }
    joints->Source(undone);
    ASSERT_TRUE(joints->Finish().ok());
    folder_.Put("run/corpus/a.txt", text);
    MendHashes();
  };
  write(SIZE_MAX, SIZE_MAX);
  EXPECT_THAT(Faults(), IsEmpty());
  write(3, SIZE_MAX);
  EXPECT_THAT(Faults(), AllOf(HasSubstr("corpus/a.txt: undone, it is not "), HasSubstr("\\x09")));
  // A phrase that was not joined after all: the source comes back, but the rewrite is another.
  write(SIZE_MAX, 3);
  EXPECT_THAT(Faults(), AllOf(HasSubstr("corpus/a.txt: byte "), Not(HasSubstr("undone"))));
}

TEST_F(VerifyTest, AnotherJobIsFound) {
  Run({});
  EXPECT_THAT(FaultsAfter("job.yaml", Replaced("pmi: 1", "pmi: 3")),
              HasSubstr("accept.pmi: found 1, expected 3"));
  EXPECT_THAT(FaultsAfter("job.yaml", Replaced("longest: 5", "longest: 2")),
              HasSubstr("expected at most 2"));
  EXPECT_THAT(FaultsAfter("job.yaml", Replaced("take: all", "take: 1")),
              HasSubstr("accepted types: found "));
  EXPECT_THAT(FaultsAfter("job.yaml", Replaced("english", "none")), HasSubstr("slots"));
  folder_.Put("rulings.yaml", "- {always: fog horn, reason: a signal}\n- {never: pump room}\n");
  EXPECT_THAT(Faults(), HasSubstr("\"pump room\" is ruled never in "));
}

TEST_F(VerifyTest, FaultsAreCutAtTwentyAndCounted) {
  Run({});
  const std::string faults = FaultsAfter("audit/pass-01.jsonl", [](std::string text) {
    for (size_t at = 0; (at = text.find(",\"bridge\"", at)) != std::string::npos; at += 30) {
      for (const char* key : {"n", "left_slots", "right_slots", "slots", "joined"}) {
        const size_t digit =
            text.find_first_not_of("0123456789", text.find(Concat("\"", key, "\":"), at) +
                                                     std::string(key).size() + 3) -
            1;
        text[digit] = text[digit] == '1' ? '2' : '1';
      }
    }
    return text;
  });
  EXPECT_EQ(Lines(faults).size(), 22u) << faults;
  EXPECT_THAT(faults, HasSubstr("\n  and "));
}

// Has a file for standard input.
class WithStandardInput : public ForwardingFileSystem {
 public:
  explicit WithStandardInput(std::string path)
      : ForwardingFileSystem(FileSystem::Posix()), path_(std::move(path)) {}
  absl::StatusOr<std::unique_ptr<ReadFile>> OpenRead(const std::string& path) override {
    return target_.OpenRead(path == "-" ? path_ : path);
  }

 private:
  std::string path_;
};

TEST_F(VerifyTest, StandardInputIsProvedFromTheRewrittenFile) {
  WithStandardInput files(folder_.Put("typed", SourceText("lines")));
  Job job;
  job.job = "typed";
  job.run_folder = folder_.Path("run");
  job.corpus.files = {"-"};
  job.corpus.layout = Layout::kLines;
  job.passes[0].accept = {{Quantity::kOccurrences, 3}};
  ASSERT_TRUE(RunJob(job, RunControls{}, files, Observer{}).ok());
  std::filesystem::remove(folder_.Path("typed"));
  EXPECT_THAT(Faults(), IsEmpty());
  EXPECT_THAT(FaultsAfter("audit/pass-01.jsonl", Bumped(2, "n")), HasSubstr(":2: n: found "));
  EXPECT_THAT(FaultsAfter("corpus/stdin", Replaced("light", "night")),
              HasSubstr("corpus/stdin: the restored text is not the source: "));
  folder_.Put("typed", SourceText("lines"));
  job.deliver.corpus = CorpusForm::kWords;
  RunControls fresh;
  fresh.fresh = true;
  ASSERT_TRUE(RunJob(job, fresh, files, Observer{}).ok());
  EXPECT_THAT(Faults(), HasSubstr("standard input: it is gone"));
}

// Under compatibility case one letter becomes four words with spaces between them.
TEST_F(VerifyTest, TextsThatCanBeReadInSeveralWaysAreToldApart) {
  const std::string words = "صلى الله عليه وسلم";
  std::string text;
  for (int i = 0; i < 8; ++i) {
    AppendTo(&text, "محمد ﷺ قال\n", words, " قال\nمحمد ", words, " قال خير\n");
  }
  folder_.Put("in/arabic.txt", text);
  RunOn({{"LAYOUT", "lines"},
         {"CORPUS", "words"},
         {"JOINER", "_"},
         {"COMPRESS", "none"},
         {"REPORT", "false"}});
  EXPECT_THAT(folder_.Get("run/inventory.jsonl"), HasSubstr("ﷺ"));
  EXPECT_THAT(Faults(), IsEmpty());
  EXPECT_THAT(FaultsAfter("audit/pass-01.jsonl", Bumped(2, "n")), HasSubstr("pass-01.jsonl:2: "));
}

TEST_F(VerifyTest, AFolderWithoutAManifestIsNoFinishedRun) {
  const auto report = VerifyRun(FileSystem::Posix(), folder_.Path("run"), Observer{});
  EXPECT_TRUE(absl::IsNotFound(report.status())) << report.status();
}

TEST_F(VerifyTest, ItStopsWhenItIsToldTo) {
  Run({});
  std::atomic<bool> stop{false};
  Observer observer;
  observer.stop = &stop;
  for (const char* stage : {"hash the results", "hash the sources", "restore", "recount"}) {
    stop = false;
    observer.stage = [&](const Stage& at) { stop = stop || at.name == stage; };
    const auto report = VerifyRun(FileSystem::Posix(), folder_.Path("run"), observer);
    EXPECT_TRUE(absl::IsCancelled(report.status())) << stage << ": " << report.status();
  }
}

}  // namespace
}  // namespace phraseweld
