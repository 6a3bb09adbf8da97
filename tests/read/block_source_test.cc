#include <fcntl.h>
#include <gmock/gmock.h>
#include <gtest/gtest.h>
#include <sys/stat.h>
#include <unistd.h>
#include <xxhash.h>

#include <thread>

#include "read/collect.h"
#include "support/compress.h"
#include "support/temp_folder.h"

namespace phraseweld {
namespace {

using ::testing::AllOf;
using ::testing::Each;
using ::testing::ElementsAre;
using ::testing::HasSubstr;
using ::testing::SizeIs;

bool StartsWithLetter(std::string_view rest) { return rest[0] >= 'a' && rest[0] <= 'z'; }

std::string Words(size_t size, size_t words_in_a_line) {
  std::string text;
  for (size_t word = 1; text.size() < size; ++word) {
    text += "word" + std::to_string(word % 1000);
    text += word % words_in_a_line == 0 ? '\n' : ' ';
  }
  return text;
}

class BlockSourceTest : public testing::Test {
 protected:
  absl::StatusOr<Collected> Read(const std::vector<std::string>& paths, ReadOptions options) {
    if (!options.may_cut_before) options.may_cut_before = StartsWithLetter;
    std::vector<InputFile> inputs;
    for (const std::string& path : paths) inputs.push_back({.path = path, .relative = path});
    return Collect(inputs, options);
  }
  TempFolder folder_;
};

TEST_F(BlockSourceTest, FilesFollowOneAnotherAndHaveTheirDigests) {
  const std::string text = Words(3000, 7);
  const std::string zst = ZstdFrame(text);
  const auto read = Read({folder_.Put("a", text), folder_.Put("empty", ""),
                          folder_.Put("b.zst", zst), folder_.Put("c", "end")},
                         OptionsFor(ReadLayout::kLines, 500));
  ASSERT_TRUE(read.ok()) << read.status();
  EXPECT_THAT(read->files, ElementsAre(text, "", text, "end"));
  ASSERT_THAT(read->digests, SizeIs(4));
  const std::vector<std::string> stored = {text, "", zst, "end"};
  for (size_t i = 0; i < stored.size(); ++i) {
    EXPECT_EQ(read->digests[i].stored_bytes, stored[i].size());
    EXPECT_EQ(read->digests[i].text_bytes, read->files[i].size());
    const XXH128_hash_t hash = XXH3_128bits(stored[i].data(), stored[i].size());
    EXPECT_EQ(read->digests[i].stored_hash, (Hash128{hash.high64, hash.low64}));
  }
}

TEST_F(BlockSourceTest, BlocksDoNotDependOnTheSizesOfReads) {
  const std::string text = Words(60000, 9);
  std::string members, frames;
  for (size_t at = 0; at < text.size(); at += 700) {
    members += GzipMember(std::string_view(text).substr(at, 700));
    frames += ZstdFrame(std::string_view(text).substr(at, 900).substr(0, 700));
  }
  const std::string pipe_path = folder_.Path("pipe");
  ASSERT_EQ(mkfifo(pipe_path.c_str(), 0600), 0);
  for (const ReadLayout layout : {ReadLayout::kText, ReadLayout::kLines, ReadLayout::kParagraphs}) {
    const ReadOptions options = OptionsFor(layout, 1000);
    const auto plain = Read({folder_.Put("plain", text)}, options);
    ASSERT_TRUE(plain.ok()) << plain.status();
    EXPECT_GT(plain->blocks.size(), 50u);
    EXPECT_EQ(Read({folder_.Put("a.gz", members)}, options)->blocks, plain->blocks);
    EXPECT_EQ(Read({folder_.Put("a.zst", frames)}, options)->blocks, plain->blocks);
    std::thread writer([&] {
      const int pipe = open(pipe_path.c_str(), O_WRONLY);
      for (size_t at = 0; at < text.size(); at += 37) {
        const size_t size = std::min<size_t>(37, text.size() - at);
        EXPECT_EQ(write(pipe, text.data() + at, size), static_cast<ssize_t>(size));
      }
      close(pipe);
    });
    const auto piped = Read({pipe_path}, options);
    writer.join();
    EXPECT_EQ(piped->blocks, plain->blocks);
  }
}

TEST_F(BlockSourceTest, ALongLineOfWordsRunsInAFewBlockSizes) {
  constexpr size_t kBlock = size_t{64} << 10;
  const std::string line = Words(6'000'000, 1'000'000'000);
  const std::string path = folder_.Put("long", line);
  for (const ReadLayout layout : {ReadLayout::kText, ReadLayout::kLines, ReadLayout::kParagraphs}) {
    const auto read = Read({path}, OptionsFor(layout, kBlock));
    ASSERT_TRUE(read.ok()) << read.status();
    EXPECT_EQ(read->files[0], line);
    EXPECT_EQ(read->documents.size(), 1u);
    EXPECT_LE(read->largest_capacity, 3 * kBlock);
    for (const std::string& block : read->blocks) EXPECT_LE(block.size(), kBlock);
  }
}

TEST_F(BlockSourceTest, ABlockGrowsWhereItCannotBeCutAndNoFurther) {
  const std::string wall(5000, 'x');
  const std::string bytes = "a b " + wall + " c d " + wall + "\ne f";
  for (const ReadLayout layout : {ReadLayout::kText, ReadLayout::kLines, ReadLayout::kParagraphs}) {
    const auto read = Read({folder_.Put("a", bytes)}, OptionsFor(layout, 10));
    EXPECT_THAT(read->blocks, ElementsAre("a b ", wall + " ", "c d ", wall + "\n", "e f"));
  }
  const std::string json = "{\"t\":\"" + wall + "\"}\n{}\n{}\n{\"t\":\"" + wall + "\"}";
  const auto read = Read({folder_.Put("j", json)}, OptionsFor(ReadLayout::kJsonLines, 10));
  EXPECT_THAT(read->blocks,
              ElementsAre("{\"t\":\"" + wall + "\"}\n", "{}\n{}\n", "{\"t\":\"" + wall + "\"}"));
}

TEST_F(BlockSourceTest, ShortLinesAfterALongOneGetShortBlocksAgain) {
  std::string bytes = "{\"t\":\"" + std::string(3'000'000, 'x') + "\"}\n";
  for (int line = 0; line < 20000; ++line) bytes += "{\"t\":\"short\"}\n";
  const auto read = Read({folder_.Put("a", bytes)}, OptionsFor(ReadLayout::kJsonLines, 4096));
  ASSERT_TRUE(read.ok()) << read.status();
  EXPECT_EQ(read->documents.size(), 20001u);
  for (size_t i = 1; i < read->blocks.size(); ++i) EXPECT_LE(read->blocks[i].size(), 4096u);
}

TEST_F(BlockSourceTest, ErrorsNameTheFileAndStay) {
  const auto message = [&](const std::string& path) {
    return std::string(Read({path}, {}).status().message());
  };
  EXPECT_THAT(message(folder_.Path("absent")),
              AllOf(HasSubstr(folder_.Path("absent")), HasSubstr("No such file")));
  EXPECT_THAT(message(folder_.path()), AllOf(HasSubstr(folder_.path()), HasSubstr("directory")));
  const std::string gz = GzipMember(Words(5000, 5));
  for (const size_t cut : {size_t{0}, size_t{5}, gz.size() / 2, gz.size() - 1}) {
    const std::string path = folder_.Put("cut.gz", gz.substr(0, cut));
    EXPECT_THAT(message(path), AllOf(HasSubstr(path), HasSubstr("is cut"))) << cut;
  }
  BlockSource source({{.path = folder_.Path("absent"), .relative = "absent"}}, {});
  Block block;
  const absl::Status failure = source.Next(&block).status();
  EXPECT_EQ(failure.code(), absl::StatusCode::kNotFound);
  EXPECT_EQ(source.Next(&block).status(), failure);
}

TEST_F(BlockSourceTest, TheEndIsToldAgainAndAgain) {
  BlockSource source({{.path = folder_.Put("a", "text"), .relative = "a"}}, {});
  Block block;
  EXPECT_TRUE(source.Next(&block).value());
  EXPECT_FALSE(source.Next(&block).value());
  EXPECT_FALSE(source.Next(&block).value());
}

TEST_F(BlockSourceTest, ABlockMayBeMovedOnceItIsParsed) {
  const std::vector<InputFile> inputs = {
      {.path = folder_.Put("a", "{\"t\":\"\\n\"}"), .relative = "a"}};
  const ReadOptions options = OptionsFor(ReadLayout::kJsonLines);
  BlockSource source(inputs, options);
  BlockParser parser(inputs, options);
  auto block = std::make_unique<Block>();
  ASSERT_TRUE(source.Next(block.get()).value());
  ASSERT_TRUE(parser.Parse(block.get()).ok());
  const Block moved = std::move(*block);
  block.reset();
  EXPECT_EQ(moved.pieces.at(0).text, "\n");
}

}  // namespace
}  // namespace phraseweld
