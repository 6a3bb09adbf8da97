#include "files/file_system.h"

#include <gmock/gmock.h>
#include <gtest/gtest.h>
#include <sys/stat.h>
#include <unistd.h>

#include <filesystem>

#include "files/pattern.h"
#include "support/temp_folder.h"

namespace phraseweld {
namespace {

using ::testing::AllOf;
using ::testing::ElementsAre;
using ::testing::HasSubstr;
using ::testing::IsEmpty;

class FileSystemTest : public testing::Test {
 protected:
  std::string MessageOf(const absl::Status& status) { return std::string(status.message()); }
  TempFolder folder_;
  FileSystem& files_ = FileSystem::Posix();
};

TEST_F(FileSystemTest, WhatIsWrittenIsReadBack) {
  const std::string path = folder_.Path("a");
  auto file = files_.CreateWrite(path);
  ASSERT_TRUE(file.ok()) << file.status();
  ASSERT_TRUE((*file)->Append("one ").ok());
  ASSERT_TRUE((*file)->Append(std::string_view("\0two", 4)).ok());
  ASSERT_TRUE((*file)->Sync().ok());
  ASSERT_TRUE((*file)->Close().ok());
  EXPECT_EQ(ReadWhole(files_, path).value(), std::string("one \0two", 8));
}

TEST_F(FileSystemTest, ReadWholeTakesFilesWhoseSizeIsNotKnownBefore) {
  // /proc files say that they have no bytes.
  EXPECT_THAT(ReadWhole(files_, "/proc/self/status").value(), HasSubstr("Name:"));
  EXPECT_EQ(ReadWhole(files_, folder_.Put("empty", "")).value(), "");
  const std::string long_text(300000, 'x');
  EXPECT_EQ(ReadWhole(files_, folder_.Put("long", long_text)).value(), long_text);
}

TEST_F(FileSystemTest, ErrorsNameThePathTheOperationAndTheCause) {
  const std::string absent = folder_.Path("absent/file");
  const absl::Status open = files_.OpenRead(absent).status();
  EXPECT_EQ(open.code(), absl::StatusCode::kNotFound);
  EXPECT_EQ(MessageOf(open), "cannot open " + absent + ": No such file or directory");
  EXPECT_EQ(MessageOf(files_.CreateWrite(absent).status()),
            "cannot create " + absent + ": No such file or directory");
  EXPECT_EQ(MessageOf(files_.CreateScratch(absent).status()),
            "cannot create " + absent + ": No such file or directory");
  EXPECT_EQ(MessageOf(files_.OpenRead(folder_.path()).status()),
            "cannot read " + folder_.path() + ": Is a directory");
  EXPECT_EQ(MessageOf(files_.Rename(absent, folder_.Path("b"))),
            "cannot rename " + absent + " to " + folder_.Path("b") + ": No such file or directory");
  EXPECT_EQ(MessageOf(files_.SyncDirectory(absent)),
            "cannot open the folder " + absent + ": No such file or directory");
  EXPECT_EQ(MessageOf(files_.FreeBytes(absent).status()),
            "cannot ask for the free space at " + absent + ": No such file or directory");
  EXPECT_EQ(MessageOf(files_.ListFiles(absent).status()),
            "cannot list the folder " + absent + ": No such file or directory");
  const std::string file = folder_.Put("file", "");
  EXPECT_EQ(MessageOf(files_.MakeDirectories(file + "/below")),
            "cannot make the folder " + file + "/below: Not a directory");
}

TEST_F(FileSystemTest, AFullDiskIsToldWithAdvice) {
  auto file = files_.CreateWrite("/dev/full");
  ASSERT_TRUE(file.ok()) << file.status();
  const absl::Status status = (*file)->Append("x");
  EXPECT_EQ(status.code(), absl::StatusCode::kResourceExhausted);
  EXPECT_EQ(MessageOf(status),
            "cannot write to /dev/full: No space left on device; free some space there or choose "
            "another place");
}

TEST_F(FileSystemTest, StatTellsFilesFoldersAndDevicesApart) {
  const FileInfo file = files_.Stat(folder_.Put("a", "12345")).value();
  EXPECT_TRUE(file.exists && file.is_regular && !file.is_directory);
  EXPECT_EQ(file.size, 5u);
  const FileInfo folder = files_.Stat(folder_.path()).value();
  EXPECT_TRUE(folder.exists && folder.is_directory && !folder.is_regular);
  const FileInfo device = files_.Stat("/dev/null").value();
  EXPECT_TRUE(device.exists && !device.is_directory && !device.is_regular);
  EXPECT_FALSE(files_.Stat(folder_.Path("absent")).value().exists);
  EXPECT_FALSE(files_.Stat(folder_.Path("a/below a file")).value().exists);
}

TEST_F(FileSystemTest, FoldersAreMadeListedAndRemoved) {
  ASSERT_TRUE(files_.MakeDirectories(folder_.Path("x/y/z")).ok());
  ASSERT_TRUE(files_.MakeDirectories(folder_.Path("x/y")).ok());
  folder_.Put("x/y/z/1", "");
  folder_.Put("x/b", "");
  folder_.Put("x/B", "");
  folder_.Put("x/\xC3\xA9", "");
  std::filesystem::create_symlink(folder_.Path("x/b"), folder_.Path("x/link"));
  EXPECT_THAT(files_.ListFiles(folder_.Path("x")).value(),
              ElementsAre("B", "b", "y/z/1", "\xC3\xA9"));
  EXPECT_TRUE(files_.SyncDirectory(folder_.Path("x")).ok());
  EXPECT_GT(files_.FreeBytes(folder_.path()).value(), 0u);
  ASSERT_TRUE(files_.RemoveAll(folder_.Path("x")).ok());
  EXPECT_FALSE(folder_.Has("x"));
  EXPECT_TRUE(files_.RemoveAll(folder_.Path("x")).ok());
}

TEST_F(FileSystemTest, RenameReplacesAFile) {
  ASSERT_TRUE(files_.Rename(folder_.Put("new", "new"), folder_.Put("old", "old")).ok());
  EXPECT_EQ(folder_.Get("old"), "new");
  EXPECT_FALSE(folder_.Has("new"));
}

TEST_F(FileSystemTest, ScratchIsWrittenAndReadAtAnyPlace) {
  auto scratch = files_.CreateScratch(folder_.Path("s"));
  ASSERT_TRUE(scratch.ok()) << scratch.status();
  ASSERT_TRUE((*scratch)->WriteAt(100, "later").ok());
  ASSERT_TRUE((*scratch)->WriteAt(0, "early").ok());
  char bytes[5];
  ASSERT_TRUE((*scratch)->ReadAt(100, bytes, 5).ok());
  EXPECT_EQ(std::string_view(bytes, 5), "later");
  ASSERT_TRUE((*scratch)->ReadAt(0, bytes, 5).ok());
  EXPECT_EQ(std::string_view(bytes, 5), "early");
  const absl::Status beyond = (*scratch)->ReadAt(102, bytes, 5);
  EXPECT_EQ(beyond.code(), absl::StatusCode::kDataLoss);
  EXPECT_THAT(MessageOf(beyond), HasSubstr("it ends at byte 105, 2 bytes too early"));
  EXPECT_GE((*scratch)->descriptor(), 0);
}

TEST_F(FileSystemTest, StandardInputIsReadAndStaysOpen) {
  int ends[2];
  ASSERT_EQ(pipe(ends), 0);
  const int kept = dup(STDIN_FILENO);
  ASSERT_EQ(dup2(ends[0], STDIN_FILENO), STDIN_FILENO);
  ASSERT_EQ(write(ends[1], "piped", 5), 5);
  close(ends[1]);
  EXPECT_EQ(ReadWhole(files_, "-").value(), "piped");
  EXPECT_NE(dup2(kept, STDIN_FILENO), -1);
  struct stat info {};
  EXPECT_EQ(fstat(STDIN_FILENO, &info), 0);
  close(kept);
  close(ends[0]);
}

TEST_F(FileSystemTest, PatternsExpandInByteOrder) {
  for (const char* name : {"b.txt", "a.txt", "B.txt", "a.md", "sub/c.txt", "[x].txt"}) {
    folder_.Put(name, "");
  }
  const auto expand = [&](const std::string& pattern) {
    std::vector<std::string> names = ExpandPattern(folder_.Path(pattern)).value();
    for (std::string& name : names) name = name.substr(folder_.path().size() + 1);
    return names;
  };
  EXPECT_THAT(expand("*.txt"), ElementsAre("B.txt", "[x].txt", "a.txt", "b.txt"));
  EXPECT_THAT(expand("[ab].*"), ElementsAre("a.md", "a.txt", "b.txt"));
  EXPECT_THAT(expand("*/?.txt"), ElementsAre("sub/c.txt"));
  EXPECT_THAT(expand("\\[x\\].txt"), ElementsAre("[x].txt"));
  EXPECT_THAT(expand("*.pdf"), IsEmpty());
  EXPECT_THAT(expand("absent/*"), IsEmpty());
  EXPECT_THAT(expand("a.md/*"), IsEmpty());
  EXPECT_TRUE(IsPattern("a*") && IsPattern("a?") && IsPattern("[a]") && IsPattern("\\a"));
  EXPECT_FALSE(IsPattern("a{b}~c"));
}

}  // namespace
}  // namespace phraseweld
