#include <bit>
#include <cstring>

#include "words/scan.h"

namespace phraseweld {
namespace scan_scalar {
namespace {

using Mask = uint64_t;

uint64_t Bits(Mask mask) { return mask; }

struct Block {
  uint8_t bytes[64];

  explicit Block(const char* from) { std::memcpy(bytes, from, sizeof(bytes)); }
  Mask Within(uint8_t low, uint8_t high) const {
    Mask mask = 0;
    for (int i = 0; i < 64; ++i) mask |= uint64_t{bytes[i] >= low && bytes[i] <= high} << i;
    return mask;
  }
  Mask Equal(char value) const {
    return Within(static_cast<uint8_t>(value), static_cast<uint8_t>(value));
  }
  Block Lowered() const {
    Block lowered = *this;
    for (uint8_t& byte : lowered.bytes) byte |= 0x20;
    return lowered;
  }
};

#include "words/scan_loop.inc"

}  // namespace
}  // namespace scan_scalar

void ScanScalar(Scan* scan) { scan_scalar::ScanText(scan); }

}  // namespace phraseweld
