#include "base/types.h"

#include <algorithm>

#include "base/hash.h"

namespace phraseweld {
namespace {

uint64_t HashWords(absl::Span<const uint32_t> words) {
  uint64_t hash = words.size();
  for (uint32_t word : words) hash = Mix64(hash * 0x9E3779B97F4A7C15u + word);
  return hash;
}

}  // namespace

uint32_t TypeTable::Find(absl::Span<const uint32_t> words) const {
  auto found = first_by_hash_.find(HashWords(words));
  if (found == first_by_hash_.end()) return kBreak;
  for (uint32_t phrase = found->second; phrase != kBreak; phrase = next_same_hash_[phrase]) {
    const uint64_t begin = offsets_[phrase], end = offsets_[phrase + 1];
    if (end - begin == words.size() &&
        std::equal(words.begin(), words.end(), words_.begin() + static_cast<ptrdiff_t>(begin))) {
      return word_types_ + phrase;
    }
  }
  return kBreak;
}

uint32_t TypeTable::Intern(absl::Span<const uint32_t> words) {
  const uint32_t known = Find(words);
  if (known != kBreak) return known;
  const auto phrase = static_cast<uint32_t>(offsets_.size() - 1);
  words_.insert(words_.end(), words.begin(), words.end());
  offsets_.push_back(words_.size());
  auto [place, is_new] = first_by_hash_.try_emplace(HashWords(words), phrase);
  next_same_hash_.push_back(is_new ? kBreak : place->second);
  place->second = phrase;
  return word_types_ + phrase;
}

}  // namespace phraseweld
