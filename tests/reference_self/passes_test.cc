// Slots, candidates, merging and the inventory on corpora worked out by hand.

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include "reference_self/jobs.h"

namespace phraseweld {
namespace {

using testing::HasSubstr;
using testing::MatchesRegex;
using testing::Not;

// a·a stands at 0 and at 1: n = 2, the leftmost is merged, the other shares a token and yields.
// L = R = N = 2, so E = 2, pmi = 0, and npmi is 1 because n = N.
TEST(Merging, LeftmostOfItsTypeAndTheOtherYields) {
  const Files files = RunOn(LinesJob(2), "a a a\n");
  EXPECT_EQ(files.at("corpus/notes"), "a+a a\n");
  EXPECT_THAT(files.at("audit/pass-01.jsonl"),
              HasSubstr("\"n\":2,\"left_slots\":2,\"right_slots\":2,\"slots\":2,\"expected\":2,"
                        "\"documents\":1,\"scores\":{\"pmi\":0,\"npmi\":1,\"g2\":0},"
                        "\"joined\":1,\"yielded\":1,"));
}

// x·y three times, y·z four times, N = 7.
//   x·y: E = 9/7, pmi = log2(7/3); y·z: E = 16/7, pmi = log2(7/4). So x·y ranks first.
//   g2 of both: 2·(3·ln(7/3) + 4·ln(7/4)), so that by g2 the larger n, y·z, ranks first.
TEST(Merging, BestRankFirst) {
  const std::string text = "x y z\nx y z\nx y z\ny z\n";
  Job job = LinesJob(2);
  EXPECT_EQ(CorpusOf(job, text), "x+y z\nx+y z\nx+y z\ny+z\n");
  EXPECT_THAT(RunOn(job, text).at("audit/pass-01.jsonl"),
              HasSubstr("\"joined\":1,\"yielded\":3,\"first\":{\"document\":\"1\",\"passage\":\"\","
                        "\"byte\":2}}"));
  job.passes[0].rank_by = Quantity::kG2;
  EXPECT_EQ(CorpusOf(job, text), "x y+z\nx y+z\nx y+z\ny+z\n");
}

// Equal scores and counts: the phrase text in byte order, wherever it stands.
TEST(Merging, TiesByText) {
  EXPECT_EQ(CorpusOf(LinesJob(1), "d e f\n"), "d+e f\n");
  EXPECT_EQ(CorpusOf(LinesJob(1), "f e d\n"), "f e+d\n");
}

// b·c: n = 2, L = R = 2, N = 4, E = 1, pmi = 1. a·b and c·d: n = 1, E = 1/4, pmi = 2, so that in
// line 1 b·c yields to them; with a gate of two occurrences they don't compete.
TEST(Merging, OnlyAcceptedSlotsCompete) {
  EXPECT_EQ(CorpusOf(LinesJob(2), "a b c d\nb c\n"), "a b+c d\nb+c\n");
  EXPECT_EQ(CorpusOf(LinesJob(1), "a b c d\nb c\n"), "a+b c+d\nb+c\n");
}

// β = of: cup·tea twice, bowl·rice once; L = R = 2, N = 3, E = 4/3, pmi = log2(1.5). The slot over
// "of the" has a table of its own. A merge over "of" absorbs 2 tokens: 13 − 4 = 9.
TEST(Bridges, EachHasATableOfItsOwn) {
  const std::string text = "cup of tea; cup of the tea; bowl of rice; cup of tea; of\n";
  Job job = LinesJob(2);
  job.words.function_word_list = {"Of", "the"};
  job.words.bridge = 2;
  const Files files = RunOn(job, text);
  EXPECT_EQ(files.at("corpus/notes"), "cup+of+tea cup of the tea bowl of rice cup+of+tea of\n");
  EXPECT_THAT(files.at("audit/pass-01.jsonl"),
              HasSubstr("\"tokens_in\":14,\"types_in\":6,\"slots\":4,\"slot_types\":3,"));
  EXPECT_THAT(files.at("audit/pass-01.jsonl"),
              HasSubstr("\"phrase\":\"cup of tea\",\"left\":\"cup\",\"bridge\":\"of\",\"right\":"
                        "\"tea\",\"n\":2,\"left_slots\":2,\"right_slots\":2,\"slots\":3,"
                        "\"expected\":1.333333333,\"documents\":1,\"scores\":{\"pmi\":0.584962501,"
                        "\"npmi\":1,\"g2\":3.81908501},\"joined\":2,"));
  EXPECT_THAT(files.at("audit/pass-01.jsonl"),
              HasSubstr("\"accepted\":1,\"joined\":2,\"words_absorbed\":4,\"tokens_out\":10}"));

  job.words.bridge = 1;
  EXPECT_THAT(RunOn(job, text).at("audit/pass-01.jsonl"), HasSubstr("\"slots\":3,"));
  job.words.bridge = 0;
  EXPECT_THAT(RunOn(job, text).at("audit/pass-01.jsonl"), HasSubstr("\"slots\":0,"));
}

// Pass 1, "left ventricular ejection fraction" twice: three types, n = 2, N = 6, pmi = log2(3)
// each. By text: ejection fraction, left ventricular, ventricular ejection; the last yields twice.
// Pass 2: one type of two slots. Pass 3: no slot, nothing accepted, so there is no pass 4.
TEST(Repeats, LongerPhrasesGrowAndStop) {
  const std::string text = "left ventricular ejection fraction\nLeft ventricular ejection fraction";
  Job job = LinesJob(2);
  job.passes[0].repeat = 5;
  const Files files = RunOn(job, text);
  EXPECT_EQ(files.at("corpus/notes"),
            "left+ventricular+ejection+fraction\nleft+ventricular+ejection+fraction\n");
  EXPECT_EQ(files.at("audit/pass-03.jsonl"),
            "{\"kind\":\"pass\",\"pass\":3,\"name\":\"pass\",\"tokens_in\":2,\"types_in\":1,"
            "\"slots\":0,\"slot_types\":0,\"rank_by\":\"pmi\",\"accept\":{\"occurrences\":2}}\n"
            "{\"kind\":\"balance\",\"pass\":3,\"tokens_in\":2,\"accepted\":0,\"joined\":0,"
            "\"words_absorbed\":0,\"tokens_out\":2}\n");
  EXPECT_FALSE(files.contains("audit/pass-04.jsonl"));
  // O = 2 0 0 4: g2 = 2·(2·ln 3 + 4·ln 1.5) = 7.638170020.
  EXPECT_EQ(files.at("inventory.jsonl"),
            "{\"phrase\":\"ejection fraction\",\"words\":2,\"pass\":1,\"occurrences\":0,"
            "\"inside_longer\":2,\"documents\":2,\"surface\":\"ejection fraction\",\"made_of\":[{"
            "\"pass\":1,\"left\":\"ejection\",\"bridge\":\"\",\"right\":\"fraction\",\"joined\":2}]"
            ",\"scores\":{\"pmi\":1.584962501,\"npmi\":1,\"g2\":7.63817002}}\n"
            "{\"phrase\":\"left ventricular\",\"words\":2,\"pass\":1,\"occurrences\":0,"
            "\"inside_longer\":2,\"documents\":2,\"surface\":\"left ventricular\",\"made_of\":[{"
            "\"pass\":1,\"left\":\"left\",\"bridge\":\"\",\"right\":\"ventricular\",\"joined\":2}],"
            "\"scores\":{\"pmi\":1.584962501,\"npmi\":1,\"g2\":7.63817002}}\n"
            "{\"phrase\":\"left ventricular ejection fraction\",\"words\":4,\"pass\":2,"
            "\"occurrences\":2,\"inside_longer\":0,\"documents\":2,\"surface\":"
            "\"Left ventricular ejection fraction\",\"made_of\":[{\"pass\":2,\"left\":"
            "\"left ventricular\",\"bridge\":\"\",\"right\":\"ejection fraction\",\"joined\":2}],"
            "\"scores\":{\"pmi\":0,\"npmi\":1,\"g2\":0}}\n");
}

TEST(Candidates, LongestCountsAllWords) {
  const std::string text = "left ventricular ejection fraction\nleft ventricular ejection fraction";
  Job job = LinesJob(2);
  job.passes[0].repeat = 5;
  job.phrases.longest = 3;
  EXPECT_EQ(CorpusOf(job, text),
            "left+ventricular ejection+fraction\nleft+ventricular ejection+fraction\n");
  job.words.function_word_list = {"of", "the"};
  EXPECT_EQ(CorpusOf(job, "cup of tea, cup of tea, cup of the tea, cup of the tea"),
            "cup+of+tea cup+of+tea cup of the tea cup of the tea\n");
}

// Pass 1: a·b n = 2, L = R = 2, N = 5, E = 0.8; b·c n = 3, L = R = 3, E = 1.8; so a·b has the
// higher pmi, and is the one type taken. Pass 2: (a b)·c n = 2 and b·c n = 1, N = 3.
TEST(Candidates, TakeTheBest) {
  Job job = LinesJob(2);
  job.passes[0].take = 1;
  const std::string text = "a b c\na b c\nb c\n";
  const Files files = RunOn(job, text);
  EXPECT_EQ(files.at("corpus/notes"), "a+b c\na+b c\nb c\n");
  EXPECT_THAT(files.at("audit/pass-01.jsonl"), Not(HasSubstr("\"phrase\":\"b c\"")));
  job.passes[0].repeat = 2;
  EXPECT_EQ(CorpusOf(job, text), "a+b+c\na+b+c\nb c\n");
}

// Pass 1 (gate 4): lines 1, 2: a·b, b·c; 3: z·b, b·c; 4: z·b; 5, 6: a·b; so N = 9.
//   a·b: n = 4, L(a) = 4, R(b) = 6, E = 24/9, pmi = log2(1.5). z·b and b·c stay below the gate.
// Pass 2 (gate 1, take 1): (a b)·c twice, z·b twice, b·c once; so N = 5.
//   (a b)·c: L = 2, R = 3, pmi = log2(5/3); z·b: L = R = 2, pmi = log2(2.5) and so taken;
//   b·c: L = 1, R = 3, pmi = log2(5/3).
// Pass 3 (gate 1): (a b)·c twice, (z b)·c once: R = N = 3, so all is as expected: pmi = 0.
TEST(Inventory, InsideLongerAndDocuments) {
  Job job = LinesJob(4);
  PassOptions second;
  second.accept = {{Quantity::kOccurrences, 1}};
  second.take = 1;
  PassOptions third;
  third.accept = {{Quantity::kOccurrences, 1}};
  job.passes = {job.passes[0], second, third};
  const Files files = RunOn(job, "a b c\nA b c\nz b c\nz b\na-b\na-b\n");
  EXPECT_EQ(files.at("corpus/notes"), "a+b+c\na+b+c\nz+b+c\nz+b\na+b\na+b\n");
  EXPECT_THAT(files.at("inventory.tsv"),
              MatchesRegex("phrase.*\n"
                           "a b\t2\t1\t2\t2\t4\ta-b\t0.584962501\t.*\n"
                           "a b c\t3\t3\t2\t0\t2\tA b c\t0\t0\t0\n"
                           "z b\t2\t2\t1\t1\t2\tz b\t1.321928095\t1\t.*\n"
                           "z b c\t3\t3\t1\t0\t1\tz b c\t0\t0\t0\n"));
}

// a a a a: pass 1 merges 0·1 and 2·3, pass 2 (a a)·(a a). a a a: pass 1 merges 0·1, pass 2 (a a)·a.
TEST(Inventory, CountsTokensThatLaterMergesTookIn) {
  Job job = LinesJob(2);
  job.passes[0].repeat = 3;
  const Files files = RunOn(job, "a a a a\na a a\na a a a\na a a\n");
  EXPECT_EQ(files.at("corpus/notes"), "a+a+a+a\na+a+a\na+a+a+a\na+a+a\n");
  EXPECT_THAT(files.at("inventory.jsonl"),
              HasSubstr("{\"phrase\":\"a a\",\"words\":2,\"pass\":1,\"occurrences\":0,"
                        "\"inside_longer\":6,\"documents\":4,\"surface\":\"a a\""));
}

// c·d and a·b have n = 2 of N = 5, L = R = 2; but a·b stands in one document only.
//   E = 0.8, pmi = log2(2.5), npmi = 1, g2 = 2·(2·ln 2.5 + 3·ln(5/3)) = 6.730116670
// b·a fails both gates, so it is no near miss.
TEST(Audit, NearMissFailsExactlyOneOtherGate) {
  Job job = LinesJob(2);
  job.passes[0].accept = {{Quantity::kDocuments, 2}, {Quantity::kOccurrences, 2}};
  const Files files = RunOn(job, "a b a b\nc d\nc d\n");
  EXPECT_EQ(files.at("audit/pass-01.jsonl"),
            "{\"kind\":\"pass\",\"pass\":1,\"name\":\"pass\",\"tokens_in\":8,\"types_in\":4,"
            "\"slots\":5,\"slot_types\":3,\"rank_by\":\"pmi\",\"accept\":{\"occurrences\":2,"
            "\"documents\":2}}\n"
            "{\"kind\":\"accepted\",\"rank\":1,\"phrase\":\"c d\",\"left\":\"c\",\"bridge\":\"\","
            "\"right\":\"d\",\"n\":2,\"left_slots\":2,\"right_slots\":2,\"slots\":5,"
            "\"expected\":0.8,\"documents\":2,\"scores\":{\"pmi\":1.321928095,\"npmi\":1,"
            "\"g2\":6.73011667},\"joined\":2,\"yielded\":0,\"first\":{\"document\":\"2\","
            "\"passage\":\"\",\"byte\":0}}\n"
            "{\"kind\":\"near_miss\",\"rank\":1,\"phrase\":\"a b\",\"left\":\"a\",\"bridge\":\"\","
            "\"right\":\"b\",\"n\":2,\"left_slots\":2,\"right_slots\":2,\"slots\":5,"
            "\"expected\":0.8,\"documents\":1,\"scores\":{\"pmi\":1.321928095,\"npmi\":1,"
            "\"g2\":6.73011667},\"joined\":0,\"yielded\":0,\"first\":{\"document\":\"1\","
            "\"passage\":\"\",\"byte\":0},\"failed\":\"documents\"}\n"
            "{\"kind\":\"balance\",\"pass\":1,\"tokens_in\":8,\"accepted\":1,\"joined\":2,"
            "\"words_absorbed\":2,\"tokens_out\":6}\n");
}

// 250 types that occur twice and lie below the pmi gate: 200 of them are written.
TEST(Audit, AtMostTwoHundredNearMisses) {
  Job job = LinesJob(2);
  job.passes[0].accept.push_back({Quantity::kPmi, 50});
  std::string text;
  for (int i = 0; i < 250; ++i) {
    const std::string number = std::to_string(i);
    const std::string pair = number + "l " + number + "r\n";
    text += pair + pair;
  }
  const std::string audit = RunOn(job, text).at("audit/pass-01.jsonl");
  EXPECT_THAT(audit, HasSubstr("{\"kind\":\"near_miss\",\"rank\":200,"));
  EXPECT_THAT(audit, Not(HasSubstr("\"rank\":201,")));
}

// Tokens: x, y, y. x·y: L = 1, R = 2, N = 3, E = 2/3, pmi = log2(1.5), pmi2 = pmi + log2(1/3) = −1,
//   g2: O = 1 0 1 1, E = 2/3 1/3 4/3 2/3: 2·(2·ln 1.5 + ln 0.75) = 1.046496288
// y·y: L = 2, R = 2, E = 4/3, pmi = log2(0.75), g2: O = 1 1 1 0, E = 4/3 2/3 2/3 1/3: as above,
//   negative because n < E. pmi2 = log2(0.75/3) = −2.
TEST(Margins, OfWords) {
  Job job = LinesJob(1);
  job.passes[0].margins = Margins::kWords;
  job.passes[0].rank_by = Quantity::kPmi2;
  const std::string audit = RunOn(job, "x y y\n").at("audit/pass-01.jsonl");
  EXPECT_THAT(audit, HasSubstr("\"phrase\":\"x y\",\"left\":\"x\",\"bridge\":\"\",\"right\":\"y\","
                               "\"n\":1,\"left_slots\":1,\"right_slots\":2,\"slots\":3,"
                               "\"expected\":0.666666667,\"documents\":1,\"scores\":{"
                               "\"pmi\":0.584962501,\"npmi\":0.369070246,\"g2\":1.046496288,"
                               "\"pmi2\":-1},"));
  EXPECT_THAT(audit, HasSubstr("\"n\":1,\"left_slots\":2,\"right_slots\":2,\"slots\":3,"
                               "\"expected\":1.333333333,\"documents\":1,\"scores\":{"
                               "\"pmi\":-0.415037499,\"npmi\":-0.261859507,\"g2\":-1.046496288,"
                               "\"pmi2\":-2},"));
}

// Slots here: x·y and, over "of", x·y again. The bridged one keeps slot margins (1, 1, 1), the
// other has x twice, y twice, five tokens.
TEST(Margins, OfWordsOnlyWithoutABridge) {
  Job job = LinesJob(1);
  job.words.function_word_list = {"of"};
  job.passes[0].margins = Margins::kWords;
  const std::string audit = RunOn(job, "x y. x of y\n").at("audit/pass-01.jsonl");
  EXPECT_THAT(audit, HasSubstr("\"phrase\":\"x y\",\"left\":\"x\",\"bridge\":\"\",\"right\":\"y\","
                               "\"n\":1,\"left_slots\":2,\"right_slots\":2,\"slots\":5,"));
  EXPECT_THAT(audit, HasSubstr("\"bridge\":\"of\",\"right\":\"y\",\"n\":1,\"left_slots\":1,"
                               "\"right_slots\":1,\"slots\":1,"));
}

// Longer rulings first, then byte order: de la cruz; cruz de; la cruz.
//   1: [de la cruz] de la    2: la [cruz de]    3: la [la cruz]    4: de la, cruz
// 5 + 3 + 3 + 3 = 14 tokens of 3 types; absorbed 2 + 1 + 1.
TEST(Rulings, PassZero) {
  Job job = LinesJob(1000);
  job.words.function_word_list = {"de", "la"};
  job.phrases.ruling_list = {{true, "la cruz", "", "r", 1},
                             {true, "Cruz, de", "a \"name\"", "r", 2},
                             {true, "de la cruz", "", "r", 3},
                             {true, "LA CRUZ", "said twice", "r", 4}};
  const Files files = RunOn(job, "de la cruz de la\nla cruz de\nla la cruz\nde la, cruz\n");
  EXPECT_EQ(files.at("corpus/notes"), "de+la+cruz de la\nla cruz+de\nla la+cruz\nde la cruz\n");
  EXPECT_EQ(files.at("audit/pass-00.jsonl"),
            "{\"kind\":\"pass\",\"pass\":0,\"name\":\"rulings\",\"tokens_in\":14,\"types_in\":3}\n"
            "{\"kind\":\"ruled\",\"phrase\":\"de la cruz\",\"joined\":1,\"documents\":1}\n"
            "{\"kind\":\"ruled\",\"phrase\":\"cruz de\",\"joined\":1,\"documents\":1,"
            "\"reason\":\"a \\\"name\\\"\"}\n"
            "{\"kind\":\"ruled\",\"phrase\":\"la cruz\",\"joined\":1,\"documents\":1}\n"
            "{\"kind\":\"balance\",\"pass\":0,\"tokens_in\":14,\"accepted\":3,\"joined\":3,"
            "\"words_absorbed\":4,\"tokens_out\":10}\n");
  EXPECT_EQ(files.at("inventory.jsonl").substr(0, files.at("inventory.jsonl").find('\n') + 1),
            "{\"phrase\":\"cruz de\",\"words\":2,\"pass\":0,\"occurrences\":1,\"inside_longer\":0,"
            "\"documents\":1,\"surface\":\"cruz de\",\"made_of\":[{\"pass\":0,\"left\":\"\","
            "\"bridge\":\"\",\"right\":\"\",\"joined\":1}],\"scores\":{},"
            "\"reason\":\"a \\\"name\\\"\"}\n");
  EXPECT_THAT(files.at("inventory.tsv"),
              HasSubstr("\nde la cruz\t3\t0\t1\t0\t1\tde la cruz\t\t\t\n"));
}

// A ruled phrase is a content token like any other, also where all its words are function words.
TEST(Rulings, RuledPhrasesGrow) {
  Job job = LinesJob(2);
  job.words.function_word_list = {"of", "the"};
  job.phrases.ruling_list = {{true, "of the", "", "r", 1}};
  EXPECT_EQ(CorpusOf(job, "ship of the line\nship of the line\n"),
            "ship of+the+line\nship of+the+line\n");
}

// However the phrase would be put together, what is ruled never is not accepted.
TEST(Rulings, NeverGoesByTheWholeText) {
  Job job = LinesJob(2);
  job.passes[0].repeat = 3;
  const std::string text = "a b c\na b c\n";
  EXPECT_EQ(CorpusOf(job, text), "a+b+c\na+b+c\n");
  job.phrases.ruling_list = {{false, "A-B", "", "r", 1}};
  EXPECT_EQ(CorpusOf(job, text), "a+b+c\na+b+c\n");
  job.phrases.ruling_list.push_back({false, "a b c", "", "r", 2});
  EXPECT_EQ(CorpusOf(job, text), "a b+c\na b+c\n");
  EXPECT_THAT(RunOn(job, text).at("audit/pass-01.jsonl"), Not(HasSubstr("near_miss")));
}

}  // namespace
}  // namespace phraseweld
