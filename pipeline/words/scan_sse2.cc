#include "words/scan.h"

#if defined(__x86_64__)

#include <emmintrin.h>

#include <bit>
#include <cstring>

namespace phraseweld {
namespace scan_sse2 {
namespace {

struct Mask {
  __m128i part[4];
};

inline Mask operator|(const Mask& a, const Mask& b) {
  return {{_mm_or_si128(a.part[0], b.part[0]), _mm_or_si128(a.part[1], b.part[1]),
           _mm_or_si128(a.part[2], b.part[2]), _mm_or_si128(a.part[3], b.part[3])}};
}

inline uint64_t Bits(const Mask& mask) {
  uint64_t bits = 0;
  for (int i = 3; i >= 0; --i) {
    bits = bits << 16 | static_cast<uint32_t>(_mm_movemask_epi8(mask.part[i]));
  }
  return bits;
}

struct Block {
  __m128i part[4];

  explicit Block(const char* bytes) {
    for (int i = 0; i < 4; ++i) {
      part[i] = _mm_loadu_si128(reinterpret_cast<const __m128i*>(bytes + 16 * i));
    }
  }
  Mask Equal(char value) const {
    Mask mask;
    for (int i = 0; i < 4; ++i) mask.part[i] = _mm_cmpeq_epi8(part[i], _mm_set1_epi8(value));
    return mask;
  }
  Mask Within(uint8_t low, uint8_t high) const {
    const __m128i offset = _mm_set1_epi8(static_cast<char>(low));
    const __m128i width = _mm_set1_epi8(static_cast<char>(high - low));
    Mask mask;
    for (int i = 0; i < 4; ++i) {
      const __m128i moved = _mm_sub_epi8(part[i], offset);
      mask.part[i] = _mm_cmpeq_epi8(_mm_min_epu8(moved, width), moved);
    }
    return mask;
  }
  Block Lowered() const {
    Block lowered = *this;
    for (__m128i& bytes : lowered.part) bytes = _mm_or_si128(bytes, _mm_set1_epi8(0x20));
    return lowered;
  }
};

#include "words/scan_loop.inc"

}  // namespace
}  // namespace scan_sse2

void ScanSse2(Scan* scan) { scan_sse2::ScanText(scan); }

}  // namespace phraseweld

#endif  // defined(__x86_64__)
