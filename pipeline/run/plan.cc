#include "run/plan.h"

#include <algorithm>

#include "base/entry.h"
#include "base/status.h"

namespace phraseweld {
namespace {

// As measured on text of several kinds; see DEVELOPERS.md, "Memory".
constexpr double kBytesPerEntry = 5.2;  // of text, for a word or a mark
constexpr double kCompression = 4.0;    // of .zst and .gz inputs
// Bytes of memory for a byte of text, with everything in memory: more than any language has taken,
// since this decides what a run keeps in memory before it knows the text.
constexpr double kMemoryPerTextByte = 6.0;

constexpr uint64_t kBase = uint64_t{14} << 20;     // program, ICU's tables
constexpr uint64_t kLaneBase = uint64_t{7} << 20;  // caches, blocks under way
constexpr double kWordBytes = 60;                  // a different word: its form, its places
constexpr double kWordLaneBytes = 8;               // its counters in each lane, and two more
constexpr double kMinedPhraseBytes = 300;          // a phrase while passes go on
constexpr double kPhraseBytes = 900;               // in the end: records, text, spellings, places
constexpr double kSlotBytes = 8;                   // a slot that waits to be counted
constexpr double kSlotTypeBytes = 12;              // a counted slot type
constexpr double kJoinBytes = 68;                  // a merge: where it was found, what it changed
constexpr double kDiskWorkingBytes = 8 << 20;      // what counting on disk really holds
constexpr double kPagePhraseBytes = 1900;          // a phrase while the report is made
constexpr double kSlotScratch = 10, kSlotTypeScratch = 38;  // the same on disk

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
  const auto in_memory = kBase + kLaneBase * static_cast<uint64_t>(lanes) +
                         static_cast<uint64_t>(text * kMemoryPerTextByte);
  // What an archive holds is only known once it has been read, so its stream goes to disk unless
  // there is ample room.
  plan.on_disk = controls.force_disk || in_memory > (unknown ? limit / 2 : limit);
  plan.memory_bytes = std::min(in_memory, limit);
  if (plan.on_disk) {
    plan.working_bytes = std::max<uint64_t>(limit / 4, uint64_t{4} << 20);
    plan.found_bytes = plan.working_bytes / 4;
    plan.scratch_bytes = plan.entries * (sizeof(Entry) + 9);
  }
  if (job.deliver.corpus != CorpusForm::kNone) plan.output_bytes = plan.text_bytes;
  plan.chunk_entries = plan.on_disk ? uint64_t{1} << 16 : uint64_t{1} << 18;
  if (controls.force_scans) plan.found_bytes = 0;
  if (controls.block_bytes > 0) plan.block_bytes = controls.block_bytes;
  if (controls.chunk_entries > 0) plan.chunk_entries = controls.chunk_entries;
  return plan;
}

uint64_t MemoryOf(const RunAmounts& amounts, const MemoryPlan& plan, int lanes) {
  const auto bytes = [](uint64_t count, double each) { return static_cast<double>(count) * each; };
  const double base = static_cast<double>(kBase + kLaneBase * static_cast<uint64_t>(lanes));
  const double words = bytes(amounts.words, kWordBytes + kWordLaneBytes * (lanes + 2));
  const double delivering = bytes(amounts.phrases, kPhraseBytes);
  double most = delivering + (plan.on_disk ? kDiskWorkingBytes : 0);
  if (!plan.on_disk) {
    const double stream = bytes(amounts.entries, sizeof(Entry));
    const double counting =
        bytes(amounts.slot_types, kSlotTypeBytes) +
        std::max(bytes(amounts.slots, kSlotBytes), bytes(amounts.most_joined, kJoinBytes)) +
        bytes(amounts.phrases, kMinedPhraseBytes);
    most = stream + std::max(counting, delivering);
  }
  const auto mining = static_cast<uint64_t>(base + words + most);
  // The report is made when the rest is gone.
  return amounts.page_bytes == 0 ? mining : std::max(mining, PageMemory(amounts.phrases, lanes));
}

uint64_t PageMemory(uint64_t phrases, int lanes) {
  return kBase + kLaneBase * static_cast<uint64_t>(lanes) +
         static_cast<uint64_t>(static_cast<double>(phrases) * kPagePhraseBytes);
}

uint64_t ScratchOf(const RunAmounts& amounts, const MemoryPlan& plan) {
  if (!plan.on_disk) return 0;
  return amounts.entries * sizeof(Entry) +
         static_cast<uint64_t>(static_cast<double>(amounts.slots) * kSlotScratch +
                               static_cast<double>(amounts.slot_types) * kSlotTypeScratch);
}

}  // namespace phraseweld
