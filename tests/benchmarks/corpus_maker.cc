// Makes invented text of any size and lists the phrases that it planted in it.

#include <cerrno>
#include <charconv>
#include <cstdint>
#include <cstdio>
#include <cstdlib>
#include <cstring>
#include <string>
#include <string_view>

#include "base/strings.h"
#include "base/units.h"
#include "benchmarks/text_maker.h"

namespace phraseweld::benchmarks {
namespace {

constexpr const char* kUsage =
    R"(Makes invented text with planted phrases; the same options give the same bytes.

  corpus_maker --bytes=10GiB --text=corpus.txt --planted=planted.jsonl

  --bytes=SIZE      at least so much text, up to the end of a document (16 MiB)
  --text=FILE       where the text goes (standard output)
  --planted=FILE    where the list of planted phrases goes: a first line with the totals, then a
                    JSON object a phrase: its words, kind, times, documents, and how often its
                    first word stands alone (none)
  --layout=LAYOUT   lines: a document a line; paragraphs: lines of 72 columns, a blank line behind
                    a document (lines)
  --phrases=N       how many different phrases are planted (2000)
  --seed=N          another seed, another text (1)
)";

struct Options {
  uint64_t bytes = uint64_t{16} << 20;
  std::string text;
  std::string planted;
  TextMaker::Layout layout = TextMaker::Layout::kLines;
  uint64_t phrases = 2000;
  uint64_t seed = 1;
};

// Takes the prefix off, if it is there.
bool TakePrefix(std::string_view& text, std::string_view prefix) {
  if (text.substr(0, prefix.size()) != prefix) return false;
  text.remove_prefix(prefix.size());
  return true;
}

bool ReadNumber(std::string_view text, uint64_t& number) {
  const char* const end = text.data() + text.size();
  const auto [stop, error] = std::from_chars(text.data(), end, number);
  return error == std::errc() && stop == end;
}

// Whether the argument was understood.
bool ReadArgument(std::string_view argument, Options& options) {
  if (TakePrefix(argument, "--text=")) {
    options.text = std::string(argument);
    return true;
  }
  if (TakePrefix(argument, "--planted=")) {
    options.planted = std::string(argument);
    return true;
  }
  if (TakePrefix(argument, "--layout=")) {
    options.layout =
        argument == "lines" ? TextMaker::Layout::kLines : TextMaker::Layout::kParagraphs;
    return argument == "lines" || argument == "paragraphs";
  }
  if (TakePrefix(argument, "--bytes=")) {
    const auto bytes = ParseBytes(argument);
    if (bytes.ok()) options.bytes = *bytes;
    return bytes.ok();
  }
  if (TakePrefix(argument, "--phrases=")) return ReadNumber(argument, options.phrases);
  return TakePrefix(argument, "--seed=") && ReadNumber(argument, options.seed);
}

int Fail(const std::string& path) {
  std::fprintf(stderr, "corpus_maker: %s: %s\n", path.c_str(), std::strerror(errno));
  return EXIT_FAILURE;
}

bool WriteAll(std::FILE* file, std::string_view text) {
  return std::fwrite(text.data(), 1, text.size(), file) == text.size();
}

std::string ListPlanted(const TextMaker& maker, const Options& options, uint64_t bytes) {
  std::string list =
      Concat("{\"bytes\":", bytes, ",\"words\":", maker.words(),
             ",\"documents\":", maker.documents(), ",\"seed\":", options.seed, "}\n");
  for (const PlantedPhrase& phrase : maker.planted()) {
    list +=
        Concat("{\"phrase\":\"", Join(phrase.words, " "), "\",\"kind\":\"", KindName(phrase.kind),
               "\",\"words\":", phrase.words.size(), ",\"times\":", phrase.times,
               ",\"documents\":", phrase.documents, ",\"singles\":", phrase.singles, "}\n");
  }
  return list;
}

int Run(const Options& options) {
  std::FILE* text = stdout;
  if (!options.text.empty()) text = std::fopen(options.text.c_str(), "wb");
  if (text == nullptr) return Fail(options.text);
  TextMaker maker(options.seed, options.layout, options.phrases);
  uint64_t bytes = 0;
  while (bytes < options.bytes) {
    const std::string_view document = maker.NextDocument();
    if (!WriteAll(text, document)) return Fail(options.text);
    bytes += document.size();
  }
  if (std::fclose(text) != 0) return Fail(options.text);
  if (options.planted.empty()) return EXIT_SUCCESS;
  std::FILE* planted = std::fopen(options.planted.c_str(), "wb");
  if (planted == nullptr) return Fail(options.planted);
  const bool written = WriteAll(planted, ListPlanted(maker, options, bytes));
  if (std::fclose(planted) != 0 || !written) return Fail(options.planted);
  return EXIT_SUCCESS;
}

}  // namespace
}  // namespace phraseweld::benchmarks

int main(int argc, char** argv) {
  phraseweld::benchmarks::Options options;
  for (int i = 1; i < argc; ++i) {
    if (std::string_view(argv[i]) == "--help") {
      std::fputs(phraseweld::benchmarks::kUsage, stdout);
      return EXIT_SUCCESS;
    }
    if (!phraseweld::benchmarks::ReadArgument(argv[i], options)) {
      std::fprintf(stderr, "corpus_maker: cannot use \"%s\"; see corpus_maker --help\n", argv[i]);
      return 2;
    }
  }
  return phraseweld::benchmarks::Run(options);
}
