#include "words/scan.h"

#if defined(__x86_64__)

#include <immintrin.h>

#include <bit>
#include <cstring>

// What follows may use AVX2; what the headers above define may not, since other files share it.
#if defined(__clang__)
#pragma clang attribute push(__attribute__((target("avx2,bmi,bmi2,popcnt,lzcnt"))), \
                             apply_to = function)
#else
#pragma GCC push_options
#pragma GCC target("avx2,bmi,bmi2,popcnt,lzcnt")
#endif

namespace phraseweld {
namespace scan_avx2 {
namespace {

struct Mask {
  __m256i part[2];
};

inline Mask operator|(const Mask& a, const Mask& b) {
  return {{_mm256_or_si256(a.part[0], b.part[0]), _mm256_or_si256(a.part[1], b.part[1])}};
}

inline uint64_t Bits(const Mask& mask) {
  return uint64_t{static_cast<uint32_t>(_mm256_movemask_epi8(mask.part[1]))} << 32 |
         static_cast<uint32_t>(_mm256_movemask_epi8(mask.part[0]));
}

struct Block {
  __m256i part[2];

  explicit Block(const char* bytes) {
    part[0] = _mm256_loadu_si256(reinterpret_cast<const __m256i*>(bytes));
    part[1] = _mm256_loadu_si256(reinterpret_cast<const __m256i*>(bytes + 32));
  }
  Mask Equal(char value) const {
    const __m256i wanted = _mm256_set1_epi8(value);
    return {{_mm256_cmpeq_epi8(part[0], wanted), _mm256_cmpeq_epi8(part[1], wanted)}};
  }
  Mask Within(uint8_t low, uint8_t high) const {
    const __m256i offset = _mm256_set1_epi8(static_cast<char>(low));
    const __m256i width = _mm256_set1_epi8(static_cast<char>(high - low));
    Mask mask;
    for (int i = 0; i < 2; ++i) {
      const __m256i moved = _mm256_sub_epi8(part[i], offset);
      mask.part[i] = _mm256_cmpeq_epi8(_mm256_min_epu8(moved, width), moved);
    }
    return mask;
  }
  Block Lowered() const {
    Block lowered = *this;
    for (__m256i& bytes : lowered.part) bytes = _mm256_or_si256(bytes, _mm256_set1_epi8(0x20));
    return lowered;
  }
};

#include "words/scan_loop.inc"

}  // namespace
}  // namespace scan_avx2

void ScanAvx2(Scan* scan) { scan_avx2::ScanText(scan); }

}  // namespace phraseweld

#if defined(__clang__)
#pragma clang attribute pop
#else
#pragma GCC pop_options
#endif

#endif  // defined(__x86_64__)
