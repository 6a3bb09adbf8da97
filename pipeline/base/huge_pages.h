#ifndef PHRASEWELD_BASE_HUGE_PAGES_H_
#define PHRASEWELD_BASE_HUGE_PAGES_H_

#include <cstddef>
#include <memory>
#include <mutex>
#include <utility>
#include <vector>

namespace phraseweld {

// Memory for tables that are read at random. On pages of 4 KiB nearly every such read also misses
// the processor's table of addresses; large pages, where the system grants them, save that.

// At least `bytes` bytes, on large pages where it is half of one or more. Throws std::bad_alloc.
void* AllocateHuge(size_t bytes);
void FreeHuge(void* memory) noexcept;

template <typename T>
struct HugeAllocator {
  using value_type = T;
  HugeAllocator() = default;
  template <typename U>
  HugeAllocator(const HugeAllocator<U>&) {}
  T* allocate(size_t count) { return static_cast<T*>(AllocateHuge(count * sizeof(T))); }
  void deallocate(T* memory, size_t) { FreeHuge(memory); }
  template <typename U>
  bool operator==(const HugeAllocator<U>&) const {
    return true;
  }
};

template <typename T>
using HugeVector = std::vector<T, HugeAllocator<T>>;

// Hands out pieces of large pages and takes none back before its own end. Thread-safe.
class HugePool {
 public:
  HugePool() = default;
  ~HugePool();
  HugePool(const HugePool&) = delete;
  HugePool& operator=(const HugePool&) = delete;
  // `bytes` bytes, aligned to 16.
  char* Take(size_t bytes);

 private:
  std::mutex mutex_;
  std::vector<void*> chunks_;
  char* next_ = nullptr;
  size_t left_ = 0;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_BASE_HUGE_PAGES_H_
