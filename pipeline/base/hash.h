#ifndef PHRASEWELD_BASE_HASH_H_
#define PHRASEWELD_BASE_HASH_H_

#include <cstdint>
#include <string>

namespace phraseweld {

// An XXH3-128 value.
struct Hash128 {
  uint64_t high = 0;
  uint64_t low = 0;
  friend bool operator==(const Hash128&, const Hash128&) = default;
};

// 32 lower-case hexadecimal digits, the high half first (the canonical form).
inline std::string ToHex(const Hash128& hash) {
  static constexpr char kDigits[] = "0123456789abcdef";
  std::string out(32, '0');
  for (int i = 0; i < 16; ++i) {
    out[static_cast<size_t>(i)] = kDigits[(hash.high >> (60 - 4 * i)) & 15];
    out[static_cast<size_t>(16 + i)] = kDigits[(hash.low >> (60 - 4 * i)) & 15];
  }
  return out;
}

// A stable mixer of 64 bits (the finaliser of SplitMix64, Steele et al. 2014): the same on every
// machine, so that partitions do not depend on the build.
constexpr uint64_t Mix64(uint64_t x) {
  x ^= x >> 30;
  x *= 0xBF58476D1CE4E5B9u;
  x ^= x >> 27;
  x *= 0x94D049BB133111EBu;
  return x ^ (x >> 31);
}

}  // namespace phraseweld

#endif  // PHRASEWELD_BASE_HASH_H_
