#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include <filesystem>

#include "read/corpus.h"
#include "support/temp_folder.h"

namespace phraseweld {
namespace {

using ::testing::AllOf;
using ::testing::ElementsAre;
using ::testing::HasSubstr;

class ResolveInputsTest : public testing::Test {
 protected:
  // Paths and patterns below the folder; "-" is itself.
  std::vector<std::string> Below(const std::vector<std::string>& patterns) {
    std::vector<std::string> full;
    for (const std::string& pattern : patterns) {
      full.push_back(pattern == "-" ? pattern : folder_.Path(pattern));
    }
    return full;
  }
  std::vector<std::string> Names(const std::vector<std::string>& patterns) {
    const auto inputs = ResolveInputs(Below(patterns));
    EXPECT_TRUE(inputs.ok()) << inputs.status();
    std::vector<std::string> names;
    for (const InputFile& input : inputs.value()) names.push_back(input.relative);
    return names;
  }
  std::string Fault(const std::vector<std::string>& patterns) {
    const absl::Status status = ResolveInputs(Below(patterns)).status();
    EXPECT_EQ(status.code(), absl::StatusCode::kInvalidArgument);
    return std::string(status.message());
  }
  TempFolder folder_;
};

TEST_F(ResolveInputsTest, PatternsExpandInByteOrderAndKeepTheirOwn) {
  for (const char* name : {"b.txt", "a.txt", "Z.txt", "c.md"}) folder_.Put(name, "");
  EXPECT_THAT(Names({"*.txt"}), ElementsAre("Z.txt", "a.txt", "b.txt"));
  EXPECT_THAT(Names({"c.md", "b.txt", "[aZ].txt"}), ElementsAre("c.md", "b.txt", "Z.txt", "a.txt"));
  EXPECT_EQ(ResolveInputs(Below({"c.md"}))->at(0).path, folder_.Path("c.md"));
}

TEST_F(ResolveInputsTest, NamesAreBelowTheCommonFolderLessTheCompression) {
  for (const char* name : {"x/1/a.jsonl.zst", "x/1/b.txt.gz", "x/2/c", "x/1/.gz.txt"}) {
    folder_.Put(name, "");
  }
  EXPECT_THAT(Names({"x/1/a.jsonl.zst", "x/2/c"}), ElementsAre("1/a.jsonl", "2/c"));
  EXPECT_THAT(Names({"x/1/*.gz", "x/1/a.jsonl.zst"}), ElementsAre("b.txt", "a.jsonl"));
  EXPECT_THAT(Names({"x/2/c"}), ElementsAre("c"));
  EXPECT_THAT(Names({"x/1/../2/c", "x/./1/b.txt.gz"}), ElementsAre("2/c", "1/b.txt"));
}

TEST_F(ResolveInputsTest, StandardInputHasANameOfItsOwn) {
  folder_.Put("x/a", "");
  EXPECT_THAT(Names({"-"}), ElementsAre("stdin"));
  EXPECT_THAT(Names({"x/a", "-"}), ElementsAre("a", "stdin"));
}

TEST_F(ResolveInputsTest, AFileWhoseNameLooksLikeAPatternIsFound) {
  folder_.Put("notes [1].txt", "");
  EXPECT_THAT(Names({"notes [1].txt"}), ElementsAre("notes [1].txt"));
}

TEST_F(ResolveInputsTest, PathsMayBeRelative) {
  folder_.Put("x/a", "");
  folder_.Put("x/y/b", "");
  const std::filesystem::path before = std::filesystem::current_path();
  std::filesystem::current_path(folder_.Path("x"));
  const auto inputs = ResolveInputs({"a", "y/*"});
  const auto twice = ResolveInputs({"a", folder_.Path("x/a")});
  std::filesystem::current_path(before);
  ASSERT_TRUE(inputs.ok()) << inputs.status();
  EXPECT_EQ(inputs->at(1).path, "y/b");
  EXPECT_EQ(inputs->at(1).relative, "y/b");
  EXPECT_THAT(std::string(twice.status().message()), HasSubstr("named twice"));
}

TEST_F(ResolveInputsTest, AllFaultsAreToldALineEach) {
  folder_.Put("a", "");
  folder_.Put("sub/b", "");
  const std::string fault = Fault({"a", "*.txt", "absent", "sub", "./a", "-", "-"});
  EXPECT_EQ(std::count(fault.begin(), fault.end(), '\n'), 4);
  EXPECT_THAT(fault, AllOf(HasSubstr("corpus.files: no file matches " + folder_.Path("*.txt")),
                           HasSubstr("\ncorpus.files: there is no file " + folder_.Path("absent")),
                           HasSubstr("\ncorpus.files: " + folder_.Path("sub") +
                                     " is a folder; name its files, as " + folder_.Path("sub/*")),
                           HasSubstr("\ncorpus.files: " + folder_.Path("./a") + " is named twice"),
                           HasSubstr("\ncorpus.files: standard input (-) is named twice")));
}

TEST_F(ResolveInputsTest, AFolderThatAPatternMatchesIsAFault) {
  folder_.Put("a", "");
  folder_.Put("sub/b", "");
  EXPECT_THAT(Fault({"*"}), HasSubstr(folder_.Path("sub") + " is a folder"));
}

TEST_F(ResolveInputsTest, AFileThatTwoPatternsMatchIsAFault) {
  folder_.Put("a.txt", "");
  EXPECT_THAT(Fault({"*.txt", "a*"}), HasSubstr(folder_.Path("a.txt") + " is named twice"));
}

TEST_F(ResolveInputsTest, NoTwoInputsMayBeRewrittenToOneName) {
  folder_.Put("a.txt", "");
  folder_.Put("a.txt.gz", "");
  EXPECT_THAT(Fault({"a.txt", "a.txt.gz"}),
              HasSubstr(folder_.Path("a.txt") + " and " + folder_.Path("a.txt.gz") +
                        " would both be rewritten to corpus/a.txt; rename one"));
  folder_.Put("stdin", "");
  EXPECT_THAT(Fault({"-", "stdin"}), HasSubstr("corpus/stdin"));
}

TEST_F(ResolveInputsTest, NoInputsNameMayBeAnothersFolder) {
  folder_.Put("a.gz", "");
  folder_.Put("a/b", "");
  EXPECT_THAT(Fault({"a.gz", "a/b"}), HasSubstr("which is the folder of " + folder_.Path("a/b")));
}

TEST_F(ResolveInputsTest, NoInputsAtAllIsAFault) {
  EXPECT_EQ(Fault({}), "corpus.files: no file is named");
}

}  // namespace
}  // namespace phraseweld
