#include "base/nearest.h"

#include <gtest/gtest.h>

#include <algorithm>
#include <array>
#include <deque>
#include <map>
#include <random>

namespace phraseweld {
namespace {

// The distance by its definition: a breadth-first search over all texts of at most `longest`
// letters a and b that single edits lead to.
std::map<std::string, size_t> DistancesFrom(const std::string& from, size_t longest) {
  std::map<std::string, size_t> distances = {{from, 0}};
  std::deque<std::string> queue = {from};
  while (!queue.empty()) {
    const std::string text = queue.front();
    queue.pop_front();
    const size_t next_distance = distances[text] + 1;
    const auto reach = [&](const std::string& next) {
      if (next.size() <= longest && distances.emplace(next, next_distance).second) {
        queue.push_back(next);
      }
    };
    for (size_t at = 0; at <= text.size(); ++at) {
      for (const char letter : {'a', 'b', 'c'}) {
        reach(text.substr(0, at) + letter + text.substr(at));
        if (at < text.size()) reach(text.substr(0, at) + letter + text.substr(at + 1));
      }
      if (at < text.size()) reach(text.substr(0, at) + text.substr(at + 1));
      if (at + 1 < text.size()) {
        std::string swapped = text;
        std::swap(swapped[at], swapped[at + 1]);
        reach(swapped);
      }
    }
  }
  return distances;
}

TEST(EditDistance, IsTheFewestEditsThatASearchFinds) {
  for (const std::string from : {"", "a", "ab", "ca", "abc", "abab", "cabb"}) {
    for (const auto& [to, distance] : DistancesFrom(from, 6)) {
      if (to.size() > 4) continue;
      EXPECT_EQ(EditDistance(from, to), distance) << from << " to " << to;
    }
  }
}

TEST(EditDistance, IsSymmetric) {
  std::mt19937 random(3);
  const auto text = [&random] {
    std::string made(random() % 12, ' ');
    for (char& letter : made) letter = static_cast<char>('a' + random() % 4);
    return made;
  };
  for (int round = 0; round < 2000; ++round) {
    const std::string left = text();
    const std::string right = text();
    EXPECT_EQ(EditDistance(left, right), EditDistance(right, left));
  }
}

constexpr std::array<std::string_view, 6> kNames = {"bridge", "fold", "function_words",
                                                    "t",      "dice", "pmi2"};

TEST(NearestName, FindsTheMisspelt) {
  EXPECT_EQ(NearestName("brige", kNames), "bridge");
  EXPECT_EQ(NearestName("bridg", kNames), "bridge");
  EXPECT_EQ(NearestName("birdge", kNames), "bridge");
  EXPECT_EQ(NearestName("functionwords", kNames), "function_words");
  EXPECT_EQ(NearestName("function-word", kNames), "function_words");
  EXPECT_EQ(NearestName("FOLD", kNames), "fold");
  EXPECT_EQ(NearestName("pmi", kNames), "pmi2");
}

TEST(NearestName, KeepsSilentWhenNothingIsNear) {
  EXPECT_EQ(NearestName("", kNames), std::nullopt);
  EXPECT_EQ(NearestName("x", kNames), std::nullopt);
  EXPECT_EQ(NearestName("threads", kNames), std::nullopt);
  EXPECT_EQ(NearestName("gold-rush", kNames), std::nullopt);
  EXPECT_EQ(NearestName(std::string(100000, 'b'), kNames), std::nullopt);
  EXPECT_EQ(NearestName("bridge", {}), std::nullopt);
}

TEST(NearestName, TheFirstOfEquallyNearNamesWins) {
  constexpr std::array<std::string_view, 2> kPair = {"pmi3", "pmi2"};
  EXPECT_EQ(NearestName("pmi4", kPair), "pmi3");
}

TEST(DidYouMean, IsPutBehindAnError) {
  EXPECT_EQ(DidYouMean("dize", kNames), "; did you mean 'dice'?");
  EXPECT_EQ(DidYouMean("zzz", kNames), "");
}

}  // namespace
}  // namespace phraseweld
