// How fast text becomes words, and words ids, on one thread. Reads the file that the environment
// variable PHRASEWELD_BENCHMARK_TEXT names; without it, makes 16 MiB of English-like text.

#include <benchmark/benchmark.h>

#include <cmath>
#include <cstdlib>
#include <fstream>
#include <iterator>
#include <random>
#include <string>
#include <vector>

#include "words/splitter.h"
#include "words/vocabulary.h"
#include "words/word_stream.h"

namespace phraseweld {
namespace {

std::string MadeText() {
  constexpr size_t kBytes = 16u << 20;
  constexpr double kForms = 200000;
  std::mt19937_64 random(1);
  std::string text;
  while (text.size() < kBytes) {
    // Zipf: the logarithm of the rank is uniform. Common words are short.
    const double uniform = static_cast<double>(random() % 1000000) / 1000000.0;
    auto rank = static_cast<uint64_t>(std::pow(kForms, uniform)) * 37;
    for (; rank > 0; rank /= 6) text += static_cast<char>('a' + rank % 26);
    text += random() % 8 == 0 ? ". " : random() % 12 == 0 ? "\n" : " ";
  }
  return text;
}

const std::string& Text() {
  static const std::string& text = *new std::string([] {
    const char* path = std::getenv("PHRASEWELD_BENCHMARK_TEXT");
    if (path == nullptr) return MadeText();
    std::ifstream file(path, std::ios::binary);
    return std::string(std::istreambuf_iterator<char>(file), {});
  }());
  return text;
}

void Report(size_t words, benchmark::State* state) {
  const auto rounds = static_cast<double>(state->iterations());
  state->SetBytesProcessed(static_cast<int64_t>(Text().size()) * state->iterations());
  state->counters["time/word"] =
      benchmark::Counter(static_cast<double>(words) * rounds,
                         benchmark::Counter::kIsRate | benchmark::Counter::kInvert);
}

void SplitAtLevel(benchmark::State& state) {
  const auto level = static_cast<ScanLevel>(state.range(0));
  const std::unique_ptr<WordStream> stream = MakeFastStream({}, level);
  std::vector<WordSpan> buffer(2048);
  size_t words = 0;
  for (auto round : state) {
    (void)round;
    words = 0;
    stream->Start(Text());
    while (const size_t count = stream->Next(buffer.data(), buffer.size())) words += count;
  }
  Report(words, &state);
}

void Split(benchmark::State& state, SplitPath path) {
  WordSplitter splitter({}, path);
  std::vector<WordSpan> spans;
  for (auto round : state) {
    (void)round;
    splitter.Split(Text(), &spans);
  }
  Report(spans.size(), &state);
}

// A fresh vocabulary each time, so that the first sight of each form is in the figure.
void Encode(benchmark::State& state) {
  std::vector<Entry> entries;
  size_t words = 0;
  for (auto round : state) {
    (void)round;
    state.PauseTiming();
    Vocabulary vocabulary;
    Encoder encoder({}, &vocabulary);
    entries.clear();
    state.ResumeTiming();
    encoder.Encode(Text(), false, 0, &entries);
    state.PauseTiming();
    words = 0;
    for (const Entry entry : entries) words += IsToken(entry) ? 1 : 0;
    state.ResumeTiming();
  }
  Report(words, &state);
}

void Register() {
  for (const ScanLevel level : AvailableScanLevels()) {
    benchmark::RegisterBenchmark("SplitAtLevel", SplitAtLevel)
        ->Arg(static_cast<int64_t>(level))
        ->Unit(benchmark::kMillisecond);
  }
  benchmark::RegisterBenchmark("Split/fast", Split, SplitPath::kFast)
      ->Unit(benchmark::kMillisecond);
  benchmark::RegisterBenchmark("Split/exact", Split, SplitPath::kExact)
      ->Unit(benchmark::kMillisecond);
  benchmark::RegisterBenchmark("Encode", Encode)->Unit(benchmark::kMillisecond);
}

}  // namespace
}  // namespace phraseweld

int main(int argc, char** argv) {
  benchmark::Initialize(&argc, argv);
  if (benchmark::ReportUnrecognizedArguments(argc, argv)) return 1;
  phraseweld::Text();  // made or read before any clock runs
  phraseweld::Register();
  benchmark::RunSpecifiedBenchmarks();
  benchmark::Shutdown();
  return 0;
}
