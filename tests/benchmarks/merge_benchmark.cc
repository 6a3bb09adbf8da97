// Merging on one thread and a made stream, by a scan and from slots that were found before, with
// and without the report of what changed. The time is that of an entry of the stream.

#include <benchmark/benchmark.h>

#include "benchmarks/made_stream.h"
#include "merge/merger.h"

namespace phraseweld {
namespace {

struct Accepted {
  explicit Accepted(size_t most) : slots(Made().CommonSlots(most)) {
    for (size_t i = 0; i < slots.size(); ++i) {
      list.push_back({slots[i], MadeStream::kTypes + static_cast<uint32_t>(i)});
      ranks.push_back(static_cast<uint32_t>(i));
    }
  }
  std::vector<Slot> slots;
  std::vector<AcceptedSlot> list;
  std::vector<uint32_t> ranks;
};

// range(0): accepted types; range(1): whether changes are reported.
template <bool kFound>
void Merge(benchmark::State& state) {
  const Accepted accepted(static_cast<size_t>(state.range(0)));
  const SlotIndex index(accepted.slots.size(), MadeStream::kTypes, Made().rules.codes,
                        [&](size_t i) -> const Slot& { return accepted.slots[i]; });
  const Merger merger(Made().rules, accepted.list, MadeStream::kTypes);
  std::vector<FoundSlot> found;
  ScanListedSlots(
      Made().entries.data(), 0, Made().entries.size(), Made().rules, index,
      [&](uint32_t place, const Slot&, uint64_t left_at, uint64_t right_at) {
        found.push_back({left_at, static_cast<uint32_t>(right_at - left_at), place});
      },
      [](uint64_t) {});
  uint64_t changes = 0;
  OnSlotChange on_change;
  if (state.range(1) != 0) on_change = [&](const Slot&, const Slot&) { ++changes; };
  std::vector<uint64_t> joined(accepted.list.size());
  for (auto round : state) {
    (void)round;
    state.PauseTiming();
    std::vector<Entry> entries = Made().entries;
    state.ResumeTiming();
    if constexpr (kFound) {
      merger.MergeFound(entries.data(), 0, entries.size(), found, accepted.ranks, &joined,
                        on_change);
    } else {
      merger.Merge(index, entries.data(), 0, entries.size(), &joined, on_change);
    }
    benchmark::DoNotOptimize(changes);
  }
  state.counters["time/entry"] = benchmark::Counter(
      static_cast<double>(Made().entries.size()) * static_cast<double>(state.iterations()),
      benchmark::Counter::kIsRate | benchmark::Counter::kInvert);
}
BENCHMARK(Merge<false>)
    ->ArgNames({"types", "changes"})
    ->ArgsProduct({{100, 10000}, {0, 1}})
    ->Unit(benchmark::kMillisecond);
BENCHMARK(Merge<true>)
    ->ArgNames({"types", "changes"})
    ->ArgsProduct({{100, 10000}, {0, 1}})
    ->Unit(benchmark::kMillisecond);

}  // namespace
}  // namespace phraseweld
