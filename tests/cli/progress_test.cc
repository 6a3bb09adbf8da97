#include "cli/progress.h"

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include <algorithm>
#include <atomic>
#include <sstream>
#include <thread>
#include <vector>

#include "base/strings.h"
#include "base/utf8.h"

namespace phraseweld {
namespace {

constexpr uint64_t kMebibyte = 1 << 20;

class ProgressTest : public testing::Test {
 protected:
  void Terminal(int width) {
    console_.err_is_terminal = true;
    width_ = width;
  }
  Progress::Clock Clock() {
    return [this] { return now_; };
  }
  // What was written since the last call.
  std::string Written() {
    const std::string text = err_.str();
    err_.str("");
    return text;
  }

  std::ostringstream out_;
  std::ostringstream err_;
  int width_ = 80;
  double now_ = 1000;
  Console console_{&out_, &err_, false, [this] { return width_; }};
};

ProgressPoint Counting(uint64_t done) {
  return {2, "longer", "counting", done * kMebibyte, 400 * kMebibyte, "bytes"};
}

TEST_F(ProgressTest, ATerminalHasOneLiveLineThatIsGoneInTheEnd) {
  Terminal(80);
  {
    Progress progress(console_, Clock());
    progress.Update(Counting(0));
    EXPECT_EQ(Written(), "\r\x1b[Kpass 2 (longer): counting, 0 B of 400 MiB (0%)");
    now_ += 2;
    progress.Update(Counting(100));
    EXPECT_EQ(Written(),
              "\r\x1b[Kpass 2 (longer): counting, 100 MiB of 400 MiB (25%), 50.0 MiB/s, 6 s left");
  }
  EXPECT_EQ(Written(), "\r\x1b[K");
  EXPECT_EQ(out_.str(), "");
}

TEST_F(ProgressTest, ATerminalIsDrawnToAtMostTenTimesASecond) {
  Terminal(80);
  Progress progress(console_, Clock());
  for (int step = 0; step < 1000; ++step) {
    now_ = 1000 + step * 0.001;
    progress.Update(Counting(static_cast<uint64_t>(step)));
  }
  const std::string text = Written();
  const auto draws = std::count(text.begin(), text.end(), '\r');
  EXPECT_LE(draws, 10);
  EXPECT_GE(draws, 9);
}

TEST_F(ProgressTest, TheLineIsNarrowerThanTheTerminalEvenWhenThatChanges) {
  Terminal(30);
  Progress progress(console_, Clock());
  progress.Update({1, "漢字漢字漢字漢字漢字漢字漢字漢字", "counting", 1, 2, "words"});
  EXPECT_LE(DisplayWidth(Written().substr(4)), 29u);
  width_ = 10;
  now_ += 1;
  progress.Update(Counting(1));
  EXPECT_EQ(Written(), "\r\x1b[Kpass 2 (l");
  width_ = 0;
  now_ += 1;
  progress.Update(Counting(1));
  EXPECT_EQ(Written(), "\r\x1b[K");
}

TEST_F(ProgressTest, ElsewhereAPlainLineComesEveryFiveSeconds) {
  Progress progress(console_, Clock());
  for (int step = 0; step <= 120; ++step) {
    now_ = 1000 + step * 0.1;
    progress.Update(Counting(static_cast<uint64_t>(step)));
  }
  EXPECT_EQ(Written(),
            "pass 2 (longer): counting, 50.0 MiB of 400 MiB (12%), 10.0 MiB/s, 35 s left\n"
            "pass 2 (longer): counting, 100 MiB of 400 MiB (25%), 10.0 MiB/s, 30 s left\n");
}

TEST_F(ProgressTest, ShortWorkLeavesNoPlainLine) {
  {
    Progress progress(console_, Clock());
    progress.Update(Counting(1));
    now_ += 4.9;
    progress.Update(Counting(400));
  }
  EXPECT_EQ(Written(), "");
}

TEST_F(ProgressTest, RateAndTimeLeftAreThoseOfTheStage) {
  Terminal(100);
  Progress progress(console_, Clock());
  progress.Update({0, "", "reading", 0, 0, "documents"});
  Written();
  now_ += 10;
  progress.Update({0, "", "reading", 12345, 0, "documents"});
  EXPECT_EQ(Written(), "\r\x1b[Kreading, 12,345 documents, 1,235 documents/s");
  now_ += 10;
  progress.Update({1, "pairs", "merging", 1000, 5000, "passages"});  // a new stage, taken up midway
  EXPECT_EQ(Written(), "\r\x1b[Kpass 1 (pairs): merging, 1,000 of 5,000 passages (20%)");
  now_ += 10;
  progress.Update({1, "pairs", "merging", 2000, 5000, "passages"});
  EXPECT_EQ(Written(),
            "\r\x1b[Kpass 1 (pairs): merging, 2,000 of 5,000 passages (40%), 100 passages/s, 30 s "
            "left");
  now_ += 10;
  progress.Update({2, "pairs", "merging", 0, 5000, "passages"});  // the same stage of the next pass
  EXPECT_EQ(Written(), "\r\x1b[Kpass 2 (pairs): merging, 0 of 5,000 passages (0%)");
  now_ += 10;
  progress.Update({2, "pairs", "merging", 6000, 5000, "passages"});  // more than was foreseen
  EXPECT_EQ(Written(),
            "\r\x1b[Kpass 2 (pairs): merging, 6,000 of 5,000 passages (100%), 600 passages/s");
}

TEST_F(ProgressTest, ARemarkStandsOnALineOfItsOwn) {
  Terminal(80);
  Progress progress(console_, Clock());
  progress.Say("going on after pass 1");
  EXPECT_EQ(Written(), "going on after pass 1\n");
  progress.Update(Counting(0));
  Written();
  progress.Say("3 bad lines kept");
  EXPECT_EQ(Written(), "\r\x1b[K3 bad lines kept\n");
  progress.Clear();
  EXPECT_EQ(Written(), "");
}

TEST_F(ProgressTest, ManyThreadsMayCallAtOnce) {
  now_ = 0;
  std::atomic<int> ticks = 0;
  Progress progress(console_, [&ticks] { return ticks++ * 1.0; });
  std::vector<std::thread> threads;
  for (int thread = 0; thread < 4; ++thread) {
    threads.emplace_back([&progress] {
      for (uint64_t step = 0; step < 500; ++step) progress.Update(Counting(1));
    });
  }
  for (std::thread& thread : threads) thread.join();
  const std::string text = Written();
  EXPECT_EQ(std::count(text.begin(), text.end(), '\n'), 400);  // one in five of 2000 ticks
  for (const std::string_view line :
       Split(std::string_view(text).substr(0, text.size() - 1), '\n')) {
    EXPECT_THAT(std::string(line), testing::StartsWith("pass 2 (longer): counting, "));
  }
}

}  // namespace
}  // namespace phraseweld
