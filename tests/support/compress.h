#ifndef PHRASEWELD_TESTS_SUPPORT_COMPRESS_H_
#define PHRASEWELD_TESTS_SUPPORT_COMPRESS_H_

#include <zlib.h>
#include <zstd.h>

#include <stdexcept>
#include <string>
#include <string_view>

namespace phraseweld {

// One zstd frame with a checksum, by the library itself.
inline std::string ZstdFrame(std::string_view bytes) {
  std::string frame(ZSTD_compressBound(bytes.size()), '\0');
  ZSTD_CCtx* context = ZSTD_createCCtx();
  ZSTD_CCtx_setParameter(context, ZSTD_c_checksumFlag, 1);
  const size_t size =
      ZSTD_compress2(context, frame.data(), frame.size(), bytes.data(), bytes.size());
  ZSTD_freeCCtx(context);
  if (ZSTD_isError(size)) throw std::runtime_error(ZSTD_getErrorName(size));
  frame.resize(size);
  return frame;
}

// One gzip member, by the library itself.
inline std::string GzipMember(std::string_view bytes) {
  z_stream stream{};
  deflateInit2(&stream, Z_DEFAULT_COMPRESSION, Z_DEFLATED, MAX_WBITS + 16, 8, Z_DEFAULT_STRATEGY);
  std::string member(deflateBound(&stream, bytes.size()), '\0');
  stream.next_in = reinterpret_cast<Bytef*>(const_cast<char*>(bytes.data()));
  stream.avail_in = static_cast<uInt>(bytes.size());
  stream.next_out = reinterpret_cast<Bytef*>(member.data());
  stream.avail_out = static_cast<uInt>(member.size());
  const int result = deflate(&stream, Z_FINISH);
  member.resize(stream.total_out);
  deflateEnd(&stream);
  if (result != Z_STREAM_END) throw std::runtime_error("deflate failed");
  return member;
}

}  // namespace phraseweld

#endif  // PHRASEWELD_TESTS_SUPPORT_COMPRESS_H_
