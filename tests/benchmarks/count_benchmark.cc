// The loops of a pass that count, on one thread and a made stream: all slots, the slots of a list,
// and the documents of the list. The time is that of an entry of the stream.

#include <benchmark/benchmark.h>

#include "benchmarks/made_stream.h"
#include "count/documents.h"
#include "count/slot_counter.h"

namespace phraseweld {
namespace {

void Report(benchmark::State* state) {
  state->counters["time/entry"] = benchmark::Counter(
      static_cast<double>(Made().entries.size()) * static_cast<double>(state->iterations()),
      benchmark::Counter::kIsRate | benchmark::Counter::kInvert);
}

void CountAllSlots(benchmark::State& state) {
  SerialLanes lanes;
  CounterOptions options;
  options.rules = Made().rules;
  options.types_now = MadeStream::kTypes;
  options.expected_slots = Made().entries.size();
  for (auto round : state) {
    (void)round;
    auto counter = SlotCounter::Create(options);
    (*counter)->AddAll(0, Made().entries.data(), 0, Made().entries.size());
    if (!(*counter)->Update(lanes, MadeStream::kTypes).ok()) state.SkipWithError("no counts");
    benchmark::DoNotOptimize((*counter)->slot_types());
  }
  Report(&state);
}
BENCHMARK(CountAllSlots)->Unit(benchmark::kMillisecond);

SlotIndex IndexOf(const std::vector<Slot>& slots) {
  return SlotIndex(slots.size(), MadeStream::kTypes, Made().rules.codes,
                   [&](size_t i) -> const Slot& { return slots[i]; });
}

void FindListedSlots(benchmark::State& state) {
  const std::vector<Slot> slots = Made().CommonSlots(static_cast<size_t>(state.range(0)));
  const SlotIndex index = IndexOf(slots);
  for (auto round : state) {
    (void)round;
    uint64_t found = 0;
    ScanListedSlots(
        Made().entries.data(), 0, Made().entries.size(), Made().rules, index,
        [&](uint32_t, const Slot&, uint64_t, uint64_t) { ++found; }, [](uint64_t) {});
    benchmark::DoNotOptimize(found);
  }
  Report(&state);
}
BENCHMARK(FindListedSlots)->Arg(100)->Arg(10000)->Arg(100000)->Unit(benchmark::kMillisecond);

void CountDocuments(benchmark::State& state) {
  const std::vector<Slot> slots = Made().CommonSlots(static_cast<size_t>(state.range(0)));
  const SlotIndex index = IndexOf(slots);
  SerialLanes lanes;
  std::vector<Entry> entries = Made().entries;
  StreamView stream;
  stream.entries = entries.data();
  stream.size = entries.size();
  stream.Cut(uint64_t{1} << 18);
  for (auto round : state) {
    (void)round;
    std::vector<std::vector<FoundSlot>> found;
    auto places = CountSlotDocuments(lanes, stream, Made().rules, index, slots.size(), &found);
    benchmark::DoNotOptimize(places->documents.data());
  }
  Report(&state);
}
BENCHMARK(CountDocuments)->Arg(100)->Arg(10000)->Arg(100000)->Unit(benchmark::kMillisecond);

}  // namespace
}  // namespace phraseweld
