#include "read/run_folder.h"

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include <map>
#include <string>
#include <vector>

#include "absl/strings/str_format.h"
#include "base/json.h"
#include "base/strings.h"
#include "support/sample_run.h"
#include "support/temp_folder.h"

namespace phraseweld {
namespace {

using ::testing::ElementsAre;
using ::testing::HasSubstr;
using ::testing::IsEmpty;
using ::testing::SizeIs;

const std::vector<RefInput> kNotes = {
    {"a/notes.txt",
     "the left bank light is out\nleft bank light seen\nan old \"left bank\" chart\n"
     "pump room door\npump room key\npump room\nleft bank light and pump room\n"},
    {"more.txt", "Pump room, pump room; left bank\nfog horn\nfog horn\ndeep keel\ndeep keel\n"}};

Job NotesJob() {
  Job job;
  job.job = "notes";
  job.corpus.layout = Layout::kLines;
  job.passes = {PassOptions{}, PassOptions{}};
  job.passes[0].name = "pairs";
  job.passes[0].accept = {
      {Quantity::kOccurrences, 2}, {Quantity::kDocuments, 3}, {Quantity::kPmi, 0.5}};
  job.passes[0].rank_by = Quantity::kDice;
  job.passes[1].accept = {{Quantity::kOccurrences, 2}};
  job.passes[1].repeat = 3;
  job.phrases.ruling_list = {{true, "Fog Horn", "a \"signal\"\n", "rulings.yaml", 1}};
  return job;
}

absl::Status ReadLog(const std::string& path) {
  return ReadPassLog(FileSystem::Posix(), path, PassLogReader{});
}

absl::Status ReadPhrases(const std::string& path) {
  return ReadInventory(FileSystem::Posix(), path, [](RunPhrase&) { return absl::OkStatus(); });
}

// The lines that an audit log of these structs would have: the reader has lost nothing if they are
// those that it read. Numbers are printed by the tests' own means.
std::string Decimal(double value) {
  std::string digits = absl::StrFormat("%.9f", value);
  digits.erase(digits.find_last_not_of('0') + 1);
  if (digits.back() == '.') digits.pop_back();
  return digits;
}

std::string Scores(const std::vector<std::pair<Quantity, double>>& scores) {
  std::string out = "{";
  for (const auto& [quantity, value] : scores) {
    AppendJsonKey(&out, QuantityName(quantity));
    out += Decimal(value);
  }
  return out + "}";
}

std::string Text(std::string_view text) {
  std::string out;
  AppendJsonString(&out, text);
  return out;
}

std::string SlotLine(const RunSlot& slot) {
  std::string out = Concat(
      "{\"kind\":\"", slot.failed ? "near_miss" : "accepted", "\",\"rank\":", slot.rank,
      ",\"phrase\":", Text(slot.phrase), ",\"left\":", Text(slot.left),
      ",\"bridge\":", Text(slot.bridge), ",\"right\":", Text(slot.right), ",\"n\":", slot.table.n,
      ",\"left_slots\":", slot.table.left, ",\"right_slots\":", slot.table.right,
      ",\"slots\":", slot.table.total, ",\"expected\":", Decimal(slot.expected),
      ",\"documents\":", slot.table.documents, ",\"scores\":", Scores(slot.scores));
  AppendTo(&out, ",\"joined\":", slot.joined, ",\"yielded\":", slot.yielded,
           ",\"first\":{\"document\":", Text(slot.first.document),
           ",\"passage\":", Text(slot.first.passage), ",\"byte\":", slot.first.byte, "}");
  if (slot.failed) AppendTo(&out, ",\"failed\":\"", QuantityName(*slot.failed), "\"");
  return out + "}\n";
}

std::string LogOf(const RunPass& pass) {
  std::string out =
      Concat("{\"kind\":\"pass\",\"pass\":", pass.head.number, ",\"name\":", Text(pass.head.name),
             ",\"tokens_in\":", pass.head.tokens_in, ",\"types_in\":", pass.head.types_in);
  if (pass.head.number > 0) {
    std::vector<std::pair<Quantity, double>> gates;
    for (const Gate& gate : pass.head.accept) gates.emplace_back(gate.quantity, gate.least);
    AppendTo(&out, ",\"slots\":", pass.head.slots, ",\"slot_types\":", pass.head.slot_types,
             ",\"rank_by\":\"", QuantityName(*pass.head.rank_by), "\",\"accept\":", Scores(gates));
  }
  out += "}\n";
  for (const RunRuled& ruled : pass.ruled) {
    AppendTo(&out, "{\"kind\":\"ruled\",\"phrase\":", Text(ruled.phrase),
             ",\"joined\":", ruled.joined, ",\"documents\":", ruled.documents);
    if (!ruled.reason.empty()) AppendTo(&out, ",\"reason\":", Text(ruled.reason));
    out += "}\n";
  }
  for (const RunSlot& slot : pass.accepted) out += SlotLine(slot);
  for (const RunSlot& slot : pass.near_misses) out += SlotLine(slot);
  return Concat(out, "{\"kind\":\"balance\",\"pass\":", pass.head.number,
                ",\"tokens_in\":", pass.balance.tokens_in, ",\"accepted\":", pass.balance.accepted,
                ",\"joined\":", pass.balance.joined,
                ",\"words_absorbed\":", pass.balance.words_absorbed,
                ",\"tokens_out\":", pass.balance.tokens_out, "}\n");
}

std::string InventoryOf(const std::vector<RunPhrase>& phrases) {
  std::string out;
  for (const RunPhrase& phrase : phrases) {
    AppendTo(&out, "{\"phrase\":", Text(phrase.phrase), ",\"words\":", phrase.words,
             ",\"pass\":", phrase.pass, ",\"occurrences\":", phrase.occurrences,
             ",\"inside_longer\":", phrase.inside_longer, ",\"documents\":", phrase.documents,
             ",\"surface\":", Text(phrase.surface), ",\"made_of\":[");
    for (const RunDerivation& made : phrase.made_of) {
      AppendTo(&out, out.back() == '[' ? "" : ",", "{\"pass\":", made.pass,
               ",\"left\":", Text(made.left), ",\"bridge\":", Text(made.bridge),
               ",\"right\":", Text(made.right), ",\"joined\":", made.joined, "}");
    }
    AppendTo(&out, "],\"scores\":", Scores(phrase.scores));
    if (!phrase.reason.empty()) AppendTo(&out, ",\"reason\":", Text(phrase.reason));
    out += "}\n";
  }
  return out;
}

TEST(RunFolder, LosesNothingOfWhatTheReferenceWrites) {
  const TempFolder folder;
  const Job job = NotesJob();
  const std::string run = PutSampleRun(folder, "run", job, kNotes);
  const auto data = ReadRunFolder(FileSystem::Posix(), run);
  ASSERT_TRUE(data.ok()) << data.status();
  const std::map<std::string, std::string> files = ReferenceRun(job, kNotes);
  size_t logs = 0, near_misses = 0;
  for (const RunPass& pass : data->passes) {
    EXPECT_EQ(LogOf(pass), files.at(Concat("audit/pass-0", pass.head.number, ".jsonl")));
    ++logs;
    near_misses += pass.near_misses.size();
    for (const RunSlot& slot : pass.accepted) EXPECT_EQ(slot.table.all, pass.head.slots);
  }
  size_t written = 0;
  for (const auto& [path, bytes] : files) written += path.starts_with("audit/");
  EXPECT_EQ(logs, written);
  EXPECT_GT(near_misses, 0u);
  EXPECT_EQ(data->passes[0].ruled[0].reason, "a \"signal\"\n");
  EXPECT_EQ(InventoryOf(data->phrases), files.at("inventory.jsonl"));
}

TEST(RunFolder, ManifestTellsInputsOutputsAndTotals) {
  const TempFolder folder;
  const std::string run = PutSampleRun(folder, "run", NotesJob(), kNotes);
  const auto manifest = ReadManifest(FileSystem::Posix(), Concat(run, "/manifest.json"));
  ASSERT_TRUE(manifest.ok()) << manifest.status();
  EXPECT_EQ(manifest->program, "phraseweld");
  EXPECT_EQ(manifest->job, "notes");
  ASSERT_THAT(manifest->inputs, SizeIs(2));
  EXPECT_EQ(manifest->inputs[0].name, "a/notes.txt");
  EXPECT_EQ(manifest->inputs[0].path, folder.Path("run.source/a/notes.txt"));
  EXPECT_EQ(manifest->inputs[1].stored_bytes, kNotes[1].bytes.size());
  EXPECT_THAT(manifest->inputs[1].xxh3_128, SizeIs(32));
  EXPECT_EQ(manifest->outputs.front().path, "audit/pass-00.jsonl");
  EXPECT_EQ(manifest->totals.phrases, 5u);
  EXPECT_THAT(manifest->timings, ElementsAre(std::make_pair("read", 0.25)));
}

TEST(RunFolder, EveryLineWithAFieldMissingIsNamed) {
  const TempFolder folder;
  const std::map<std::string, std::string> files = ReferenceRun(NotesJob(), kNotes);
  for (const std::string name : {"audit/pass-00.jsonl", "audit/pass-01.jsonl", "inventory.jsonl"}) {
    const std::string& good = files.at(name);
    size_t line = 1, tried = 0;
    for (size_t at = 0; at + 1 < good.size(); ++at) {
      line += good[at] == '\n';
      // A key: its name is in the error, whatever object it is in.
      if (good[at] != '"' || (good[at - 1] != '{' && good[at - 1] != ',')) continue;
      const size_t end = good.find('"', at + 1);
      const std::string key = good.substr(at + 1, end - at - 1);
      if (good[end + 1] != ':' || key == "reason" ||
          QuantityFromName(key).value_or(Quantity::kOccurrences) != Quantity::kOccurrences) {
        continue;
      }
      if (key == "documents" && good.substr(at - 20, 20).find("accept") != std::string::npos) {
        continue;
      }
      std::string bad = good;
      bad[at + 1] = 'X';
      const std::string path = folder.Put(name, bad);
      const absl::Status status = name == "inventory.jsonl" ? ReadPhrases(path) : ReadLog(path);
      // The balance line repeats its pass for people; gates and scores are maps with free keys.
      if (status.ok()) {
        EXPECT_TRUE(key == "pass" && good.substr(at - 10, 9) == "\"balance\"") << bad;
        continue;
      }
      EXPECT_EQ(status.code(), absl::StatusCode::kDataLoss);
      EXPECT_THAT(std::string(status.message()), HasSubstr(Concat(path, ":", line, ": ")));
      if (!Contains(std::string(status.message()), "map from measures")) {
        EXPECT_THAT(std::string(status.message()), HasSubstr(Concat("\"", key, "\"")));
      }
      ++tried;
    }
    EXPECT_GT(tried, 10u) << name;
  }
}

TEST(RunFolder, AFileCutAnywhereIsAnError) {
  const TempFolder folder;
  const std::string good = ReferenceRun(NotesJob(), kNotes).at("audit/pass-00.jsonl");
  ASSERT_TRUE(ReadLog(folder.Put("whole.jsonl", good)).ok());
  for (size_t size = 0; size < good.size(); ++size) {
    const absl::Status status = ReadLog(folder.Put("cut.jsonl", good.substr(0, size)));
    EXPECT_EQ(status.code(), absl::StatusCode::kDataLoss) << size;
    EXPECT_THAT(std::string(status.message()), HasSubstr("the file is cut"));
  }
}

TEST(RunFolder, LinesOutOfPlaceAreErrors) {
  const TempFolder folder;
  const std::string good = ReferenceRun(NotesJob(), kNotes).at("audit/pass-01.jsonl");
  const std::string first = good.substr(0, good.find('\n') + 1);
  EXPECT_THAT(std::string(ReadLog(folder.Put("a", good + first)).message()),
              HasSubstr("nothing may stand behind the balance line"));
  EXPECT_THAT(std::string(ReadLog(folder.Put("b", first + good)).message()),
              HasSubstr("b:2: the pass line must be the first"));
  EXPECT_THAT(std::string(ReadLog(folder.Put("c", good.substr(first.size()))).message()),
              HasSubstr("c:1: the pass line must be the first"));
  EXPECT_THAT(std::string(ReadLog(folder.Put("d", first + "{\"kind\":\"other\"}\n")).message()),
              HasSubstr("d:2: the field \"kind\" is not pass, accepted"));
  EXPECT_THAT(std::string(ReadLog(folder.Put("e", first + "[]\n")).message()),
              HasSubstr("e:2: this is no JSON object"));
  EXPECT_THAT(std::string(ReadLog(folder.Put("f", first + "{} {}\n")).message()),
              HasSubstr("f:2: this is no JSON object"));
}

TEST(RunFolder, AValueOfTheWrongKindIsNamed) {
  const TempFolder folder;
  std::string line = ReferenceRun(NotesJob(), kNotes).at("inventory.jsonl");
  line = line.substr(0, line.find('\n') + 1);
  ASSERT_TRUE(ReadPhrases(folder.Put("good", line)).ok());
  const std::vector<std::pair<std::string, std::string>> changes = {
      {"\"words\":", "\"words\":-"},
      {"\"words\":", "\"words\":5000000000"},
      {"\"occurrences\":", "\"occurrences\":0.5"},
      {"\"surface\":", "\"surface\":[],\"old\":"},
      {"\"made_of\":[", "\"made_of\":[7,"},
      {"\"pmi\":", "\"pmj\":"},
      {"\"pmi\":", "\"pmi\":null,\"npmi\":"}};
  for (const auto& [from, to] : changes) {
    std::string bad = line;
    bad.replace(bad.find(from), from.size(), to);
    const absl::Status status = ReadPhrases(folder.Put("bad", bad));
    EXPECT_THAT(std::string(status.message()), HasSubstr("bad:1: the field \"")) << bad;
  }
}

TEST(RunFolder, LinesLongerThanTheBufferAndManyLinesAreRead) {
  const TempFolder folder;
  RunPhrase phrase;
  phrase.phrase = "x y";
  std::vector<RunPhrase> phrases;
  for (size_t i = 0; i < 3000; ++i) {
    phrase.surface.assign(i % 1000 == 500 ? 900000 : i % 97, 's');
    phrase.occurrences = i;
    phrases.push_back(phrase);
  }
  const std::string path = folder.Put("inventory.jsonl", InventoryOf(phrases));
  std::vector<RunPhrase> read;
  ASSERT_TRUE(ReadInventory(FileSystem::Posix(), path, [&](RunPhrase& one) {
                read.push_back(one);
                return absl::OkStatus();
              }).ok());
  EXPECT_EQ(InventoryOf(read), InventoryOf(phrases));
}

TEST(RunFolder, AnErrorOfTheCallerEndsTheReading) {
  const TempFolder folder;
  const std::string run = PutSampleRun(folder, "run", NotesJob(), kNotes);
  int calls = 0;
  const absl::Status status =
      ReadInventory(FileSystem::Posix(), Concat(run, "/inventory.jsonl"), [&](RunPhrase&) {
        ++calls;
        return absl::CancelledError("enough");
      });
  EXPECT_EQ(status.message(), "enough");
  EXPECT_EQ(calls, 1);
}

TEST(RunFolder, WhatIsNoRunFolderSaysWhatIsMissing) {
  const TempFolder folder;
  FileSystem& files = FileSystem::Posix();
  EXPECT_THAT(std::string(ReadRunFolder(files, folder.Path("none")).status().message()),
              HasSubstr("there is no such run folder"));
  const std::string run = PutSampleRun(folder, "run", NotesJob(), kNotes);
  std::filesystem::remove(folder.Path("run/audit/pass-02.jsonl"));
  EXPECT_THAT(std::string(ReadRunFolder(files, run).status().message()),
              HasSubstr("the log of pass 2 is missing"));
  std::filesystem::remove(folder.Path("run/manifest.json"));
  EXPECT_THAT(std::string(ReadRunFolder(files, run).status().message()),
              HasSubstr("manifest.json: there is no such file"));
}

TEST(RunFolder, LogsAreListedByNumber) {
  const TempFolder folder;
  for (int i = 1; i <= 101; ++i) {
    folder.Put(Concat("run/audit/pass-", i < 10 ? "0" : "", i, ".jsonl"), "");
  }
  folder.Put("run/audit/notes.txt", "");
  const auto paths = ListPassLogs(FileSystem::Posix(), folder.Path("run"));
  ASSERT_TRUE(paths.ok());
  ASSERT_THAT(*paths, SizeIs(101));
  EXPECT_THAT((*paths)[98], HasSubstr("pass-99.jsonl"));
  EXPECT_THAT((*paths)[99], HasSubstr("pass-100.jsonl"));
}

TEST(RunFolder, AManifestWithoutAFieldSaysWhich) {
  const TempFolder folder;
  const std::string run = PutSampleRun(folder, "run", NotesJob(), kNotes);
  const std::string good = folder.Get("run/manifest.json");
  for (const std::string key : {"program", "inputs", "xxh3_128", "text_bytes", "bytes", "totals",
                                "bad_lines", "job", "path"}) {
    std::string bad = good;
    bad.replace(bad.find(Concat("\"", key, "\":")), key.size() + 2, "\"other\"");
    folder.Put("run/manifest.json", bad);
    const auto read = ReadManifest(FileSystem::Posix(), Concat(run, "/manifest.json"));
    EXPECT_THAT(std::string(read.status().message()),
                HasSubstr(Concat("the field \"", key, "\" is missing")));
  }
}

}  // namespace
}  // namespace phraseweld
