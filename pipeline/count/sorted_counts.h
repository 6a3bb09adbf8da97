#ifndef PHRASEWELD_COUNT_SORTED_COUNTS_H_
#define PHRASEWELD_COUNT_SORTED_COUNTS_H_

#include <algorithm>
#include <array>
#include <cstdint>
#include <limits>
#include <vector>

namespace phraseweld {

using WideKey = unsigned __int128;

// A key and by how much its count changes.
template <typename Key>
struct Delta {
  Key key;
  int64_t change;
};

// Keys in ascending order with their counts, all above 0.
template <typename Key, typename Count>
struct SortedCounts {
  std::vector<Key> keys;
  std::vector<Count> counts;
};

// Sorts `keys` ascending. 64-bit keys go through a least-significant-digit radix sort; digits that
// are the same in all keys cost one counting pass and no move.
inline void SortKeys(std::vector<uint64_t>* keys, std::vector<uint64_t>* spare) {
  constexpr int kBits = 11;
  constexpr size_t kBuckets = size_t{1} << kBits;
  constexpr int kDigits = (64 + kBits - 1) / kBits;
  constexpr size_t kSmall = 1024;  // below, filling the histograms costs more than std::sort
  const size_t size = keys->size();
  if (size < kSmall) {
    std::sort(keys->begin(), keys->end());
    return;
  }
  std::vector<uint32_t> histogram(kDigits * kBuckets, 0);
  for (uint64_t key : *keys) {
    for (int digit = 0; digit < kDigits; ++digit) {
      ++histogram[static_cast<size_t>(digit) * kBuckets +
                  ((key >> (digit * kBits)) & (kBuckets - 1))];
    }
  }
  spare->resize(size);
  std::vector<uint64_t>*from = keys, *to = spare;
  for (int digit = 0; digit < kDigits; ++digit) {
    uint32_t* counts = &histogram[static_cast<size_t>(digit) * kBuckets];
    const int shift = digit * kBits;
    if (counts[((*from)[0] >> shift) & (kBuckets - 1)] == size) continue;
    uint32_t sum = 0;
    for (size_t bucket = 0; bucket < kBuckets; ++bucket) {
      const uint32_t count = counts[bucket];
      counts[bucket] = sum;
      sum += count;
    }
    uint64_t* target = to->data();
    for (uint64_t key : *from) target[counts[(key >> shift) & (kBuckets - 1)]++] = key;
    std::swap(from, to);
  }
  if (from != keys) keys->swap(*spare);
}

inline void SortKeys(std::vector<WideKey>* keys, std::vector<WideKey>*) {
  std::sort(keys->begin(), keys->end());
}

// Appends the sorted `keys` to *deltas, equal ones together, each occurrence counting `change`.
template <typename Key>
void AppendRuns(const std::vector<Key>& keys, int64_t change, std::vector<Delta<Key>>* deltas) {
  for (size_t i = 0; i < keys.size();) {
    size_t end = i + 1;
    while (end < keys.size() && keys[end] == keys[i]) ++end;
    deltas->push_back({keys[i], change * static_cast<int64_t>(end - i)});
    i = end;
  }
}

// Merges two lists ascending by key, adding the changes of equal keys; entries of 0 are kept.
template <typename Key>
std::vector<Delta<Key>> MergeDeltas(const std::vector<Delta<Key>>& a,
                                    const std::vector<Delta<Key>>& b) {
  std::vector<Delta<Key>> merged;
  merged.reserve(a.size() + b.size());
  size_t i = 0, j = 0;
  while (i < a.size() && j < b.size()) {
    if (a[i].key < b[j].key) {
      merged.push_back(a[i++]);
    } else if (b[j].key < a[i].key) {
      merged.push_back(b[j++]);
    } else {
      merged.push_back({a[i].key, a[i].change + b[j].change});
      ++i, ++j;
    }
  }
  merged.insert(merged.end(), a.begin() + static_cast<ptrdiff_t>(i), a.end());
  merged.insert(merged.end(), b.begin() + static_cast<ptrdiff_t>(j), b.end());
  return merged;
}

// The table that `table` becomes when `deltas` (ascending, keys distinct) are applied. False when a
// count would leave the range of Count, below 0 (a fault of the caller) or above.
template <typename Key, typename Count>
bool ApplyDeltas(const SortedCounts<Key, Count>& table, const std::vector<Delta<Key>>& deltas,
                 SortedCounts<Key, Count>* result) {
  result->keys.clear();
  result->counts.clear();
  result->keys.reserve(table.keys.size() + deltas.size());
  result->counts.reserve(table.keys.size() + deltas.size());
  const auto copy = [&](size_t begin, size_t end) {
    result->keys.insert(result->keys.end(), table.keys.begin() + static_cast<ptrdiff_t>(begin),
                        table.keys.begin() + static_cast<ptrdiff_t>(end));
    result->counts.insert(result->counts.end(),
                          table.counts.begin() + static_cast<ptrdiff_t>(begin),
                          table.counts.begin() + static_cast<ptrdiff_t>(end));
  };
  size_t at = 0;
  for (const Delta<Key>& delta : deltas) {
    // Gallop: most of the table lies between two changes.
    size_t step = 1, limit = at;
    while (limit < table.keys.size() && table.keys[limit] < delta.key) {
      limit += step;
      step *= 2;
    }
    limit = std::min(limit, table.keys.size());
    const size_t found = static_cast<size_t>(
        std::lower_bound(table.keys.begin() + static_cast<ptrdiff_t>(at),
                         table.keys.begin() + static_cast<ptrdiff_t>(limit), delta.key) -
        table.keys.begin());
    copy(at, found);
    at = found;
    int64_t count = delta.change;
    if (at < table.keys.size() && table.keys[at] == delta.key) {
      count += static_cast<int64_t>(table.counts[at]);
      ++at;
    }
    if (count < 0 || static_cast<uint64_t>(count) > std::numeric_limits<Count>::max()) return false;
    if (count > 0) {
      result->keys.push_back(delta.key);
      result->counts.push_back(static_cast<Count>(count));
    }
  }
  copy(at, table.keys.size());
  return true;
}

}  // namespace phraseweld

#endif  // PHRASEWELD_COUNT_SORTED_COUNTS_H_
