#include "base/huge_pages.h"

#include <sys/mman.h>

#include <cstdlib>
#include <new>

namespace phraseweld {
namespace {

constexpr size_t kHugePage = size_t{2} << 20;
constexpr size_t kAlignment = 64;  // of smaller memory: a cache line

constexpr size_t RoundUp(size_t bytes, size_t unit) { return (bytes + unit - 1) / unit * unit; }

}  // namespace

void* AllocateHuge(size_t bytes) {
  const size_t unit = bytes >= kHugePage / 2 ? kHugePage : kAlignment;
  const size_t rounded = RoundUp(bytes, unit);
  void* memory = std::aligned_alloc(unit, rounded);
  if (memory == nullptr) throw std::bad_alloc();
  // Advice: where it is not taken only time is lost.
  if (unit == kHugePage) (void)madvise(memory, rounded, MADV_HUGEPAGE);
  return memory;
}

void FreeHuge(void* memory) noexcept { std::free(memory); }

HugePool::~HugePool() {
  for (void* chunk : chunks_) FreeHuge(chunk);
}

char* HugePool::Take(size_t bytes) {
  const size_t rounded = RoundUp(bytes, 16);
  const std::lock_guard<std::mutex> lock(mutex_);
  if (rounded > left_) {
    const size_t chunk = RoundUp(rounded, kHugePage);
    chunks_.push_back(AllocateHuge(chunk));
    char* const begin = static_cast<char*>(chunks_.back());
    // What is larger than a page gets chunks of its own; the rest of the last is lost.
    if (chunk > kHugePage) return begin;
    next_ = begin;
    left_ = chunk;
  }
  char* const piece = next_;
  next_ += rounded;
  left_ -= rounded;
  return piece;
}

}  // namespace phraseweld
