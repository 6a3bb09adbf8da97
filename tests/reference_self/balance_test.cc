// What has to hold of every run, on random corpora of few words.

#include <gtest/gtest.h>
#include <simdjson.h>

#include <random>
#include <sstream>

#include "reference_self/jobs.h"

namespace phraseweld {
namespace {

std::string RandomText(std::mt19937& random) {
  const std::vector<std::string> words = {"a", "b", "c", "of", "the", "7", "B-c", "d"};
  const std::vector<std::string> gaps = {" ", " ", " ", " ", "-", ", ", "\n", "\n\n"};
  std::string text;
  for (int i = 0; i < 120; ++i) text += words[random() % 8] + gaps[random() % 8];
  return text;
}

TEST(Balance, HoldsOnRandomCorpora) {
  std::mt19937 random(20240607);
  uint64_t yielded = 0;
  uint64_t bridged = 0;
  for (int round = 0; round < 60; ++round) {
    Job job = LinesJob(2);
    job.corpus.layout = round % 2 == 0 ? Layout::kLines : Layout::kParagraphs;
    job.words.function_word_list = {"of", "the"};
    job.words.numbers = static_cast<Numbers>(round % 3);
    job.passes[0].repeat = 4;
    job.passes[0].rank_by = static_cast<Quantity>(2 + round % 12);
    job.passes[0].margins = round % 5 == 0 ? Margins::kWords : Margins::kSlots;
    if (round % 4 == 0) job.phrases.ruling_list = {{true, "c of d", "", "r", 1}};

    uint64_t tokens = 0;
    simdjson::dom::parser parser;
    for (const auto& [name, bytes] : RunOn(job, RandomText(random))) {
      if (!name.ends_with(".jsonl")) continue;
      std::istringstream lines(bytes);
      for (std::string line; std::getline(lines, line);) {
        const simdjson::dom::element object = parser.parse(line);
        if (name == "inventory.jsonl") {
          // Whatever surrounds a phrase, the same words grow together in the same way: a slot that
          // reaches beyond the phrase was never merged, so it never decided anything within it.
          EXPECT_EQ(simdjson::dom::array(object["made_of"]).size(), 1u);
          continue;
        }
        const std::string_view kind = object["kind"];
        if (kind == "pass" && tokens != 0) {
          EXPECT_EQ(uint64_t{object["tokens_in"]}, tokens);
        } else if (kind == "accepted") {
          EXPECT_EQ(uint64_t{object["joined"]} + uint64_t{object["yielded"]},
                    uint64_t{object["n"]});
          yielded += uint64_t{object["yielded"]};
          bridged += std::string_view{object["bridge"]}.empty() ? 0 : uint64_t{object["joined"]};
        } else if (kind == "balance") {
          tokens = object["tokens_out"];
          EXPECT_EQ(uint64_t{object["tokens_in"]} - uint64_t{object["words_absorbed"]}, tokens);
        }
      }
    }
  }
  EXPECT_GT(yielded, 100u);
  EXPECT_GT(bridged, 40u);
}

}  // namespace
}  // namespace phraseweld
