#include "words/scan.h"

#if defined(__x86_64__)

#include <immintrin.h>

#include <bit>
#include <cstring>

// What follows may use AVX-512; what the headers above define may not, since other files share it.
#if defined(__clang__)
#pragma clang attribute push( \
    __attribute__((target("avx2,avx512f,avx512bw,bmi,bmi2,popcnt,lzcnt"))), apply_to = function)
#else
#pragma GCC push_options
#pragma GCC target("avx2,avx512f,avx512bw,bmi,bmi2,popcnt,lzcnt")
#endif

namespace phraseweld {
namespace scan_avx512 {
namespace {

using Mask = __mmask64;

inline uint64_t Bits(Mask mask) { return mask; }

struct Block {
  __m512i bytes;

  explicit Block(const char* from) : bytes(_mm512_loadu_si512(from)) {}
  explicit Block(__m512i from) : bytes(from) {}
  Mask Equal(char value) const { return _mm512_cmpeq_epi8_mask(bytes, _mm512_set1_epi8(value)); }
  Mask Within(uint8_t low, uint8_t high) const {
    const __m512i moved = _mm512_sub_epi8(bytes, _mm512_set1_epi8(static_cast<char>(low)));
    return _mm512_cmple_epu8_mask(moved, _mm512_set1_epi8(static_cast<char>(high - low)));
  }
  Block Lowered() const { return Block(_mm512_or_si512(bytes, _mm512_set1_epi8(0x20))); }
};

#include "words/scan_loop.inc"

}  // namespace
}  // namespace scan_avx512

void ScanAvx512(Scan* scan) { scan_avx512::ScanText(scan); }

}  // namespace phraseweld

#if defined(__clang__)
#pragma clang attribute pop
#else
#pragma GCC pop_options
#endif

#endif  // defined(__x86_64__)
