#ifndef PHRASEWELD_COUNT_COUNT_TABLES_H_
#define PHRASEWELD_COUNT_COUNT_TABLES_H_

#include <atomic>
#include <cstdint>
#include <memory>
#include <string>
#include <vector>

#include "base/status.h"
#include "count/sorted_counts.h"
#include "files/file_system.h"

namespace phraseweld {

// One SortedCounts a partition, in memory or in scratch files. Partitions may be loaded and stored
// from several threads at once, each by one.
template <typename Key, typename Count>
class CountTables {
 public:
  using Table = SortedCounts<Key, Count>;

  absl::Status Open(size_t partitions, bool on_disk, FileSystem* files, const std::string& path) {
    partitions_.resize(partitions);
    on_disk_ = on_disk;
    if (!on_disk) return absl::OkStatus();
    // Two files take turns: one generation is read while the next is written.
    for (int side = 0; side < 2; ++side) {
      PW_ASSIGN_OR_RETURN(sides_[side],
                          files->CreateScratch(path + (side == 0 ? ".even" : ".odd")));
    }
    return absl::OkStatus();
  }

  size_t partitions() const { return partitions_.size(); }

  // The table of a partition: the one in memory, or *buffer filled from the file.
  absl::StatusOr<const Table*> Load(size_t partition, Table* buffer) const {
    const Partition& p = partitions_[partition];
    if (!on_disk_) return &p.table;
    buffer->keys.resize(p.size);
    buffer->counts.resize(p.size);
    if (p.size > 0) {
      ScratchFile& file = *sides_[generation_ & 1];
      PW_RETURN_IF_ERROR(file.ReadAt(p.offset, reinterpret_cast<char*>(buffer->keys.data()),
                                     p.size * sizeof(Key)));
      PW_RETURN_IF_ERROR(file.ReadAt(p.offset + p.size * sizeof(Key),
                                     reinterpret_cast<char*>(buffer->counts.data()),
                                     p.size * sizeof(Count)));
    }
    return buffer;
  }

  // The partition's table of the next generation. Every partition is stored once a generation.
  absl::Status Store(size_t partition, Table&& table) {
    Partition& p = partitions_[partition];
    if (!on_disk_) {
      p.table = std::move(table);
      return absl::OkStatus();
    }
    p.next_size = table.keys.size();
    p.next_offset = end_.fetch_add(p.next_size * (sizeof(Key) + sizeof(Count)));
    if (p.next_size == 0) return absl::OkStatus();
    ScratchFile& file = *sides_[(generation_ + 1) & 1];
    PW_RETURN_IF_ERROR(file.WriteAt(
        p.next_offset, std::string_view(reinterpret_cast<const char*>(table.keys.data()),
                                        p.next_size * sizeof(Key))));
    return file.WriteAt(p.next_offset + p.next_size * sizeof(Key),
                        std::string_view(reinterpret_cast<const char*>(table.counts.data()),
                                         p.next_size * sizeof(Count)));
  }

  // Makes the stored generation the current one. From one thread, when all Stores are done.
  void NextGeneration() {
    if (!on_disk_) return;
    for (Partition& p : partitions_) {
      p.offset = p.next_offset;
      p.size = p.next_size;
    }
    largest_ = std::max<uint64_t>(largest_, end_);
    end_ = 0;
    ++generation_;
  }

  uint64_t scratch_bytes() const { return on_disk_ ? 2 * largest_ : 0; }

 private:
  struct Partition {
    Table table;
    uint64_t offset = 0, size = 0;
    uint64_t next_offset = 0, next_size = 0;
  };
  std::vector<Partition> partitions_;
  std::unique_ptr<ScratchFile> sides_[2];
  bool on_disk_ = false;
  uint64_t generation_ = 0;
  uint64_t largest_ = 0;
  std::atomic<uint64_t> end_{0};
};

}  // namespace phraseweld

#endif  // PHRASEWELD_COUNT_COUNT_TABLES_H_
