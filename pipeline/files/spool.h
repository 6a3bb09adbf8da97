#ifndef PHRASEWELD_FILES_SPOOL_H_
#define PHRASEWELD_FILES_SPOOL_H_

#include <algorithm>
#include <array>
#include <atomic>
#include <cstdint>
#include <cstring>
#include <memory>
#include <mutex>
#include <vector>

#include "absl/status/status.h"
#include "absl/types/span.h"
#include "base/status.h"
#include "files/file_system.h"

namespace phraseweld {

// Records sorted into partitions as they come, kept in memory or in one scratch file. Each lane
// fills chunks of its own; a full chunk joins its partition's list. A partition's records come back
// in no particular order. Record is trivially copyable.
template <typename Record>
class Spool {
 public:
  // `scratch`: null keeps everything in memory.
  Spool(size_t partitions, int lanes, size_t chunk_records, ScratchFile* scratch)
      : partitions_(partitions),
        chunk_records_(chunk_records),
        scratch_(scratch),
        heads_(partitions * static_cast<size_t>(lanes)),
        lists_(partitions),
        queues_(static_cast<size_t>(lanes)) {}

  void Append(int lane, size_t partition, const Record& record) {
    Append(&HeadOf(lane, partition), partition, record);
  }

  // The same, for a loop that waits for memory elsewhere too: records wait in a queue, and where
  // they go, which lies in no cache, is asked for many at a time.
  void AppendSoon(int lane, size_t partition, const Record& record) {
    Queue& queue = queues_[static_cast<size_t>(lane)];
    queue.partitions[queue.size] = static_cast<uint32_t>(partition);
    queue.records[queue.size] = record;
    __builtin_prefetch(&HeadOf(lane, partition));
    if (++queue.size == kQueue) Empty(lane);
  }

  // After the last AppendSoon() and before anything of the below; while no lane appends.
  void Flush() {
    for (size_t lane = 0; lane < queues_.size(); ++lane) Empty(static_cast<int>(lane));
  }

  uint64_t Size(size_t partition) const {
    uint64_t size = lists_[partition].records;
    for (size_t i = partition; i < heads_.size(); i += partitions_) size += heads_[i].used;
    return size;
  }
  uint64_t stored_bytes() const { return stored_.load(std::memory_order_relaxed); }

  // Calls take(span of records) until all of the partition's records were given.
  template <typename Take>
  absl::Status ForEachChunk(size_t partition, Take&& take) const {
    PW_RETURN_IF_ERROR(failure());
    const List& list = lists_[partition];
    for (const auto& chunk : list.chunks) take(absl::MakeSpan(chunk.get(), chunk_records_));
    if (!list.offsets.empty()) {
      std::vector<Record> buffer(chunk_records_);
      for (uint64_t offset : list.offsets) {
        PW_RETURN_IF_ERROR(scratch_->ReadAt(offset, reinterpret_cast<char*>(buffer.data()),
                                            chunk_records_ * sizeof(Record)));
        take(absl::MakeSpan(buffer.data(), chunk_records_));
      }
    }
    for (size_t i = partition; i < heads_.size(); i += partitions_) {
      if (heads_[i].used > 0) take(absl::MakeSpan(heads_[i].records.get(), heads_[i].used));
    }
    return absl::OkStatus();
  }

  // Forgets a partition's records and gives their memory back.
  void Drop(size_t partition) {
    lists_[partition] = List{};
    for (size_t i = partition; i < heads_.size(); i += partitions_) heads_[i] = Head{};
  }
  // After every partition was dropped: the scratch file is filled from its start again.
  void Rewind() { stored_ = 0; }

 private:
  struct Head {
    std::unique_ptr<Record[]> records;
    size_t used = 0;
    size_t capacity = 0;
  };
  static constexpr size_t kQueue = 64;
  struct alignas(64) Queue {
    std::array<Record, kQueue> records;
    std::array<uint32_t, kQueue> partitions;
    size_t size = 0;
  };
  struct List {
    std::vector<std::unique_ptr<Record[]>> chunks;
    std::vector<uint64_t> offsets;
    uint64_t records = 0;
  };

  Head& HeadOf(int lane, size_t partition) {
    return heads_[static_cast<size_t>(lane) * partitions_ + partition];
  }

  void Empty(int lane) {
    Queue& queue = queues_[static_cast<size_t>(lane)];
    for (size_t i = 0; i < queue.size; ++i) {
      const Head& head = HeadOf(lane, queue.partitions[i]);
      __builtin_prefetch(head.records.get() + head.used, 1);
    }
    for (size_t i = 0; i < queue.size; ++i) {
      Append(lane, queue.partitions[i], queue.records[i]);
    }
    queue.size = 0;
  }

  void Append(Head* head, size_t partition, const Record& record) {
    if (head->used == head->capacity) Grow(head, partition);
    head->records[head->used++] = record;
  }

  // A first chunk starts small, so that many thin partitions cost little.
  void Grow(Head* head, size_t partition) {
    constexpr size_t kFirst = 64;
    if (head->capacity < chunk_records_) {
      const size_t capacity = std::min(chunk_records_, std::max(kFirst, head->capacity * 4));
      std::unique_ptr<Record[]> larger(new Record[capacity]);
      if (head->used > 0)
        std::memcpy(larger.get(), head->records.get(), head->used * sizeof(Record));
      head->records = std::move(larger);
      head->capacity = capacity;
      return;
    }
    if (scratch_ != nullptr) {
      const uint64_t bytes = chunk_records_ * sizeof(Record);
      const uint64_t offset = stored_.fetch_add(bytes);
      absl::Status status = scratch_->WriteAt(
          offset, std::string_view(reinterpret_cast<const char*>(head->records.get()), bytes));
      std::lock_guard<std::mutex> lock(mutex_);
      if (!status.ok() && failure_.ok()) failure_ = status;
      lists_[partition].offsets.push_back(offset);
      lists_[partition].records += chunk_records_;
    } else {
      stored_.fetch_add(chunk_records_ * sizeof(Record), std::memory_order_relaxed);
      std::lock_guard<std::mutex> lock(mutex_);
      lists_[partition].chunks.push_back(std::move(head->records));
      lists_[partition].records += chunk_records_;
      head->records.reset(new Record[chunk_records_]);
    }
    head->used = 0;
  }
  absl::Status failure() const {
    std::lock_guard<std::mutex> lock(mutex_);
    return failure_;
  }

  size_t partitions_, chunk_records_;
  ScratchFile* scratch_;
  std::vector<Head> heads_;
  std::vector<List> lists_;
  std::vector<Queue> queues_;  // one a lane
  std::atomic<uint64_t> stored_{0};
  mutable std::mutex mutex_;
  absl::Status failure_;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_FILES_SPOOL_H_
