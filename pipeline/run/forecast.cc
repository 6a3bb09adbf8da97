#include "run/forecast.h"

#include <algorithm>
#include <atomic>
#include <cmath>
#include <map>
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

// The sample of each input, and how large all text is.
struct Sample {
  std::vector<std::string> texts;  // by input; empty where none of it was taken
  uint64_t bytes = 0;
  double all_bytes = 0;
};

// Takes every range, or with `step` 2 every second one.
absl::StatusOr<Sample> TakeSample(const std::vector<InputFile>& inputs,
                                  const std::vector<uint64_t>& sizes, uint64_t step,
                                  FileSystem& files) {
  uint64_t stored_bytes = 0;
  for (uint64_t size : sizes) stored_bytes += size;
  const uint64_t ranges = std::max<uint64_t>(1, std::min(kSampleBytes, stored_bytes) / kRangeBytes);
  // Ranges begin so far apart in the inputs one after another; touching where all is taken.
  const uint64_t stride = (stored_bytes + ranges - 1) / ranges;
  const uint64_t length = stored_bytes <= kSampleBytes ? stride : kRangeBytes;
  Sample sample;
  sample.texts.resize(inputs.size());
  uint64_t input_begin = 0;
  for (size_t i = 0; i < inputs.size(); input_begin += sizes[i], ++i) {
    const uint64_t input_end = input_begin + sizes[i];
    std::string& text = sample.texts[i];
    uint64_t packed = 0;
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
      }
    }
    if (packed > 0) {
      uint64_t stored = 0;
      const uint64_t most = packed == sizes[i] ? kNoLimit : packed;
      PW_RETURN_IF_ERROR(AppendFront(files, inputs[i].path, most, &text, &stored));
      sample.all_bytes += static_cast<double>(text.size()) * static_cast<double>(sizes[i]) /
                          static_cast<double>(std::max<uint64_t>(stored, 1));
    } else {
      sample.all_bytes += static_cast<double>(sizes[i]) * (IsPacked(inputs[i].path) ? 4 : 1);
    }
    sample.bytes += text.size();
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

absl::StatusOr<Amounts> TrialRun(Job job, const Sample& sample, const std::string& folder,
                                 FileSystem& files, const std::atomic<bool>* stop) {
  PW_RETURN_IF_ERROR(files.MakeDirectories(folder));
  job.run_folder = folder + "/run";
  job.limits.memory = kNoLimit;
  job.debug.recount = false;
  job.corpus.files.clear();
  job.corpus.bad_lines = BadLines::kKeep;
  for (size_t i = 0; i < sample.texts.size(); ++i) {
    if (sample.texts[i].empty()) continue;
    const std::string path = Concat(folder, "/", i, ".txt");
    PW_ASSIGN_OR_RETURN(const std::unique_ptr<WriteFile> file, files.CreateWrite(path));
    PW_RETURN_IF_ERROR(file->Append(sample.texts[i]));
    PW_RETURN_IF_ERROR(file->Close());
    job.corpus.files.push_back(path);
  }
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

}  // namespace

absl::StatusOr<std::optional<Forecast>> ForecastRun(const Job& job,
                                                    const std::vector<InputFile>& inputs,
                                                    const std::vector<uint64_t>& sizes,
                                                    const MemoryPlan& plan, int lanes,
                                                    FileSystem& files, const Observer& observer) {
  for (const InputFile& input : inputs) {
    if (input.path == "-") return std::nullopt;
  }
  PW_ASSIGN_OR_RETURN(const Sample whole_sample, TakeSample(inputs, sizes, 1, files));
  PW_ASSIGN_OR_RETURN(const Sample half_sample, TakeSample(inputs, sizes, 2, files));
  if (whole_sample.bytes == 0) return std::nullopt;
  PassingFolder passing(files);
  PW_ASSIGN_OR_RETURN(const std::string folder, passing.Path());
  PW_ASSIGN_OR_RETURN(const Amounts whole,
                      TrialRun(job, whole_sample, folder + "/whole", files, observer.stop));
  Amounts all = whole;
  const double times = whole_sample.all_bytes / static_cast<double>(whole_sample.bytes);
  if (half_sample.bytes > 0 && half_sample.bytes < whole_sample.bytes && times > 1.01) {
    PW_ASSIGN_OR_RETURN(const Amounts half,
                        TrialRun(job, half_sample, folder + "/half", files, observer.stop));
    all = Extrapolate(
        half, whole,
        static_cast<double>(whole_sample.bytes) / static_cast<double>(half_sample.bytes), times);
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
