#include "files/streams.h"

#include <gmock/gmock.h>
#include <gtest/gtest.h>
#include <xxhash.h>

#include <random>

#include "support/compress.h"
#include "support/faulty_file_system.h"
#include "support/temp_folder.h"

namespace phraseweld {
namespace {

using ::testing::AllOf;
using ::testing::HasSubstr;
using ::testing::StartsWith;

Hash128 HashOf(std::string_view bytes) {
  const XXH128_hash_t hash = XXH3_128bits(bytes.data(), bytes.size());
  return {.high = hash.high64, .low = hash.low64};
}

// Words and noise, so that it compresses, but not to nothing.
std::string MixedBytes(size_t size) {
  std::mt19937 random(7);
  std::string bytes;
  while (bytes.size() < size) {
    bytes += "harbour light ";
    bytes += static_cast<char>(random());
  }
  bytes.resize(size);
  return bytes;
}

absl::StatusOr<std::string> ReadAll(FileSystem& files, const std::string& path, size_t step = 1000,
                                    std::unique_ptr<InputStream>* stream = nullptr) {
  PW_ASSIGN_OR_RETURN(std::unique_ptr<InputStream> input, InputStream::Open(files, path));
  std::string all, buffer(step, '\0');
  while (true) {
    PW_ASSIGN_OR_RETURN(const size_t got, input->Read(buffer.data(), buffer.size()));
    if (got == 0) break;
    all.append(buffer, 0, got);
  }
  if (stream != nullptr) *stream = std::move(input);
  return all;
}

absl::StatusOr<OutputDigest> WriteAll(FileSystem& files, const std::string& path,
                                      std::string_view bytes, bool compress, size_t step) {
  PW_ASSIGN_OR_RETURN(std::unique_ptr<OutputStream> output,
                      OutputStream::Create(files, path, compress));
  for (size_t at = 0; at < bytes.size(); at += step) {
    PW_RETURN_IF_ERROR(output->Append(bytes.substr(at, step)));
  }
  return output->Finish();
}

class StreamsTest : public testing::Test {
 protected:
  TempFolder folder_;
  FileSystem& files_ = FileSystem::Posix();
};

TEST_F(StreamsTest, HasherEqualsTheLibraryInOneGo) {
  const std::string bytes = MixedBytes(100000);
  Hasher hasher;
  for (size_t at = 0; at < bytes.size(); at += 777) {
    hasher.Update(std::string_view(bytes).substr(at, 777));
  }
  EXPECT_EQ(hasher.Value(), HashOf(bytes));
  // From memory: the XXH3-128 of no bytes with seed 0, as the reference program prints it.
  EXPECT_EQ(ToHex(Hasher().Value()), "99aa06d3014798d86001c324468d497f");
}

TEST_F(StreamsTest, PlainCompressedAndConcatenatedFilesReadAlike) {
  const std::string first = MixedBytes(700000), second = "tail";
  const std::string both = first + second;
  const std::vector<std::pair<std::string, std::string>> stored = {
      {"plain.txt", both},
      {"one.zst", ZstdFrame(both)},
      {"two.zst", ZstdFrame(first) + ZstdFrame(second)},
      {"empty-frame.zst", ZstdFrame("") + ZstdFrame(first) + ZstdFrame("") + ZstdFrame(second)},
      {"one.gz", GzipMember(both)},
      {"two.gz", GzipMember(first) + GzipMember(second)},
      {"empty-member.gz", GzipMember(first) + GzipMember("") + GzipMember(second)},
  };
  for (const auto& [name, bytes] : stored) {
    SCOPED_TRACE(name);
    folder_.Put(name, bytes);
    for (const size_t step : {size_t{1} << 20, size_t{4099}, size_t{13}}) {
      std::unique_ptr<InputStream> stream;
      const auto read = ReadAll(files_, folder_.Path(name), step, &stream);
      ASSERT_TRUE(read.ok()) << read.status();
      EXPECT_EQ(*read, both);
      EXPECT_EQ(stream->stored_bytes(), bytes.size());
      EXPECT_EQ(stream->stored_hash(), HashOf(bytes));
    }
    const OutputDigest digest = DigestFile(files_, folder_.Path(name)).value();
    EXPECT_EQ(digest.bytes, bytes.size());
    EXPECT_EQ(digest.hash, HashOf(bytes));
  }
}

TEST_F(StreamsTest, ACompressedFileOfNoBytesIsRead) {
  EXPECT_EQ(ReadAll(files_, folder_.Put("a.zst", ZstdFrame(""))).value(), "");
  EXPECT_EQ(ReadAll(files_, folder_.Put("a.gz", GzipMember(""))).value(), "");
  EXPECT_EQ(ReadAll(files_, folder_.Put("a.txt", "")).value(), "");
}

TEST_F(StreamsTest, AFileCutAtAnyByteIsAnErrorThatSaysWhere) {
  const std::string text = MixedBytes(120);
  for (const auto& [suffix, part, whole] :
       {std::tuple{".zst", "frame", ZstdFrame(text)}, {".gz", "member", GzipMember(text)}}) {
    ASSERT_EQ(ReadAll(files_, folder_.Put(std::string("w") + suffix, whole)).value(), text);
    // Alone, and as what follows a whole part. A cut between two parts leaves a whole file.
    for (const std::string& before : {std::string(), whole}) {
      for (size_t cut = before.empty() ? 0 : 1; cut < whole.size(); ++cut) {
        const std::string path =
            folder_.Put(std::string("cut") + suffix, before + whole.substr(0, cut));
        const auto read = ReadAll(files_, path, 50);
        ASSERT_EQ(read.status().code(), absl::StatusCode::kDataLoss) << cut;
        const std::string message(read.status().message());
        const std::string place =
            before.empty() && cut == 0
                ? "it is empty, with no " + std::string(part)
                : "ends at byte " + std::to_string(before.size() + cut) + ", inside a " + part;
        EXPECT_THAT(message, AllOf(StartsWith(path + " is cut: "), HasSubstr(place)));
      }
    }
  }
}

TEST_F(StreamsTest, DamageIsAnErrorThatSaysWhere) {
  const std::string text = MixedBytes(5000);
  std::string zst = ZstdFrame(text), gz = GzipMember(text);
  zst.back() ^= 1;         // of the frame's checksum
  gz[gz.size() - 8] ^= 1;  // of the member's CRC
  const std::vector<std::pair<std::string, std::string>> damaged = {
      {"sum.zst", zst},
      {"sum.gz", gz},
      {"text.zst", text},
      {"text.gz", text},
      {"after.zst", ZstdFrame(text) + "no frame at all"},
      {"after.gz", GzipMember(text) + "no member at all"},
  };
  for (const auto& [name, bytes] : damaged) {
    const std::string path = folder_.Put(name, bytes);
    const absl::Status status = ReadAll(files_, path).status();
    EXPECT_EQ(status.code(), absl::StatusCode::kDataLoss) << name;
    EXPECT_THAT(std::string(status.message()),
                AllOf(StartsWith(path + " is damaged: "), HasSubstr(" at byte ")));
  }
  EXPECT_THAT(std::string(ReadAll(files_, folder_.Path("sum.zst")).status().message()),
              HasSubstr("checksum"));
  EXPECT_THAT(std::string(ReadAll(files_, folder_.Path("sum.gz")).status().message()),
              HasSubstr("incorrect data check"));
}

TEST_F(StreamsTest, AnyFlippedBitOfAGzipBodyOrAZstdFrameIsNoticedOrHarmless) {
  const std::string text = MixedBytes(90);
  for (const auto& [name, whole] :
       {std::pair{"f.zst", ZstdFrame(text)}, {"f.gz", GzipMember(text)}}) {
    size_t noticed = 0;
    for (size_t bit = 0; bit < whole.size() * 8; ++bit) {
      std::string damaged = whole;
      damaged[bit / 8] = static_cast<char>(damaged[bit / 8] ^ (1 << (bit % 8)));
      const auto read = ReadAll(files_, folder_.Put(name, damaged));
      if (read.ok()) {
        // Only bits that mean nothing to the text (a gzip header's time and system).
        ASSERT_EQ(*read, text) << name << " bit " << bit;
      } else {
        ++noticed;
      }
    }
    EXPECT_GT(noticed, whole.size() * 8 - 80) << name;
  }
}

TEST_F(StreamsTest, OutputIsReadBackAndItsDigestIsTheFiles) {
  for (const size_t size : {0, 1, 5000, 262143, 262144, 262145, 1000000}) {
    const std::string bytes = MixedBytes(size);
    for (const bool compress : {false, true}) {
      SCOPED_TRACE(testing::Message() << size << (compress ? " zstd" : " plain"));
      const std::string name = compress ? "out.zst" : "out";
      const auto digest = WriteAll(files_, folder_.Path(name), bytes, compress, 999);
      ASSERT_TRUE(digest.ok()) << digest.status();
      const std::string stored = folder_.Get(name);
      EXPECT_EQ(digest->bytes, stored.size());
      EXPECT_EQ(digest->hash, HashOf(stored));
      EXPECT_EQ(ReadAll(files_, folder_.Path(name)).value(), bytes);
      EXPECT_FALSE(folder_.Has(name + ".part"));
    }
  }
}

TEST_F(StreamsTest, StoredBytesDoNotDependOnHowTheCallsWereCut) {
  const std::string bytes = MixedBytes(900000);
  for (const bool compress : {false, true}) {
    const auto once = WriteAll(files_, folder_.Path("a"), bytes, compress, bytes.size());
    for (const size_t step : {100, 262144, 300000}) {
      EXPECT_EQ(WriteAll(files_, folder_.Path("a"), bytes, compress, step)->hash, once->hash);
    }
  }
}

TEST_F(StreamsTest, ACompressedOutputCarriesAChecksum) {
  ASSERT_TRUE(WriteAll(files_, folder_.Path("a.zst"), MixedBytes(1000), true, 1000).ok());
  // RFC 8878, 3.1.1.1.1: bit 2 of the frame header's descriptor, the fifth byte.
  EXPECT_EQ(folder_.Get("a.zst")[4] & 4, 4);
}

TEST_F(StreamsTest, AnUnfinishedOutputLeavesTheOldFileAndNothingElse) {
  folder_.Put("a", "old");
  {
    auto output = OutputStream::Create(files_, folder_.Path("a"), false);
    ASSERT_TRUE(output.ok()) << output.status();
    ASSERT_TRUE((*output)->Append(MixedBytes(1000000)).ok());
    EXPECT_TRUE(folder_.Has("a.part"));
    EXPECT_EQ(folder_.Get("a"), "old");
  }
  EXPECT_EQ(folder_.Get("a"), "old");
  EXPECT_FALSE(folder_.Has("a.part"));
}

TEST_F(StreamsTest, WhicheverOperationFailsTheErrorSurfacesAndNoHalfFileHasTheName) {
  const std::string bytes = MixedBytes(600000);
  for (const bool compress : {false, true}) {
    int operation = 0;
    for (;; ++operation) {
      SCOPED_TRACE(operation);
      folder_.Put("a", "old");
      FaultyFileSystem faults(operation);
      const auto digest = WriteAll(faults, folder_.Path("a"), bytes, compress, 50000);
      EXPECT_FALSE(folder_.Has("a.part"));
      if (!faults.failed()) {
        ASSERT_TRUE(digest.ok()) << digest.status();
        break;
      }
      ASSERT_EQ(digest.status().code(), absl::StatusCode::kUnavailable);
      const std::string left = folder_.Get("a");
      if (left != "old") {
        // The name was given, and only the folder's sync failed: the file must be whole.
        EXPECT_THAT(std::string(digest.status().message()), HasSubstr("sync folder"));
        folder_.Put("copy.zst", left);
        EXPECT_EQ(compress ? ReadAll(files_, folder_.Path("copy.zst")).value() : left, bytes);
      }
    }
    // Stat, create, three writes or more, sync, close, rename, sync of the folder.
    EXPECT_GE(operation, 8);
  }
}

TEST_F(StreamsTest, AnErrorStaysAndFinishingTwiceIsOne) {
  FaultyFileSystem faults(2);  // the first append, after Stat and create
  auto output = OutputStream::Create(faults, folder_.Path("a"), false);
  ASSERT_TRUE(output.ok()) << output.status();
  const absl::Status failure = (*output)->Append(MixedBytes(300000));
  EXPECT_EQ(failure.code(), absl::StatusCode::kUnavailable);
  EXPECT_EQ((*output)->Append("more"), failure);
  EXPECT_EQ((*output)->Finish().status(), failure);

  auto whole = OutputStream::Create(files_, folder_.Path("b"), true);
  ASSERT_TRUE((*whole)->Finish().ok());
  EXPECT_EQ((*whole)->Finish().status().code(), absl::StatusCode::kFailedPrecondition);
  EXPECT_EQ((*whole)->Append("x").code(), absl::StatusCode::kFailedPrecondition);
}

TEST_F(StreamsTest, WhicheverReadFailsTheErrorSurfaces) {
  const std::string bytes = MixedBytes(600000);
  for (const auto& [name, stored] :
       {std::pair{"a.txt", bytes}, {"a.zst", ZstdFrame(bytes)}, {"a.gz", GzipMember(bytes)}}) {
    const std::string path = folder_.Put(name, stored);
    for (int operation = 0;; ++operation) {
      FaultyFileSystem faults(operation);
      const auto read = ReadAll(faults, path, 100000);
      if (!faults.failed()) {
        EXPECT_EQ(read.value(), bytes);
        EXPECT_GE(operation, 3);
        break;
      }
      EXPECT_EQ(read.status().code(), absl::StatusCode::kUnavailable) << operation;
    }
  }
}

TEST_F(StreamsTest, DevicesAreWrittenInPlaceAndFoldersRefused) {
  EXPECT_TRUE(WriteAll(files_, "/dev/null", "x", false, 1).ok());
  EXPECT_FALSE(files_.Stat("/dev/null").value().is_regular);
  EXPECT_THAT(std::string(WriteAll(files_, "/dev/full", "x", false, 1).status().message()),
              HasSubstr("No space left on device"));
  EXPECT_EQ(std::string(OutputStream::Create(files_, folder_.path(), false).status().message()),
            "cannot write " + folder_.path() + ": it is a folder; choose another name");
}

}  // namespace
}  // namespace phraseweld
