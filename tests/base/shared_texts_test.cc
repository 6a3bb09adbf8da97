#include "base/shared_texts.h"

#include <gtest/gtest.h>

#include <map>
#include <random>
#include <string>
#include <thread>
#include <vector>

#include "absl/hash/hash.h"
#include "absl/strings/str_cat.h"

namespace phraseweld {
namespace {

TEST(TextShard, RefusesNewTextsWhenFullAndKeepsTheOld) {
  HugePool pool;
  TextShard shard(3, &pool);
  const auto add = [&shard](std::string_view text) {
    return shard.Add(text, absl::Hash<std::string_view>()(text));
  };
  EXPECT_EQ(add("a"), 0u);
  EXPECT_EQ(add("b"), 1u);
  EXPECT_EQ(add("c"), 2u);
  EXPECT_EQ(add("d"), TextShard::kNone);
  EXPECT_EQ(add("b"), 1u);
  EXPECT_EQ(shard.text(2), "c");
}

TEST(TextShard, TellsTextsOfOneHashApart) {
  HugePool pool;
  TextShard shard(1000, &pool);
  for (uint32_t i = 0; i < 200; ++i) EXPECT_EQ(shard.Add(absl::StrCat(i), 42), i);
  for (uint32_t i = 0; i < 200; ++i) EXPECT_EQ(shard.Find(absl::StrCat(i), 42), i);
  EXPECT_EQ(shard.Find("200", 42), TextShard::kNone);
}

TEST(SharedTexts, CountWhatThreadsAddTogether) {
  constexpr int kThreads = 4;
  SharedTexts texts;
  std::map<std::string, uint64_t> expected;
  std::vector<std::vector<std::string>> lists(kThreads);
  std::mt19937_64 random(3);
  for (std::vector<std::string>& list : lists) {
    for (int i = 0; i < 20000; ++i) {
      // Some long, some empty, most of them few.
      const uint64_t number = random() % (random() % 5000 + 1);
      list.push_back(number == 7 ? std::string(40000, 'x') : absl::StrCat(number % 3000));
      if (number == 9) list.back().clear();
      ++expected[list.back()];
    }
  }
  std::vector<std::thread> threads;
  for (const std::vector<std::string>& list : lists) {
    threads.emplace_back([&texts, &list] {
      for (size_t begin = 0; begin < list.size(); begin += 500) {
        const std::vector<std::string_view> some(
            list.begin() + static_cast<ptrdiff_t>(begin),
            list.begin() + static_cast<ptrdiff_t>(begin + 500));
        texts.AddAll(some, [](uint32_t, uint32_t, uint64_t note) {
          return note == SharedTexts::kNoNote ? 1 : note + 1;
        });
      }
    });
  }
  for (std::thread& thread : threads) thread.join();
  std::map<std::string, uint64_t> counted;
  for (uint32_t shard = 0; shard < SharedTexts::kShards; ++shard) {
    texts.ForEachOfShard(shard, [&](uint32_t id) {
      EXPECT_LT(id, texts.id_limit());
      EXPECT_EQ(texts.Find(texts.text(id)), id);
      counted[std::string(texts.text(id))] = texts.note(id);
    });
  }
  EXPECT_EQ(counted, expected);
  EXPECT_EQ(texts.size(), expected.size());
  EXPECT_EQ(texts.Find("none such"), SharedTexts::kNone);
}

}  // namespace
}  // namespace phraseweld
