#include "run/plan.h"

#include <algorithm>
#include <cmath>

#include "base/status.h"

namespace phraseweld {
namespace {

// Ratios as measured on English manuals and dictionaries; see DEVELOPERS.md, "Memory".
constexpr double kBytesPerEntry = 6.0;     // of text, for a word or a mark
constexpr double kMemoryPerEntry = 9.1;    // stream, counts and their changes, all in memory
constexpr double kScratchPerEntry = 13.0;  // the same on disk
constexpr double kWordBytes = 50;          // a different word: its form and its place in the tables
constexpr double kPhraseBytes = 420;       // a phrase: its records, its text, its place in indexes
constexpr double kCompression = 4.0;       // of .zst and .gz inputs
constexpr uint64_t kBase = uint64_t{40} << 20;  // program, ICU's tables, caches of the lanes

bool EndsWith(const std::string& text, const char* end) {
  const std::string tail(end);
  return text.size() >= tail.size() &&
         text.compare(text.size() - tail.size(), tail.size(), tail) == 0;
}

}  // namespace

absl::StatusOr<std::vector<uint64_t>> InputSizes(FileSystem& files,
                                                 const std::vector<InputFile>& inputs) {
  std::vector<uint64_t> sizes;
  for (const InputFile& input : inputs) {
    if (input.path == "-") {
      sizes.push_back(0);
      continue;
    }
    PW_ASSIGN_OR_RETURN(FileInfo info, files.Stat(input.path));
    sizes.push_back(info.size);
  }
  return sizes;
}

MemoryPlan PlanMemory(const Job& job, const std::vector<InputFile>& inputs,
                      const std::vector<uint64_t>& sizes, int lanes, const RunControls& controls) {
  MemoryPlan plan;
  bool unknown = false;
  for (size_t i = 0; i < inputs.size(); ++i) {
    const bool packed = EndsWith(inputs[i].path, ".zst") || EndsWith(inputs[i].path, ".gz");
    unknown = unknown || packed || inputs[i].path == "-";
    plan.text_bytes +=
        packed ? static_cast<uint64_t>(static_cast<double>(sizes[i]) * kCompression) : sizes[i];
  }
  const double text = static_cast<double>(plan.text_bytes);
  plan.entries = static_cast<uint64_t>(text / kBytesPerEntry);
  plan.exact_size = !unknown;
  const uint64_t limit = job.limits.memory;
  plan.blocks_in_flight = static_cast<size_t>(2 * lanes + 1);
  // A block in flight costs its bytes, its entries or its rewritten text, and its word places:
  // about five times its size. A quarter of the limit goes to all of them.
  const uint64_t block = limit / 4 / (5 * plan.blocks_in_flight);
  plan.block_bytes =
      static_cast<size_t>(std::clamp<uint64_t>(block, uint64_t{64} << 10, uint64_t{1} << 20));
  const uint64_t blocks = 5 * plan.blocks_in_flight * plan.block_bytes;
  // Different words by Heaps' law; phrases go down as the gate on occurrences goes up.
  const double entries = static_cast<double>(plan.entries);
  const double words = 0.75 * std::pow(entries, 0.8);
  double occurrences = 1;
  for (const Gate& gate : job.passes.front().accept) {
    if (gate.quantity == Quantity::kOccurrences) occurrences = gate.least;
  }
  const double phrases = entries / 25 / std::max(occurrences, 1.0);
  const auto always =
      kBase + blocks +
      static_cast<uint64_t>(words * (kWordBytes + 8.0 * (lanes + 2)) + phrases * kPhraseBytes);
  const auto in_memory = always + static_cast<uint64_t>(entries * kMemoryPerEntry);
  // What an archive holds is only known once it has been read, so its stream goes to disk unless
  // there is ample room.
  plan.on_disk = controls.force_disk || in_memory > (unknown ? limit / 2 : limit);
  plan.memory_bytes = plan.on_disk ? std::min(always + limit / 16, limit) : in_memory;
  if (plan.on_disk) {
    plan.working_bytes = std::max<uint64_t>(limit / 4, uint64_t{4} << 20);
    plan.found_bytes = plan.working_bytes / 4;
    plan.scratch_bytes = static_cast<uint64_t>(entries * kScratchPerEntry);
  }
  if (job.deliver.corpus != CorpusForm::kNone) plan.output_bytes = plan.text_bytes;
  plan.chunk_entries = plan.on_disk ? uint64_t{1} << 16 : uint64_t{1} << 18;
  if (controls.force_scans) plan.found_bytes = 0;
  if (controls.block_bytes > 0) plan.block_bytes = controls.block_bytes;
  if (controls.chunk_entries > 0) plan.chunk_entries = controls.chunk_entries;
  return plan;
}

}  // namespace phraseweld
