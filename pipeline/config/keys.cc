#include "config/keys.h"

#include <algorithm>
#include <array>
#include <limits>

#include "absl/strings/ascii.h"
#include "base/strings.h"
#include "base/units.h"
#include "base/utf8.h"

namespace phraseweld {
namespace {

using Names = absl::Span<const std::string_view>;

// Each in the order of its enumeration in base/job.h.
constexpr std::array<std::string_view, 4> kLayouts = {"text", "lines", "paragraphs", "json_lines"};
constexpr std::array<std::string_view, 2> kBadLines = {"stop", "keep"};
constexpr std::array<std::string_view, 3> kFolds = {"none", "case", "compatibility_case"};
constexpr std::array<std::string_view, 2> kHyphens = {"join", "break"};
constexpr std::array<std::string_view, 3> kNumbers = {"anywhere", "not_first", "nowhere"};
constexpr std::array<std::string_view, 2> kMargins = {"slots", "words"};
constexpr std::array<std::string_view, 3> kCorpusForms = {"source", "words", "none"};
constexpr std::array<std::string_view, 2> kCompress = {"none", "zstd"};

constexpr size_t kLongestJoiner = 16;                // bytes; a joiner is repeated at every joint
constexpr size_t kLongestJobName = 200;              // bytes; file systems stop at 255 for a name
constexpr int64_t kLeastMemory = int64_t{16} << 20;  // below it the buffers alone take all

template <class Enumeration>
ChoiceField Choice(Enumeration& value) {
  return {[&value] { return static_cast<int>(value); },
          [&value](int position) { value = static_cast<Enumeration>(position); }};
}

absl::Status CheckJobName(const std::string& text) {
  const bool plain = std::all_of(text.begin(), text.end(), [](char c) {
    return absl::ascii_isalnum(static_cast<unsigned char>(c)) || c == '.' || c == '_' || c == '-';
  });
  if (plain && !text.empty() && text.size() <= kLongestJobName && text != "." && text != "..") {
    return absl::OkStatus();
  }
  return absl::InvalidArgumentError(
      Concat("a name of at most ", kLongestJobName, " letters A-Z a-z, digits, '.', '_' and '-'"));
}

absl::Status CheckJoiner(const std::string& text) {
  if (!text.empty() && text.size() <= kLongestJoiner) return absl::OkStatus();
  return absl::InvalidArgumentError(
      Concat("a text of 1 to ", kLongestJoiner, " bytes without control characters"));
}

absl::Status CheckNotEmpty(const std::string& text) {
  return text.empty() ? absl::InvalidArgumentError("a text that is not empty") : absl::OkStatus();
}

// One constructor a kind of key, so that a row of the table below says only what is its own.

Key Text(std::string_view path, std::string_view default_value, std::string_view default_words,
         std::string_view unset, absl::Status (*check)(const std::string&),
         std::string_view meaning, KeyField (*field)(Job&, PassOptions*)) {
  return {path, KeyKind::kText, default_value, default_words, 0,    0,
          {},   unset,          check,         meaning,       field};
}

Key OneOf(std::string_view path, std::string_view default_value, Names choices,
          std::string_view meaning, KeyField (*field)(Job&, PassOptions*)) {
  return {path, KeyKind::kChoice, default_value, "", 0, 0, choices, "", nullptr, meaning, field};
}

Key Whole(std::string_view path, std::string_view default_value, int64_t least, int64_t most,
          std::string_view meaning, KeyField (*field)(Job&, PassOptions*)) {
  return {path, KeyKind::kWhole, default_value, "", least, most, {}, "", nullptr, meaning, field};
}

Key Plain(std::string_view path, KeyKind kind, std::string_view default_value,
          std::string_view default_words, std::string_view meaning,
          KeyField (*field)(Job&, PassOptions*)) {
  return {path, kind, default_value, default_words, 0, 0, {}, "", nullptr, meaning, field};
}

std::vector<Key> MakeTable() {
  using Pass = PassOptions;
  std::vector<Key> keys = {
      Text("job", "", "the job file's name without its suffix", "", CheckJobName,
           "Names the job and, by default, its run folder.",
           [](Job& job, Pass*) -> KeyField { return &job.job; }),
      Text("run_folder", "", "`runs/` and the job's name", "", CheckNotEmpty,
           "Where the results go; relative to the working directory.",
           [](Job& job, Pass*) -> KeyField { return &job.run_folder; }),

      Plain("corpus.files", KeyKind::kTexts, "", "none, must be set",
            "Paths and globs, in order; `-` is standard input; `*.zst` and `*.gz` are read as "
            "they are.",
            [](Job& job, Pass*) -> KeyField { return &job.corpus.files; }),
      OneOf("corpus.layout", "text", kLayouts,
            "What a document is: a file, a line, a run of non-blank lines, or a JSON object on a "
            "line.",
            [](Job& job, Pass*) -> KeyField { return Choice(job.corpus.layout); }),
      Plain("corpus.fields", KeyKind::kTexts, "[text]", "",
            "`json_lines`: which string fields are text, in order.",
            [](Job& job, Pass*) -> KeyField { return &job.corpus.fields; }),
      Text("corpus.id", "\"\"", "empty: the document's number in the corpus, from 1", "", nullptr,
           "`json_lines`: which field names the document.",
           [](Job& job, Pass*) -> KeyField { return &job.corpus.id; }),
      OneOf("corpus.bad_lines", "stop", kBadLines,
            "`json_lines`: at a line that is not a JSON object, stop the job, or keep the line as "
            "it is and count it.",
            [](Job& job, Pass*) -> KeyField { return Choice(job.corpus.bad_lines); }),

      OneOf("words.fold", "compatibility_case", kFolds,
            "Which spellings are one word: canonically equal ones; those that differ in case as "
            "well; those that differ in width, ligatures and the like as well.",
            [](Job& job, Pass*) -> KeyField { return Choice(job.words.fold); }),
      Plain("words.strip_accents", KeyKind::kTruth, "false", "",
            "Whether spellings that differ in accents only are one word.",
            [](Job& job, Pass*) -> KeyField { return &job.words.strip_accents; }),
      OneOf("words.hyphens", "join", kHyphens,
            "Whether words on the two sides of a hyphen are neighbours or kept apart.",
            [](Job& job, Pass*) -> KeyField { return Choice(job.words.hyphens); }),
      OneOf("words.numbers", "not_first", kNumbers, "Where in a phrase a number may stand.",
            [](Job& job, Pass*) -> KeyField { return Choice(job.words.numbers); }),
      Text("words.function_words", "none", "", "", CheckNotEmpty,
           "Words that may stand inside a phrase but not at its ends: `none`, a built-in list "
           "(`english`, `french`, `german`, `spanish`), or the path of a file with one word a "
           "line, where `#` starts a comment.",
           [](Job& job, Pass*) -> KeyField { return &job.words.function_words; }),
      Whole("words.bridge", "2", 0, 4,
            "How many function words may stand inside a phrase between two others.",
            [](Job& job, Pass*) -> KeyField { return &job.words.bridge; }),

      Text("passes[].name", "pass", "", "", CheckNotEmpty, "Names the pass in the audit log.",
           [](Job&, Pass* pass) -> KeyField { return &pass->name; }),
      Whole("passes[].repeat", "1", 1, 99,
            "Up to how many times the pass is done; it stops early when nothing is accepted.",
            [](Job&, Pass* pass) -> KeyField { return &pass->repeat; }),
      Plain("passes[].rank_by", KeyKind::kMeasure, "pmi", "",
            "Which measure orders competing phrases.",
            [](Job&, Pass* pass) -> KeyField { return &pass->rank_by; }),
      OneOf("passes[].margins", "slots", kMargins,
            "What the expected frequency of an unbridged pair is computed from: slots, or single "
            "words as in textbook PMI.",
            [](Job&, Pass* pass) -> KeyField { return Choice(pass->margins); }),
      Plain("passes[].accept", KeyKind::kGates, "{occurrences: 5}", "",
            "Gates, all of which a phrase must pass; each names a count or a measure and the least "
            "value.",
            [](Job&, Pass* pass) -> KeyField { return &pass->accept; }),
      Plain("passes[].take", KeyKind::kCount, "all", "",
            "At most so many new phrases in the pass, the best.",
            [](Job&, Pass* pass) -> KeyField { return &pass->take; }),

      Whole("phrases.longest", "6", 2, 64, "The most words in a phrase.",
            [](Job& job, Pass*) -> KeyField { return &job.phrases.longest; }),
      Text("phrases.rulings", "none", "", "none", nullptr,
           "The path of a file of phrases that are always or never made, or `none`.",
           [](Job& job, Pass*) -> KeyField { return &job.phrases.rulings; }),

      OneOf("deliver.corpus", "source", kCorpusForms,
            "The rewritten corpus: the source with phrases joined, plain words a document a line, "
            "or none.",
            [](Job& job, Pass*) -> KeyField { return Choice(job.deliver.corpus); }),
      Text("deliver.joiner", "\"_\"", "", "", CheckJoiner,
           "What stands between the words of a phrase in the rewritten corpus.",
           [](Job& job, Pass*) -> KeyField { return &job.deliver.joiner; }),
      OneOf("deliver.compress", "none", kCompress, "How the rewritten corpus is compressed.",
            [](Job& job, Pass*) -> KeyField { return Choice(job.deliver.compress); }),
      Plain("deliver.spans", KeyKind::kTruth, "false", "",
            "Whether the places of the phrases are written as well.",
            [](Job& job, Pass*) -> KeyField { return &job.deliver.spans; }),
      Plain("deliver.report", KeyKind::kTruth, "true", "", "Whether the page is made.",
            [](Job& job, Pass*) -> KeyField { return &job.deliver.report; }),

      {"limits.memory",
       KeyKind::kSize,
       "2 GiB",
       "",
       kLeastMemory,
       0,
       {},
       "",
       nullptr,
       "Working memory to stay within; the rest is on disk.",
       [](Job& job, Pass*) -> KeyField { return &job.limits.memory; }},
      Whole("limits.threads", "0", 0, 256, "Threads to use; 0 is one for each processor.",
            [](Job& job, Pass*) -> KeyField { return &job.limits.threads; }),

      Plain("debug.recount", KeyKind::kTruth, "false", "",
            "Whether every pass is also counted from scratch and compared; slow.",
            [](Job& job, Pass*) -> KeyField { return &job.debug.recount; }),
  };
  return keys;
}

}  // namespace

absl::Span<const Key> JobKeys() {
  static const auto& keys = *new std::vector<Key>(MakeTable());
  return keys;
}

std::string Wanted(const Key& key) {
  switch (key.kind) {
    case KeyKind::kWhole:
      return Concat("a whole number from ", key.least, " to ", key.most);
    case KeyKind::kCount:
      return "a whole number of at least 1, or 'all'";
    case KeyKind::kSize:
      return Concat("a size of at least ", FormatBytes(static_cast<uint64_t>(key.least)),
                    ", such as 2 GiB");
    case KeyKind::kTruth:
      return "true or false";
    case KeyKind::kChoice:
      return Concat("one of ", Join(key.choices, ", "));
    case KeyKind::kMeasure: {
      const Names measures = kQuantityNames;
      return Concat("a measure: ",
                    Join(measures.subspan(static_cast<size_t>(Quantity::kPmi)), ", "));
    }
    case KeyKind::kText:
      if (key.check != nullptr) {
        const absl::Status empty = key.check("");
        if (!empty.ok()) return std::string(empty.message());
      }
      return "a text";
    case KeyKind::kTexts:
      return "a list of texts, such as [first, second]";
    case KeyKind::kGates:
      return "a map of gates, such as {occurrences: 8, pmi: 4.5}";
  }
  return "";
}

}  // namespace phraseweld
