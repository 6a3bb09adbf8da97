#include "count/slot_counter.h"

#include <algorithm>
#include <atomic>
#include <bit>
#include <utility>

#include "absl/container/flat_hash_map.h"
#include "absl/strings/str_cat.h"
#include "base/hash.h"
#include "base/status.h"
#include "count/count_tables.h"
#include "count/sorted_counts.h"
#include "files/spool.h"

namespace phraseweld {
namespace {

// Slots a partition that are counted at once in the second-level cache of common processors.
constexpr uint64_t kSlotsPerPartition = 48 * 1024;
constexpr size_t kMostPartitions = 2048;  // more would thrash the address translation cache
constexpr size_t kChunkRecords = 1024;    // 8 KiB in memory
// On disk fewer: each holds a buffer for every lane, and partitions larger than the working memory
// are taken in slices.
constexpr size_t kMostDiskPartitions = 512;
constexpr size_t kDiskChunkRecords = 2048;  // 16 KiB a write

// (left, bridge, right) in one integer, so that its order is the order of the three.
template <typename Key>
class SlotPacking {
 public:
  SlotPacking(uint64_t bridge_codes, int type_bits)
      : type_bits_(type_bits),
        bridge_bits_(bridge_codes <= 1 ? 0 : std::bit_width(bridge_codes - 1)) {}
  static SlotPacking ForCodes(uint64_t bridge_codes) {
    const int bridge_bits = bridge_codes <= 1 ? 0 : std::bit_width(bridge_codes - 1);
    const int bits = static_cast<int>(sizeof(Key)) * 8;
    return SlotPacking(bridge_codes, std::min(31, (bits - bridge_bits) / 2));
  }
  uint64_t type_limit() const { return uint64_t{1} << type_bits_; }
  Key Pack(const Slot& slot) const {
    return (((Key{slot.left} << bridge_bits_) | Key{slot.bridge}) << type_bits_) | Key{slot.right};
  }
  Slot Unpack(Key key) const {
    const Key type_mask = (Key{1} << type_bits_) - 1, bridge_mask = (Key{1} << bridge_bits_) - 1;
    return Slot{static_cast<uint32_t>(key >> (type_bits_ + bridge_bits_)),
                static_cast<uint32_t>(key & type_mask),
                static_cast<uint64_t>((key >> type_bits_) & bridge_mask)};
  }
  Key LeftAndBridge(Key key) const { return key >> type_bits_; }
  // (bridge, right)
  Key BridgeAndRight(Key key) const { return key & ((Key{1} << (type_bits_ + bridge_bits_)) - 1); }

 private:
  int type_bits_, bridge_bits_;
};

template <typename Key>
class SlotStore final : public SlotCounter {
 public:
  SlotStore(const CounterOptions& options, SlotPacking<Key> packing)
      : options_(options), packing_(packing), lanes_(static_cast<size_t>(options.lanes)) {}

  absl::Status Open() {
    const uint64_t slots = std::max<uint64_t>(options_.expected_slots, 1);
    uint64_t wanted = slots / kSlotsPerPartition;
    if (options_.on_disk) {
      // A lane holds a partition's keys, their spare copy and two tables: about 5 records a slot.
      const uint64_t lane_bytes = options_.working_bytes / static_cast<uint64_t>(options_.lanes);
      wanted = slots * sizeof(Key) * 5 / std::max<uint64_t>(lane_bytes, 1);
      slice_records_ = std::max<uint64_t>(lane_bytes / (4 * sizeof(Delta<Key>)), 4096);
    }
    const size_t most = options_.on_disk ? kMostDiskPartitions : kMostPartitions;
    partition_bits_ = std::bit_width(std::clamp<uint64_t>(wanted, 8, most) - 1);
    const size_t partitions = size_t{1} << partition_bits_;
    const std::string base = options_.scratch_folder + "/";
    if (options_.on_disk) {
      PW_ASSIGN_OR_RETURN(added_file_, options_.files->CreateScratch(base + "slots-added"));
      PW_ASSIGN_OR_RETURN(removed_file_, options_.files->CreateScratch(base + "slots-removed"));
      PW_ASSIGN_OR_RETURN(right_file_, options_.files->CreateScratch(base + "margins-changed"));
    }
    // A third of half the working memory for the buffers of each spool.
    const auto chunk = [&](size_t record_bytes) {
      const uint64_t buffers = 6 * partitions * static_cast<uint64_t>(options_.lanes);
      return options_.on_disk
                 ? std::clamp<uint64_t>(options_.working_bytes / buffers / record_bytes, 64,
                                        kDiskChunkRecords)
                 : kChunkRecords;
    };
    added_ = std::make_unique<Spool<Key>>(partitions, options_.lanes, chunk(sizeof(Key)),
                                          added_file_.get());
    removed_ = std::make_unique<Spool<Key>>(partitions, options_.lanes, chunk(sizeof(Key)),
                                            removed_file_.get());
    right_changes_ = std::make_unique<Spool<Delta<Key>>>(
        partitions, options_.lanes, chunk(sizeof(Delta<Key>)), right_file_.get());
    bulk_.resize(partitions);
    PW_RETURN_IF_ERROR(
        tables_.Open(partitions, options_.on_disk, options_.files, base + "slot-counts"));
    return right_tables_.Open(partitions, options_.on_disk, options_.files, base + "margin-counts");
  }

  void AddAll(int lane, const Entry* stream, uint64_t begin, uint64_t end) override {
    Spool<Key>& added = *added_;
    ScanSlots(
        stream, begin, end, options_.rules,
        [&](const Slot& slot, uint64_t, uint64_t) {
          added.Append(lane, PartitionOf(slot.left), packing_.Pack(slot));
        },
        [](uint64_t, Entry) {});
  }

  void Change(int lane, const Slot& before, const Slot& after) override {
    removed_->AppendSoon(lane, PartitionOf(before.left), packing_.Pack(before));
    added_->AppendSoon(lane, PartitionOf(after.left), packing_.Pack(after));
  }

  void Remove(int lane, const Slot& slot, uint64_t times) override {
    (void)lane;
    if (times > 0) {
      bulk_[PartitionOf(slot.left)].push_back({packing_.Pack(slot), -static_cast<int64_t>(times)});
    }
  }

  absl::Status Update(Lanes& lanes, uint32_t types) override {
    right_of_empty_.resize(types, 0);
    lane_state_.assign(lanes_, LaneState{});
    added_->Flush();
    removed_->Flush();
    PW_RETURN_IF_ERROR(lanes.ForEach(tables_.partitions(), [this](int lane, size_t partition) {
      return UpdatePartition(lane, partition);
    }));
    tables_.NextGeneration();
    spooled_ = std::max(spooled_, added_->stored_bytes() + removed_->stored_bytes());
    added_->Rewind();
    removed_->Rewind();
    uint64_t distinct = 0;
    int64_t slots = 0;
    for (LaneState& state : lane_state_) {
      slots += state.slots;
      distinct += state.types;
      for (const auto& [bridge, change] : state.bridges) {
        bridge_total_[bridge] += static_cast<uint64_t>(change);
      }
      state = LaneState{};
    }
    slots_ += static_cast<uint64_t>(slots);
    slot_types_ = distinct;
    right_changes_->Flush();
    PW_RETURN_IF_ERROR(lanes.ForEach(
        tables_.partitions(), [this](int, size_t partition) { return UpdateMargins(partition); }));
    right_tables_.NextGeneration();
    spooled_ = std::max(spooled_, right_changes_->stored_bytes());
    right_changes_->Rewind();
    return absl::OkStatus();
  }

  absl::Status Visit(Lanes& lanes, uint64_t least, const Visitor& visit) override {
    rounds_ = 0;
    // Bridged candidates wait in `waiting` for their R; in memory all of them, on disk as many
    // partitions' worth as fit the working memory.
    const size_t partitions = tables_.partitions();
    const size_t batch = options_.on_disk ? std::max<size_t>(lanes_, partitions / 16) : partitions;
    std::vector<std::vector<Candidate>> waiting(partitions * lanes_);
    uint64_t waiting_bytes = 0;
    for (size_t begin = 0; begin < partitions; begin += batch) {
      const size_t end = std::min(partitions, begin + batch);
      PW_RETURN_IF_ERROR(lanes.ForEach(end - begin, [&](int lane, size_t i) {
        return VisitPartition(lane, begin + i, least, visit,
                              &waiting[static_cast<size_t>(lane) * partitions]);
      }));
      if (end < partitions) {
        waiting_bytes = 0;
        for (const auto& list : waiting) waiting_bytes += list.capacity() * sizeof(Candidate);
        if (waiting_bytes < options_.working_bytes / 3) continue;
      }
      ++rounds_;
      PW_RETURN_IF_ERROR(lanes.ForEach(partitions, [&](int lane, size_t partition) {
        return ResolveMargins(lane, partition, visit, &waiting);
      }));
    }
    return absl::OkStatus();
  }

  uint64_t slots() const override { return slots_; }
  uint64_t slot_types() const override { return slot_types_; }
  uint64_t type_limit() const override { return packing_.type_limit(); }
  int rounds() const override { return rounds_; }
  uint64_t scratch_bytes() const override {
    if (!options_.on_disk) return 0;
    return spooled_ + tables_.scratch_bytes() + right_tables_.scratch_bytes();
  }

 private:
  struct Candidate {
    Key key;
    uint64_t n, left;
  };
  struct LaneState {
    int64_t slots = 0;
    uint64_t types = 0;
    absl::flat_hash_map<uint64_t, int64_t> bridges;  // changes of N
  };

  size_t PartitionOf(uint64_t value) const {
    return static_cast<size_t>(Mix64(value + 1) >> (64 - partition_bits_));
  }
  size_t MarginPartitionOf(Key bridge_and_right) const {
    return PartitionOf(static_cast<uint64_t>(bridge_and_right) ^
                       static_cast<uint64_t>(bridge_and_right >> (sizeof(Key) * 4)) * 31);
  }

  SlotTable TableOf(const Slot& slot, uint64_t n, uint64_t left, uint64_t right) const {
    SlotTable table;
    table.n = n;
    table.left = left;
    table.right = right;
    table.total = bridge_total_.at(slot.bridge);
    table.all = slots_;
    return table;
  }

  // Keys of a spool's partition as sorted changes, slice by slice so that no slice is larger than
  // the working memory allows; the distinct keys are what has to fit.
  absl::Status GatherKeys(const Spool<Key>& spool, size_t partition, int64_t change,
                          std::vector<Delta<Key>>* deltas) const {
    std::vector<Key> keys, spare;
    std::vector<Delta<Key>> runs;
    const uint64_t total = spool.Size(partition);
    if (total == 0) return absl::OkStatus();
    keys.reserve(std::min(total, slice_records_ + kDiskChunkRecords));
    const auto flush = [&] {
      SortKeys(&keys, &spare);
      if (deltas->empty()) {
        AppendRuns(keys, change, deltas);
      } else {
        runs.clear();
        AppendRuns(keys, change, &runs);
        *deltas = MergeDeltas(*deltas, runs);
      }
      keys.clear();
    };
    PW_RETURN_IF_ERROR(spool.ForEachChunk(partition, [&](absl::Span<const Key> chunk) {
      keys.insert(keys.end(), chunk.begin(), chunk.end());
      if (keys.size() >= slice_records_) flush();
    }));
    if (!keys.empty()) flush();
    return absl::OkStatus();
  }

  absl::Status UpdatePartition(int lane, size_t partition) {
    std::vector<Delta<Key>> deltas;
    PW_RETURN_IF_ERROR(GatherKeys(*added_, partition, 1, &deltas));
    added_->Drop(partition);
    PW_RETURN_IF_ERROR(GatherKeys(*removed_, partition, -1, &deltas));
    removed_->Drop(partition);
    std::vector<Delta<Key>>& bulk = bulk_[partition];
    if (!bulk.empty()) {
      std::sort(bulk.begin(), bulk.end(),
                [](const auto& a, const auto& b) { return a.key < b.key; });
      deltas = MergeDeltas(deltas, bulk);
      bulk = {};
    }
    typename CountTables<Key, uint32_t>::Table buffer, result;
    PW_ASSIGN_OR_RETURN(const auto* table, tables_.Load(partition, &buffer));
    LaneState& state = lane_state_[static_cast<size_t>(lane)];
    if (deltas.empty() && !options_.on_disk) {
      state.types += table->keys.size();
      return absl::OkStatus();
    }
    if (!ApplyDeltas(*table, deltas, &result)) {
      return absl::OutOfRangeError(
          "a slot type has more than 4294967295 slots; split the corpus into several jobs");
    }
    ReportMargins(lane, deltas, &state);
    state.types += result.keys.size();
    return tables_.Store(partition, std::move(result));
  }

  // Passes the changes of a partition on to R and N.
  void ReportMargins(int lane, const std::vector<Delta<Key>>& deltas, LaneState* state) {
    constexpr size_t kAhead = 24;
    for (size_t i = 0; i < deltas.size();) {
      const Key group = packing_.LeftAndBridge(deltas[i].key);
      const uint64_t bridge = packing_.Unpack(deltas[i].key).bridge;
      int64_t sum = 0;
      for (; i < deltas.size() && packing_.LeftAndBridge(deltas[i].key) == group; ++i) {
        const Delta<Key>& delta = deltas[i];
        if (i + kAhead < deltas.size()) {
          __builtin_prefetch(&right_of_empty_[packing_.Unpack(deltas[i + kAhead].key).right], 1);
        }
        if (delta.change == 0) continue;
        sum += delta.change;
        if (bridge == 0) {
          std::atomic_ref<uint64_t>(right_of_empty_[packing_.Unpack(delta.key).right])
              .fetch_add(static_cast<uint64_t>(delta.change), std::memory_order_relaxed);
          continue;
        }
        const Key right = packing_.BridgeAndRight(delta.key);
        right_changes_->AppendSoon(lane, MarginPartitionOf(right), {right, delta.change});
      }
      state->slots += sum;
      if (sum != 0) state->bridges[bridge] += sum;
    }
  }

  absl::Status UpdateMargins(size_t partition) {
    const uint64_t changes = right_changes_->Size(partition);
    typename CountTables<Key, uint64_t>::Table buffer, result;
    if (changes == 0 && !options_.on_disk) return absl::OkStatus();
    std::vector<Delta<Key>> deltas, merged;
    deltas.reserve(std::min(changes, slice_records_));
    const auto flush = [&] {
      std::sort(deltas.begin(), deltas.end(),
                [](const auto& a, const auto& b) { return a.key < b.key; });
      size_t out = 0;
      for (size_t i = 0; i < deltas.size(); ++out) {
        Delta<Key> sum = deltas[i++];
        for (; i < deltas.size() && deltas[i].key == sum.key; ++i) sum.change += deltas[i].change;
        deltas[out] = sum;
      }
      deltas.resize(out);
      if (merged.empty()) {
        merged.swap(deltas);
      } else {
        merged = MergeDeltas(merged, deltas);
      }
      deltas.clear();
    };
    PW_RETURN_IF_ERROR(
        right_changes_->ForEachChunk(partition, [&](absl::Span<const Delta<Key>> chunk) {
          deltas.insert(deltas.end(), chunk.begin(), chunk.end());
          if (deltas.size() >= slice_records_) flush();
        }));
    if (!deltas.empty()) flush();
    right_changes_->Drop(partition);
    PW_ASSIGN_OR_RETURN(const auto* table, right_tables_.Load(partition, &buffer));
    if (!ApplyDeltas(*table, merged, &result)) {
      return absl::InternalError("a margin fell below zero: the counts of two passes disagree");
    }
    return right_tables_.Store(partition, std::move(result));
  }

  absl::Status VisitPartition(int lane, size_t partition, uint64_t least, const Visitor& visit,
                              std::vector<Candidate>* waiting) const {
    typename CountTables<Key, uint32_t>::Table buffer;
    PW_ASSIGN_OR_RETURN(const auto* table, tables_.Load(partition, &buffer));
    const std::vector<Key>& keys = table->keys;
    const std::vector<uint32_t>& counts = table->counts;
    for (size_t i = 0; i < keys.size();) {
      const Key group = packing_.LeftAndBridge(keys[i]);
      uint64_t left = 0;
      uint32_t largest = 0;
      size_t end = i;
      for (; end < keys.size() && packing_.LeftAndBridge(keys[end]) == group; ++end) {
        left += counts[end];
        largest = std::max(largest, counts[end]);
      }
      if (largest >= least) {
        for (; i < end; ++i) {
          if (counts[i] < least) continue;
          const Slot slot = packing_.Unpack(keys[i]);
          if (slot.bridge == 0) {
            visit(lane, slot, TableOf(slot, counts[i], left, right_of_empty_[slot.right]));
            continue;
          }
          waiting[MarginPartitionOf(packing_.BridgeAndRight(keys[i]))].push_back(
              {keys[i], counts[i], left});
        }
      }
      i = end;
    }
    return absl::OkStatus();
  }

  absl::Status ResolveMargins(int lane, size_t partition, const Visitor& visit,
                              std::vector<std::vector<Candidate>>* waiting) const {
    typename CountTables<Key, uint64_t>::Table buffer;
    const typename CountTables<Key, uint64_t>::Table* table = nullptr;
    for (size_t source = 0; source < lanes_; ++source) {
      std::vector<Candidate>& list = (*waiting)[source * tables_.partitions() + partition];
      if (list.empty()) continue;
      if (table == nullptr) {
        PW_ASSIGN_OR_RETURN(table, right_tables_.Load(partition, &buffer));
      }
      for (const Candidate& candidate : list) {
        const Key right = packing_.BridgeAndRight(candidate.key);
        const auto found = std::lower_bound(table->keys.begin(), table->keys.end(), right);
        if (found == table->keys.end() || *found != right) {
          return absl::InternalError("a slot type has no right margin");
        }
        const Slot slot = packing_.Unpack(candidate.key);
        visit(lane, slot,
              TableOf(slot, candidate.n, candidate.left,
                      table->counts[static_cast<size_t>(found - table->keys.begin())]));
      }
      list.clear();
      list.shrink_to_fit();
    }
    return absl::OkStatus();
  }

  const CounterOptions options_;
  const SlotPacking<Key> packing_;
  const size_t lanes_;
  int partition_bits_ = 3;
  uint64_t slice_records_ = uint64_t{1} << 31;
  std::unique_ptr<ScratchFile> added_file_, removed_file_, right_file_;
  std::unique_ptr<Spool<Key>> added_, removed_;
  std::unique_ptr<Spool<Delta<Key>>> right_changes_;
  std::vector<std::vector<Delta<Key>>> bulk_;
  CountTables<Key, uint32_t> tables_;
  CountTables<Key, uint64_t> right_tables_;
  std::vector<uint64_t> right_of_empty_;  // R of the empty bridge, by type
  absl::flat_hash_map<uint64_t, uint64_t> bridge_total_;
  std::vector<LaneState> lane_state_;
  uint64_t slots_ = 0, slot_types_ = 0, spooled_ = 0;
  int rounds_ = 0;
};

template <typename Key>
absl::StatusOr<std::unique_ptr<SlotCounter>> OpenStore(const CounterOptions& options,
                                                       SlotPacking<Key> packing) {
  auto store = std::make_unique<SlotStore<Key>>(options, packing);
  PW_RETURN_IF_ERROR(store->Open());
  return store;
}

}  // namespace

absl::StatusOr<std::unique_ptr<SlotCounter>> SlotCounter::Create(const CounterOptions& options) {
  const auto narrow = SlotPacking<uint64_t>::ForCodes(options.rules.codes.codes());
  // Passes make new types; as many again as there are words is more than any corpus has shown.
  const uint64_t room = std::max<uint64_t>(options.types_now, uint64_t{1} << 20);
  if (options.types_now + room <= narrow.type_limit()) return OpenStore<uint64_t>(options, narrow);
  return OpenStore<WideKey>(options, SlotPacking<WideKey>::ForCodes(options.rules.codes.codes()));
}

}  // namespace phraseweld
