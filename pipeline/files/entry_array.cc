#include "files/entry_array.h"

#include <sys/mman.h>
#include <unistd.h>

#include <algorithm>
#include <cerrno>
#include <cstring>

#include "absl/strings/str_cat.h"
#include "base/status.h"

namespace phraseweld {

absl::StatusOr<std::unique_ptr<EntryArray>> EntryArray::InMemory(uint64_t capacity) {
  std::unique_ptr<EntryArray> array(new EntryArray);
  array->capacity_ = capacity;
  array->mapped_bytes_ = std::max<uint64_t>(capacity * sizeof(Entry), 4096);
  void* mapped = mmap(nullptr, array->mapped_bytes_, PROT_READ | PROT_WRITE,
                      MAP_PRIVATE | MAP_ANONYMOUS | MAP_NORESERVE, -1, 0);
  if (mapped == MAP_FAILED) {
    return absl::ResourceExhaustedError(absl::StrCat(
        "cannot reserve ", array->mapped_bytes_, " bytes of address space for the token stream: ",
        strerror(errno), "; a smaller limits.memory keeps the stream in a file"));
  }
  madvise(mapped, array->mapped_bytes_, MADV_HUGEPAGE);  // best effort: fewer page faults
  array->data_ = static_cast<Entry*>(mapped);
  return array;
}

absl::StatusOr<std::unique_ptr<EntryArray>> EntryArray::OnFile(FileSystem& files,
                                                               const std::string& path) {
  std::unique_ptr<EntryArray> array(new EntryArray);
  PW_ASSIGN_OR_RETURN(array->scratch_, files.CreateScratch(path));
  return array;
}

EntryArray::~EntryArray() {
  if (data_ != nullptr) munmap(data_, mapped_bytes_);
}

absl::Status EntryArray::Write(uint64_t at, absl::Span<const Entry> entries) {
  if (scratch_ != nullptr) {
    return scratch_->WriteAt(at * sizeof(Entry),
                             std::string_view(reinterpret_cast<const char*>(entries.data()),
                                              entries.size() * sizeof(Entry)));
  }
  if (at + entries.size() > capacity_) {
    return absl::AbortedError(
        "the inputs grew while they were read; run again when they are still");
  }
  std::copy(entries.begin(), entries.end(), data_ + at);
  return absl::OkStatus();
}

absl::Status EntryArray::Seal(uint64_t size) {
  size_ = size;
  if (scratch_ == nullptr || size == 0) return absl::OkStatus();
  mapped_bytes_ = size * sizeof(Entry);
  void* mapped =
      mmap(nullptr, mapped_bytes_, PROT_READ | PROT_WRITE, MAP_SHARED, scratch_->descriptor(), 0);
  if (mapped == MAP_FAILED) {
    return absl::ResourceExhaustedError(absl::StrCat("cannot map the token stream of ",
                                                     mapped_bytes_, " bytes: ", strerror(errno)));
  }
  data_ = static_cast<Entry*>(mapped);
  return absl::OkStatus();
}

void EntryArray::Release(uint64_t begin, uint64_t end) {
  if (scratch_ == nullptr || begin >= end) return;
  // A fault maps some pages around the one that was asked for, also of a range given back before:
  // as much as the page cache holds in one piece, up to a large page. Giving back a neighbour's
  // page that is in use costs it another fault, and nothing else.
  constexpr uint64_t kPage = 4096, kBefore = uint64_t{2} << 20, kAfter = uint64_t{128} << 10;
  const uint64_t first = begin * sizeof(Entry), last = end * sizeof(Entry);
  const uint64_t from = (first - std::min(first, kBefore)) / kPage * kPage;
  const uint64_t to = std::min(mapped_bytes_, last + kAfter) / kPage * kPage;
  if (from < to) madvise(reinterpret_cast<char*>(data_) + from, to - from, MADV_DONTNEED);
}

}  // namespace phraseweld
