#include "run/forecast.h"

#include <algorithm>
#include <atomic>
#include <cmath>
#include <map>
#include <numeric>
#include <string>

#include "base/status.h"
#include "base/strings.h"
#include "files/streams.h"
#include "run/observer.h"
#include "run/passing_folder.h"
#include "run/run.h"

namespace phraseweld {
namespace {

constexpr uint64_t kSampleBytes = uint64_t{16} << 20;
constexpr uint64_t kRangeBytes = uint64_t{128} << 10;
constexpr uint64_t kNoLimit = uint64_t{1} << 40;
// Of text more than so many times as large as the sample, words are counted in an eighth, but in no
// more than this.
constexpr double kFarTimes = 8;
constexpr uint64_t kMostWordSample = uint64_t{256} << 20;

bool IsPacked(std::string_view path) { return path.ends_with(".zst") || path.ends_with(".gz"); }

// Whole lines from about `begin` to about `end` of a file that is stored as it is.
absl::Status AppendRange(FileSystem& files, const std::string& path, uint64_t begin, uint64_t end,
                         uint64_t size, std::string* text) {
  PW_ASSIGN_OR_RETURN(const std::unique_ptr<ReadFile> file, files.OpenRead(path));
  if (begin > 0) PW_RETURN_IF_ERROR(file->Seek(begin));
  std::string range(static_cast<size_t>(end - begin), '\0');
  size_t filled = 0;
  while (filled < range.size()) {
    PW_ASSIGN_OR_RETURN(const size_t got, file->Read(range.data() + filled, range.size() - filled));
    if (got == 0) break;
    filled += got;
  }
  range.resize(filled);
  const size_t first = begin == 0 ? 0 : range.find('\n') + 1;  // npos + 1 is 0: one long line
  const size_t last = end >= size ? std::string::npos : range.rfind('\n');
  if (last != std::string::npos && last + 1 > first) range.resize(last + 1);
  text->append(range, first);
  return absl::OkStatus();
}

// The first bytes of a compressed file's text, and how many stored bytes they took.
absl::Status AppendFront(FileSystem& files, const std::string& path, uint64_t most,
                         std::string* text, uint64_t* stored) {
  PW_ASSIGN_OR_RETURN(const std::unique_ptr<InputStream> in, InputStream::Open(files, path));
  std::string buffer(size_t{64} << 10, '\0');
  const size_t before = text->size();
  bool whole = false;
  while (text->size() - before < most && !whole) {
    PW_ASSIGN_OR_RETURN(const size_t got, in->Read(buffer.data(), buffer.size()));
    text->append(buffer, 0, got);
    whole = got == 0;
  }
  *stored = in->stored_bytes();
  const size_t last = text->rfind('\n');
  if (!whole && last != std::string::npos && last >= before) text->resize(last + 1);
  return absl::OkStatus();
}

// A sample of the inputs as files, and how large all text is.
struct Sample {
  std::vector<std::string> paths;
  uint64_t bytes = 0;
  double all_bytes = 0;
};

// Takes some `wanted` bytes of text in ranges spread over the inputs, or with `step` 2 every second
// range of those, and writes them to files in `folder`.
absl::StatusOr<Sample> TakeSample(const std::vector<InputFile>& inputs,
                                  const std::vector<uint64_t>& sizes, uint64_t wanted,
                                  uint64_t step, const std::string& folder, FileSystem& files) {
  PW_RETURN_IF_ERROR(files.MakeDirectories(folder));
  uint64_t stored_bytes = 0;
  for (uint64_t size : sizes) stored_bytes += size;
  const uint64_t ranges = std::max<uint64_t>(1, std::min(wanted, stored_bytes) / kRangeBytes);
  // Ranges begin so far apart in the inputs one after another; touching where all is taken.
  const uint64_t stride = (stored_bytes + ranges - 1) / ranges;
  const uint64_t length = stored_bytes <= wanted ? stride : kRangeBytes;
  Sample sample;
  uint64_t input_begin = 0;
  for (size_t i = 0; i < inputs.size(); input_begin += sizes[i], ++i) {
    const uint64_t input_end = input_begin + sizes[i];
    std::unique_ptr<WriteFile> out;
    std::string text;
    uint64_t packed = 0, taken = 0;
    const auto write = [&]() -> absl::Status {
      if (text.empty()) return absl::OkStatus();
      if (out == nullptr) {
        sample.paths.push_back(Concat(folder, "/", i, ".txt"));
        PW_ASSIGN_OR_RETURN(out, files.CreateWrite(sample.paths.back()));
      }
      taken += text.size();
      PW_RETURN_IF_ERROR(out->Append(text));
      text.clear();
      return absl::OkStatus();
    };
    for (uint64_t r = input_begin / stride; r < ranges && r * stride < input_end; ++r) {
      if (r % step != 0) continue;
      const uint64_t begin = std::max(input_begin, r * stride);
      const uint64_t end = std::min(input_end, r * stride + length);
      if (begin >= end) continue;
      if (IsPacked(inputs[i].path)) {
        packed += end - begin;
      } else {
        PW_RETURN_IF_ERROR(AppendRange(files, inputs[i].path, begin - input_begin,
                                       end - input_begin, sizes[i], &text));
        PW_RETURN_IF_ERROR(write());
      }
    }
    if (packed > 0) {
      uint64_t stored = 0;
      const uint64_t most = packed == sizes[i] ? kNoLimit : packed;
      PW_RETURN_IF_ERROR(AppendFront(files, inputs[i].path, most, &text, &stored));
      sample.all_bytes += static_cast<double>(text.size()) * static_cast<double>(sizes[i]) /
                          static_cast<double>(std::max<uint64_t>(stored, 1));
      PW_RETURN_IF_ERROR(write());
    } else {
      sample.all_bytes += static_cast<double>(sizes[i]) * (IsPacked(inputs[i].path) ? 4 : 1);
    }
    sample.bytes += taken;
    if (out != nullptr) PW_RETURN_IF_ERROR(out->Close());
  }
  return sample;
}

// What grows with a corpus, by name.
using Amounts = std::map<std::string, double>;

// The kind of a file of the run folder: files of one kind grow alike.
std::string KindOf(std::string_view path) {
  if (path.ends_with(".joints.zst")) return "joints";
  return std::string(path.substr(0, path.find('/')));
}

absl::StatusOr<Amounts> TrialRun(Job job, const Sample& sample, const std::string& run_folder,
                                 FileSystem& files, const std::atomic<bool>* stop) {
  job.run_folder = run_folder;
  job.debug.recount = false;
  job.corpus.files = sample.paths;
  job.corpus.bad_lines = BadLines::kKeep;
  Observer quiet;
  quiet.stop = stop;
  PW_ASSIGN_OR_RETURN(const RunSummary run, RunJob(job, RunControls{}, files, quiet));
  Amounts amounts;
  amounts["entries"] = static_cast<double>(run.amounts.entries);
  amounts["words"] = static_cast<double>(run.amounts.words);
  amounts["slots"] = static_cast<double>(run.amounts.slots);
  amounts["slot types"] = static_cast<double>(run.amounts.slot_types);
  amounts["joined"] = static_cast<double>(run.amounts.most_joined);
  amounts["phrases"] = static_cast<double>(run.amounts.phrases);
  for (const auto& [path, bytes] : run.outputs) {
    amounts["file " + KindOf(path)] += static_cast<double>(bytes);
  }
  return amounts;
}

// From the amounts of half a sample and of the whole one to those of a corpus `times` as large as
// the whole one. Growth is taken to go by a power of the size, as that of vocabularies does.
Amounts Extrapolate(const Amounts& half, const Amounts& whole, double halves, double times) {
  Amounts all;
  for (const auto& [name, amount] : whole) {
    const auto small = half.find(name);
    double power = 1;
    if (small != half.end() && small->second > 0 && amount > 0) {
      power = std::log(amount / small->second) / std::log(halves);
    }
    all[name] = amount * std::pow(times, std::clamp(power, 0.2, 1.2));
  }
  return all;
}

// How many different words there are in so much text.
struct WordCount {
  double bytes = 0;
  double words = 0;
};

// The words of `bytes` of text by those of three samples of growing size. A vocabulary grows by a
// power of the size that itself changes slowly with the size: the curve through the three in
// logarithms, whose bend is held within what text of some kind shows.
double ExtrapolateWords(const WordCount& small, const WordCount& middle, const WordCount& large,
                        double bytes) {
  const auto power = [](const WordCount& a, const WordCount& b) {
    return std::log(b.words / a.words) / std::log(b.bytes / a.bytes);
  };
  const double first = power(small, middle), second = power(middle, large);
  // Between the middles of the two stretches, and from there to the middle of the one to come.
  const double known = std::log(large.bytes / small.bytes) / 2;
  const double ahead = std::log(bytes / middle.bytes) / 2;
  const double bend = std::clamp((second - first) / known * ahead, -0.1, 0.1);
  return large.words * std::pow(bytes / large.bytes, std::clamp(second + bend, 0.2, 1.0));
}

// The different words of a sample, which is only read; nothing where that would take more memory
// than the job may.
absl::StatusOr<std::optional<WordCount>> CountWords(Job job, const Sample& sample,
                                                    const std::string& run_folder,
                                                    FileSystem& files,
                                                    const std::atomic<bool>* stop) {
  job.passes.clear();
  job.deliver.corpus = CorpusForm::kNone;
  job.deliver.spans = false;
  job.deliver.report = false;
  auto read = TrialRun(job, sample, run_folder, files, stop);
  if (absl::IsResourceExhausted(read.status())) return std::optional<WordCount>();
  PW_RETURN_IF_ERROR(read.status());
  return std::optional<WordCount>({static_cast<double>(sample.bytes), read->at("words")});
}

}  // namespace

absl::StatusOr<std::optional<Forecast>> ForecastRun(const Job& job,
                                                    const std::vector<InputFile>& inputs,
                                                    const std::vector<uint64_t>& sizes,
                                                    const MemoryPlan& plan, int lanes,
                                                    FileSystem& files, const Observer& observer) {
  for (const InputFile& input : inputs) {
    if (input.path == "-") return std::nullopt;
  }
  PassingFolder passing(files);
  PW_ASSIGN_OR_RETURN(const std::string folder, passing.Path());
  const auto take = [&](uint64_t wanted, uint64_t step, const char* name) {
    return TakeSample(inputs, sizes, wanted, step, Concat(folder, "/", name), files);
  };
  Job trial = job;
  trial.limits.memory = kNoLimit;
  PW_ASSIGN_OR_RETURN(const Sample whole_sample, take(kSampleBytes, 1, "whole"));
  PW_ASSIGN_OR_RETURN(const Sample half_sample, take(kSampleBytes, 2, "half"));
  if (whole_sample.bytes == 0) return std::nullopt;
  PW_ASSIGN_OR_RETURN(const Amounts whole,
                      TrialRun(trial, whole_sample, folder + "/run", files, observer.stop));
  Amounts all = whole;
  const double times = whole_sample.all_bytes / static_cast<double>(whole_sample.bytes);
  if (half_sample.bytes > 0 && half_sample.bytes < whole_sample.bytes && times > 1.01) {
    PW_ASSIGN_OR_RETURN(const Amounts half,
                        TrialRun(trial, half_sample, folder + "/half-run", files, observer.stop));
    const auto half_bytes = static_cast<double>(half_sample.bytes);
    const auto whole_bytes = static_cast<double>(whole_sample.bytes);
    all = Extrapolate(half, whole, whole_bytes / half_bytes, times);
    // A long way on, the last doubling of a small sample says too little of a vocabulary.
    if (times > kFarTimes && half.at("words") > 0) {
      // Of compressed inputs the text may be many times as large as what is stored, and all of it
      // would be taken where so much is wanted as is stored.
      const uint64_t stored = std::accumulate(sizes.begin(), sizes.end(), uint64_t{0});
      const auto wanted = static_cast<uint64_t>(whole_sample.all_bytes / kFarTimes);
      PW_ASSIGN_OR_RETURN(const Sample words_sample,
                          take(std::min({wanted, kMostWordSample, stored / 2}), 1, "words"));
      PW_ASSIGN_OR_RETURN(
          const std::optional<WordCount> far,
          CountWords(job, words_sample, folder + "/words-run", files, observer.stop));
      if (far && far->bytes >= 2 * whole_bytes) {
        all["words"] =
            ExtrapolateWords({half_bytes, half.at("words")}, {whole_bytes, whole.at("words")}, *far,
                             whole_sample.all_bytes);
      }
    }
  }
  Forecast forecast;
  forecast.sampled_bytes = whole_sample.bytes;
  double outputs = 0;
  for (const auto& [name, amount] : all) {
    if (name.starts_with("file ")) outputs += amount;
  }
  forecast.output_bytes = static_cast<uint64_t>(outputs);
  RunAmounts amounts;
  amounts.text_bytes = static_cast<uint64_t>(whole_sample.all_bytes);
  amounts.entries = static_cast<uint64_t>(all["entries"]);
  amounts.words = static_cast<uint64_t>(all["words"]);
  amounts.slots = static_cast<uint64_t>(all["slots"]);
  amounts.slot_types = static_cast<uint64_t>(all["slot types"]);
  amounts.most_joined = static_cast<uint64_t>(all["joined"]);
  amounts.phrases = static_cast<uint64_t>(all["phrases"]);
  amounts.page_bytes = static_cast<uint64_t>(all["file report.html"]);
  forecast.memory_bytes = MemoryOf(amounts, plan, lanes);
  forecast.scratch_bytes = ScratchOf(amounts, plan);
  return forecast;
}

}  // namespace phraseweld
