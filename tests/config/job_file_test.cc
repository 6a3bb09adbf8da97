#include "config/job_file.h"

#include <random>

#include "config/job_fixture.h"
#include "config/keys.h"

namespace phraseweld {
namespace {

using testing::ElementsAre;
using testing::HasSubstr;
using testing::StartsWith;

constexpr std::string_view kLeast = "corpus: {files: [\"*.txt\"]}\n";

class JobFile : public JobFixture {};

TEST_F(JobFile, DefaultsOfTheTableAreThoseOfTheStructures) {
  Job expected;
  expected.job = "demo";
  expected.run_folder = "runs/demo";
  expected.corpus.files = {"*.txt"};
  const Job job = Good(kLeast);
  EXPECT_EQ(WriteJobYaml(job), WriteJobYaml(expected));
  EXPECT_TRUE(job.words.function_word_list.empty());
  EXPECT_TRUE(job.phrases.ruling_list.empty());
}

TEST_F(JobFile, EveryKeyIsRead) {
  folder_.Put("own.txt", "of\n");
  folder_.Put("rulings.yaml", "- {never: so on}\n");
  const Job job = Good(R"(
job: harbour-log
run_folder: out/harbour
corpus:
  files: ["logs/*.jsonl", "-"]
  layout: json_lines
  fields: [title, body]
  id: number
  bad_lines: keep
words:
  fold: case
  strip_accents: true
  hyphens: break
  numbers: nowhere
  function_words: )" + folder_.Path("own.txt") +
                       R"(
  bridge: 3
passes:
  - name: pairs
    rank_by: npmi
    accept: {pmi_floor: -1.5, occurrences: 8, documents: 3}
    take: 5000
  - name: longer
    repeat: 4
    margins: words
    accept: {}
phrases: {longest: 8, rulings: )" +
                       folder_.Path("rulings.yaml") + R"(}
deliver: {corpus: words, joiner: "~", compress: zstd, spans: true, report: false}
limits: {memory: 512 MiB, threads: 3}
debug: {recount: true}
)");
  EXPECT_EQ(job.job, "harbour-log");
  EXPECT_EQ(job.run_folder, "out/harbour");
  EXPECT_THAT(job.corpus.files, ElementsAre("logs/*.jsonl", "-"));
  EXPECT_EQ(job.corpus.layout, Layout::kJsonLines);
  EXPECT_THAT(job.corpus.fields, ElementsAre("title", "body"));
  EXPECT_EQ(job.corpus.id, "number");
  EXPECT_EQ(job.corpus.bad_lines, BadLines::kKeep);
  EXPECT_EQ(job.words.fold, Fold::kCase);
  EXPECT_TRUE(job.words.strip_accents);
  EXPECT_EQ(job.words.hyphens, Hyphens::kSeparate);
  EXPECT_EQ(job.words.numbers, Numbers::kNowhere);
  EXPECT_THAT(job.words.function_word_list, ElementsAre("of"));
  EXPECT_EQ(job.words.bridge, 3);
  ASSERT_EQ(job.passes.size(), 2u);
  const PassOptions& pairs = job.passes[0];
  EXPECT_EQ(pairs.name, "pairs");
  EXPECT_EQ(pairs.repeat, 1);
  EXPECT_EQ(pairs.rank_by, Quantity::kNpmi);
  EXPECT_EQ(pairs.margins, Margins::kSlots);
  EXPECT_EQ(pairs.take, 5000u);
  ASSERT_EQ(pairs.accept.size(), 3u);  // by quantity, not as written
  EXPECT_EQ(pairs.accept[0].quantity, Quantity::kOccurrences);
  EXPECT_EQ(pairs.accept[0].least, 8);
  EXPECT_EQ(pairs.accept[1].quantity, Quantity::kDocuments);
  EXPECT_EQ(pairs.accept[2].quantity, Quantity::kPmiFloor);
  EXPECT_EQ(pairs.accept[2].least, -1.5);
  const PassOptions& longer = job.passes[1];
  EXPECT_EQ(longer.repeat, 4);
  EXPECT_EQ(longer.margins, Margins::kWords);
  EXPECT_TRUE(longer.accept.empty());
  EXPECT_EQ(longer.take, std::nullopt);
  EXPECT_EQ(job.phrases.longest, 8);
  EXPECT_EQ(job.phrases.ruling_list.size(), 1u);
  EXPECT_EQ(job.deliver.corpus, CorpusForm::kWords);
  EXPECT_EQ(job.deliver.joiner, "~");
  EXPECT_EQ(job.deliver.compress, Compress::kZstd);
  EXPECT_TRUE(job.deliver.spans);
  EXPECT_FALSE(job.deliver.report);
  EXPECT_EQ(job.limits.memory, uint64_t{512} << 20);
  EXPECT_EQ(job.limits.threads, 3);
  EXPECT_TRUE(job.debug.recount);
}

TEST_F(JobFile, AnAcceptWithoutOccurrencesHasNoSuchGate) {
  const Job job = Good(std::string(kLeast) + "passes: [{accept: {pmi: 3}}]\n");
  ASSERT_EQ(job.passes[0].accept.size(), 1u);
  EXPECT_EQ(job.passes[0].accept[0].quantity, Quantity::kPmi);
}

TEST_F(JobFile, TheNameComesFromTheFileAndTheFolderFromTheName) {
  const auto load = [this](const std::string& name) {
    return *LoadJob(FileSystem::Posix(), folder_.Put(name, kLeast), {});
  };
  EXPECT_EQ(load("north.sea.yaml").job, "north.sea");
  EXPECT_EQ(load("bare").job, "bare");
  EXPECT_EQ(load("x/deep.yml").run_folder, "runs/deep");
  EXPECT_EQ(Good("job: tides\ncorpus: {files: [a]}").run_folder, "runs/tides");
  EXPECT_EQ(Good(kLeast, {"job=tides"}).run_folder, "runs/tides");
}

TEST_F(JobFile, AFileNameThatIsNoJobNameIsRefused) {
  const auto job = LoadJob(FileSystem::Posix(), folder_.Put("my job.yaml", kLeast), {});
  EXPECT_EQ(WithoutFolder(std::string(job.status().message())),
            "my job.yaml: job is not set, and 'my job' from the file's name cannot stand in; set "
            "job to a name of at most 200 letters A-Z a-z, digits, '.', '_' and '-'");
}

TEST_F(JobFile, AFileThatIsNoJobFileIsRefusedBeforeItIsRead) {
  const auto message = [this](const std::string& name) {
    const auto job = LoadJob(FileSystem::Posix(), folder_.Path(name), {});
    EXPECT_EQ(job.status().code(), absl::StatusCode::kInvalidArgument);
    return WithoutFolder(std::string(job.status().message()));
  };
  folder_.Put("folder/x", "");
  folder_.Put("large.yaml", std::string(5 << 20, '#'));
  EXPECT_EQ(message("absent.yaml"), "absent.yaml: there is no such job file");
  EXPECT_EQ(message("folder"), "folder: this is a folder, not a job file");
  EXPECT_EQ(message("large.yaml"), "large.yaml: at 5.00 MiB this is too large for a job file");
}

TEST_F(JobFile, TheResolvedJobHasEveryKeyAndIsStable) {
  EXPECT_EQ(WriteJobYaml(Good(kLeast)), R"(job: demo
run_folder: runs/demo
corpus:
  files: ["*.txt"]
  layout: text
  fields: [text]
  id: ""
  bad_lines: stop
words:
  fold: compatibility_case
  strip_accents: false
  hyphens: join
  numbers: not_first
  function_words: none
  bridge: 2
passes:
  - name: pass
    repeat: 1
    rank_by: pmi
    margins: slots
    accept: {occurrences: 5}
    take: all
phrases:
  longest: 6
  rulings: none
deliver:
  corpus: source
  joiner: "_"
  compress: none
  spans: false
  report: true
limits:
  memory: 2 GiB
  threads: 0
debug:
  recount: false
)");
}

std::string RandomText(std::mt19937& random, size_t longest) {
  static const std::vector<std::string> pieces = {
      "a", "B", "7", " ", "_", "-",   ":",  "#",  "'",  "\"", "\\", ",",      "[",     "]",
      "{", "}", "*", "&", "!", "|",   ">",  "%",  "@",  "`",  "?",  "~",      "é",     "漢",
      "=", "<", ".", "/", "$", "\\n", ": ", " #", "- ", "no", "%",  "\u2028", "\uFEFF"};
  std::string text;
  const size_t wanted = 1 + random() % 6;
  for (size_t i = 0; i < wanted; ++i) {
    const std::string& piece = pieces[random() % pieces.size()];
    if (text.size() + piece.size() <= longest) text += piece;
  }
  return text;
}

TEST_F(JobFile, TheResolvedJobIsReadAsTheSameJob) {
  std::mt19937 random(11);
  for (int round = 0; round < 500; ++round) {
    Job job;
    job.job = "round-" + std::to_string(round);
    job.run_folder = RandomText(random, 100);
    job.corpus.files = {"1" + RandomText(random, 50), "2" + RandomText(random, 50)};
    job.corpus.layout = static_cast<Layout>(random() % 4);
    job.corpus.fields = {RandomText(random, 50)};
    job.corpus.id = round % 2 == 0 ? "" : RandomText(random, 50);
    job.corpus.bad_lines = static_cast<BadLines>(random() % 2);
    job.words.fold = static_cast<Fold>(random() % 3);
    job.words.strip_accents = random() % 2 == 0;
    job.words.hyphens = static_cast<Hyphens>(random() % 2);
    job.words.numbers = static_cast<Numbers>(random() % 3);
    job.words.bridge = static_cast<int>(random() % 5);
    job.passes.clear();
    for (int pass = 0; pass < 1 + round % 3; ++pass) {
      PassOptions options;
      options.name = RandomText(random, 50);
      options.repeat = 1 + static_cast<int>(random() % 99);
      options.rank_by = static_cast<Quantity>(2 + random() % (kQuantities - 2));
      options.margins = static_cast<Margins>(random() % 2);
      options.accept.clear();
      for (int quantity = 0; quantity < kQuantities; ++quantity) {
        if (random() % 3 != 0) continue;
        const double least = quantity < 2 ? 1 + static_cast<double>(random() % 1000)
                                          : std::uniform_real_distribution<>(-9, 9)(random);
        options.accept.push_back({static_cast<Quantity>(quantity), least});
      }
      if (random() % 2 == 0) options.take = 1 + random();
      job.passes.push_back(options);
    }
    job.phrases.longest = 2 + static_cast<int>(random() % 63);
    job.deliver.corpus = static_cast<CorpusForm>(random() % 3);
    job.deliver.joiner = RandomText(random, 16);
    job.deliver.compress = static_cast<Compress>(random() % 2);
    job.deliver.spans = random() % 2 == 0;
    job.deliver.report = random() % 2 == 0;
    job.limits.memory = (uint64_t{16} << 20) + random();
    job.limits.threads = static_cast<int>(random() % 257);
    job.debug.recount = random() % 2 == 0;
    const std::string yaml = WriteJobYaml(job);
    const Job again = Good(yaml);
    ASSERT_EQ(WriteJobYaml(again), yaml);
    // The written form could lose the same twice; the texts themselves settle it.
    ASSERT_EQ(again.run_folder, job.run_folder);
    ASSERT_EQ(again.corpus.files, job.corpus.files);
    ASSERT_EQ(again.corpus.fields, job.corpus.fields);
    ASSERT_EQ(again.corpus.id, job.corpus.id);
    ASSERT_EQ(again.deliver.joiner, job.deliver.joiner);
    ASSERT_EQ(again.limits.memory, job.limits.memory);
    for (size_t pass = 0; pass < job.passes.size(); ++pass) {
      ASSERT_EQ(again.passes[pass].name, job.passes[pass].name);
      ASSERT_EQ(again.passes[pass].take, job.passes[pass].take);
      ASSERT_EQ(again.passes[pass].accept.size(), job.passes[pass].accept.size());
      for (size_t gate = 0; gate < job.passes[pass].accept.size(); ++gate) {
        ASSERT_EQ(again.passes[pass].accept[gate].least, job.passes[pass].accept[gate].least);
      }
    }
  }
}

TEST_F(JobFile, AByteOrderMarkAndWindowsLineEndsAreNoFault) {
  EXPECT_EQ(Good("\xEF\xBB\xBFjob: tides\r\ncorpus:\r\n  files: [a.txt]\r\n").job, "tides");
  EXPECT_EQ(Fault("\xEF\xBB\xBFjoob: tides\r\ncorpus:\r\n  files: [a.txt]\r\n"),
            "demo.yaml:1:2: unknown key 'joob'; did you mean 'job'?\n"
            "    \xEF\xBB\xBFjoob: tides\n"
            "    ^");
}

TEST_F(JobFile, AnAliasIsWhatItNames) {
  const Job job =
      Good(std::string(kLeast) + "passes:\n  - accept: &gates {pmi: 3}\n  - accept: *gates\n",
           {"passes.0.accept.pmi=4"});
  EXPECT_EQ(job.passes[0].accept[0].least, 4);  // a setting changes the one, not the other
  EXPECT_EQ(job.passes[1].accept[0].least, 3);
}

TEST_F(JobFile, SettingsOverrideTheFile) {
  const std::string yaml = std::string(kLeast) + "limits: {threads: 2}\npasses: [{take: 5}, {}]\n";
  EXPECT_EQ(Good(yaml, {"limits.threads=4"}).limits.threads, 4);
  EXPECT_EQ(Good(yaml, {"limits.threads=4", "limits.threads=5"}).limits.threads, 5);
  EXPECT_EQ(Good(yaml, {"limits.memory=1.5 GiB"}).limits.memory, uint64_t{1536} << 20);
  EXPECT_EQ(Good(yaml, {"limits.threads=4"}).limits.memory, uint64_t{2} << 30);
  EXPECT_THAT(Good(yaml, {"corpus.files=[a, \"b c\"]"}).corpus.files, ElementsAre("a", "b c"));
  EXPECT_EQ(Good(yaml, {"deliver.joiner=\"=\""}).deliver.joiner, "=");
  const Job job = Good(yaml, {"passes.0.accept.pmi=3", "passes.1.take=7"});
  EXPECT_EQ(job.passes[0].take, 5u);
  EXPECT_EQ(job.passes[0].accept[0].least, 3);
  EXPECT_EQ(job.passes[1].take, 7u);
  EXPECT_EQ(Good(kLeast, {"passes.0.repeat=9"}).passes[0].repeat, 9);
  EXPECT_EQ(Good("", {"corpus.files=[a]"}).corpus.files.size(), 1u);
  EXPECT_EQ(Good("corpus:\n", {"corpus.files.0=a"}).corpus.files.size(), 1u);
  // What a setting replaces is no longer wrong.
  EXPECT_EQ(Good(std::string(kLeast) + "words: {bridge: 9}\n", {"words.bridge=1"}).words.bridge, 1);
}

TEST(KeyTable, EveryKeyIsExplained) {
  std::vector<std::string> paths;
  for (const Key& key : JobKeys()) {
    EXPECT_TRUE(key.meaning.ends_with('.')) << key.path;
    EXPECT_FALSE(key.default_value.empty() && key.default_words.empty()) << key.path;
    EXPECT_FALSE(Wanted(key).empty()) << key.path;
    paths.emplace_back(key.path);
  }
  EXPECT_EQ(paths.size(), 29u);
}

}  // namespace
}  // namespace phraseweld
