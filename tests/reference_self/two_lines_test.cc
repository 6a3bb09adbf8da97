// Two lines whose whole run folder is worked out by hand.

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include "reference_self/jobs.h"

namespace phraseweld {
namespace {

// Line 1: old mill old mill       slots: old·mill, mill·old, old·mill
// Line 2: old-mill. a b           slots: old·mill, a·b (nothing across the full stop)
//
// 5 slots of 3 types; 8 tokens of 4 types. For old·mill: n = 3, L(old) = 3, R(mill) = 3, N = 5:
//   E    = 3·3/5 = 1.8
//   pmi  = log2(3/1.8) = log2(5/3) = 0.736965594
//   npmi = log2(5/3) / −log2(3/5) = 1
//   g2   : O = 3 0 0 2, E = 1.8 1.2 1.2 0.8: 2·(3·ln(5/3) + 2·ln(2.5)) = 6.730116670
// Nothing else occurs twice. 3 merges, each absorbs 1 token: 8 − 3 = 5.
TEST(TwoLines, WholeRunFolder) {
  Job job = LinesJob(2);
  job.passes[0].name = "pairs";
  job.deliver.spans = true;
  job.deliver.corpus = CorpusForm::kSource;
  job.deliver.joiner = '_';
  EXPECT_THAT(
      RunOn(job, "Old mill old  mill\r\n\nold-mill. A b"),
      testing::ElementsAre(
          testing::Pair(
              "audit/pass-01.jsonl",
              "{\"kind\":\"pass\",\"pass\":1,\"name\":\"pairs\",\"tokens_in\":8,\"types_in\":4,"
              "\"slots\":5,\"slot_types\":3,\"rank_by\":\"pmi\",\"accept\":{\"occurrences\":2}}\n"
              "{\"kind\":\"accepted\",\"rank\":1,\"phrase\":\"old mill\",\"left\":\"old\","
              "\"bridge\":\"\",\"right\":\"mill\",\"n\":3,\"left_slots\":3,\"right_slots\":3,"
              "\"slots\":5,\"expected\":1.8,\"documents\":2,\"scores\":{\"pmi\":0.736965594,"
              "\"npmi\":1,\"g2\":6.73011667},\"joined\":3,\"yielded\":0,"
              "\"first\":{\"document\":\"1\",\"passage\":\"\",\"byte\":0}}\n"
              "{\"kind\":\"balance\",\"pass\":1,\"tokens_in\":8,\"accepted\":1,\"joined\":3,"
              "\"words_absorbed\":3,\"tokens_out\":5}\n"),
          testing::Pair("corpus/notes", "Old_mill old_mill\r\n\nold_mill. A b"),
          // Spellings: "Old mill", "old mill", "old-mill" once each; O comes first in byte order.
          testing::Pair(
              "inventory.jsonl",
              "{\"phrase\":\"old mill\",\"words\":2,\"pass\":1,\"occurrences\":3,"
              "\"inside_longer\":0,\"documents\":2,\"surface\":\"Old mill\",\"made_of\":[{"
              "\"pass\":1,\"left\":\"old\",\"bridge\":\"\",\"right\":\"mill\",\"joined\":3}],"
              "\"scores\":{\"pmi\":0.736965594,\"npmi\":1,\"g2\":6.73011667}}\n"),
          testing::Pair("inventory.tsv",
                        "phrase\twords\tpass\toccurrences\tinside_longer\tdocuments\tsurface\tpmi"
                        "\tnpmi\tg2\n"
                        "old mill\t2\t1\t3\t0\t2\tOld mill\t0.736965594\t1\t6.73011667\n"),
          // Old mill = bytes 0 to 8, old  mill = 9 to 18; the blank line is no document.
          testing::Pair("spans.jsonl",
                        "{\"document\":\"1\",\"passage\":\"\",\"spans\":[[0,8,\"old mill\"],"
                        "[9,18,\"old mill\"]]}\n"
                        "{\"document\":\"2\",\"passage\":\"\",\"spans\":[[0,8,\"old mill\"]]}\n")));
}

TEST(TwoLines, WordsForm) {
  EXPECT_EQ(CorpusOf(LinesJob(2), "Old mill old  mill\r\n\nold-mill. A b"),
            "old+mill old+mill\nold+mill a b\n");
}

TEST(TwoLines, NoCorpusWanted) {
  Job job = LinesJob(2);
  job.deliver.corpus = CorpusForm::kNone;
  EXPECT_THAT(RunOn(job, "a b"),
              testing::ElementsAre(testing::Key("audit/pass-01.jsonl"),
                                   testing::Key("inventory.jsonl"), testing::Key("inventory.tsv")));
}

}  // namespace
}  // namespace phraseweld
