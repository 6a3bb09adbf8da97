#include "config/function_words.h"

#include <filesystem>
#include <fstream>
#include <set>
#include <sstream>

#include "config/job_fixture.h"

namespace phraseweld {
namespace {

using testing::Contains;
using testing::ElementsAre;
using testing::HasSubstr;
using testing::Not;
using testing::StartsWith;

class FunctionWords : public JobFixture {
 protected:
  std::string JobWith(const std::string& name) {
    return "corpus: {files: [a]}\nwords:\n  function_words: " + name + "\n";
  }
  std::vector<std::string> Read(const std::string& name) {
    return Good(JobWith(name)).words.function_word_list;
  }
};

TEST_F(FunctionWords, FourListsAreBuiltIn) {
  std::vector<std::string> languages;
  for (const auto& list : BuiltInFunctionWordLists()) languages.emplace_back(list.language);
  EXPECT_THAT(languages, ElementsAre("english", "french", "german", "spanish"));
}

TEST_F(FunctionWords, BuiltInListsAreTheFilesInTheTree) {
  for (const auto& list : BuiltInFunctionWordLists()) {
    std::ifstream file(std::string(PHRASEWELD_SOURCE_DIR) + "/configs/function-words/" +
                       std::string(list.language) + ".txt");
    std::ostringstream text;
    text << file.rdbuf();
    EXPECT_EQ(list.text, text.str());
  }
}

TEST_F(FunctionWords, BuiltInListsHoldEachWordOnceInLowerCase) {
  for (const auto& list : BuiltInFunctionWordLists()) {
    const auto words = Read(std::string(list.language));
    EXPECT_GE(words.size(), 150u) << list.language;
    const std::set<std::string> distinct(words.begin(), words.end());
    EXPECT_EQ(distinct.size(), words.size()) << list.language;
    for (const std::string& word : words) {
      for (const char byte : word) EXPECT_FALSE(byte >= 'A' && byte <= 'Z') << word;
    }
  }
}

TEST_F(FunctionWords, BuiltInListsHoldTheCommonestWords) {
  EXPECT_THAT(Read("english"), testing::IsSupersetOf({"the", "of", "and", "don't", "was", "not"}));
  EXPECT_THAT(Read("german"),
              testing::IsSupersetOf({"der", "und", "für", "nicht", "zum", "wurde"}));
  EXPECT_THAT(Read("french"), testing::IsSupersetOf({"le", "de", "à", "qu'il", "n'est", "pas"}));
  EXPECT_THAT(Read("spanish"), testing::IsSupersetOf({"el", "de", "según", "del", "no", "está"}));
}

TEST_F(FunctionWords, AFileHasOneWordALineAndComments) {
  const std::string path =
      folder_.Put("own.txt", "\xEF\xBB\xBFof\n# a comment\n\n  The  \r\nà # x\nlast");
  EXPECT_THAT(Read(path), ElementsAre("of", "The", "à", "last"));
}

TEST_F(FunctionWords, FaultsOfAListHaveTheirPlace) {
  const std::string path = folder_.Put("own.txt", "of\n  in to\n\xFF\n");
  EXPECT_EQ(Fault(JobWith(path)),
            "own.txt:2:5: more than one word; a list of function words has one a line\n"
            "      in to\n"
            "        ^\n"
            "own.txt:3:1: not UTF-8; save the list as UTF-8\n"
            "    ?\n"
            "    ^");
}

TEST_F(FunctionWords, AFileThatIsNotThereIsAFaultOfTheJob) {
  const std::string message = Fault(JobWith(folder_.Path("absent.txt")));
  EXPECT_THAT(message, StartsWith("demo.yaml:3:19: words.function_words: "));
  EXPECT_THAT(message, HasSubstr("absent.txt"));
}

// A name without "/" or "." is a file if it exists, seen from the working directory.
class InWorkingDirectory : public FunctionWords {
 protected:
  void SetUp() override {
    before_ = std::filesystem::current_path();
    std::filesystem::current_path(folder_.path());
  }
  void TearDown() override { std::filesystem::current_path(before_); }

 private:
  std::filesystem::path before_;
};

TEST_F(InWorkingDirectory, APlainNameMayBeAFile) {
  folder_.Put("mine", "of\n");
  EXPECT_THAT(Read("mine"), ElementsAre("of"));
  EXPECT_THAT(Fault(JobWith("mime")), HasSubstr("'mime' is neither a file nor one of"));
}

TEST_F(InWorkingDirectory, ABuiltInListComesBeforeAFileOfItsName) {
  folder_.Put("english", "zzz\n");
  folder_.Put("none", "zzz\n");
  EXPECT_THAT(Read("english"), Not(Contains("zzz")));
  EXPECT_THAT(Read("./english"), ElementsAre("zzz"));
  EXPECT_TRUE(Read("none").empty());
}

}  // namespace
}  // namespace phraseweld
