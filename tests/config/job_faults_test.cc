// One case for each thing that can be wrong with a job file, with the whole message.

#include "config/job_fixture.h"

namespace phraseweld {
namespace {

using testing::HasSubstr;
using testing::Not;
using testing::StartsWith;

class JobFaults : public JobFixture {};

struct Case {
  std::string_view lines;    // from line 4 of the file
  std::string_view message;  // up to the quoted line
};

constexpr Case kCases[] = {
    // Keys.
    {"wrods: {}\n", "demo.yaml:4:1: unknown key 'wrods'; did you mean 'words'?"},
    {"words: {brige: 1}\n", "demo.yaml:4:9: unknown key 'brige' in words; did you mean 'bridge'?"},
    {"bridge: 1\n", "demo.yaml:4:1: unknown key 'bridge'; did you mean 'words.bridge'?"},
    {"take: 1\n", "demo.yaml:4:1: unknown key 'take'; did you mean 'passes[].take'?"},
    {"limits: {ram: 1}\n",
     "demo.yaml:4:10: unknown key 'ram' in limits; the keys here are memory, threads"},
    {"passes: [{acept: {}}]\n",
     "demo.yaml:4:11: unknown key 'acept' in passes.0; did you mean 'accept'?"},
    {"<<: {a: b}\n",
     "demo.yaml:4:1: unknown key '<<'; the keys here are job, run_folder, corpus, words, passes, "
     "phrases, deliver, limits, debug"},
    {"? [a]\n: 1\n", "demo.yaml:4:3: a key is a plain word, not a list"},
    {"job: other\n",
     "demo.yaml:4:1: key 'job' stands here again, first on line 1; keep one of the two"},
    {"words: {bridge: 1, bridge: 2}\n",
     "demo.yaml:4:20: key 'words.bridge' stands here again, first on line 4; keep one of the two"},
    {"words: {}\nwords: {}\n",
     "demo.yaml:5:1: key 'words' stands here again, first on line 4; keep one of the two"},
    {"passes: [{accept: {pmi: 1, pmi: 2}}]\n",
     "demo.yaml:4:28: key 'passes.0.accept.pmi' stands here again, first on line 4; keep one of "
     "the two"},
    // Kinds.
    {"words: 3\n", "demo.yaml:4:8: words must be a map of keys, not '3'"},
    {"words: [a]\n", "demo.yaml:4:8: words must be a map of keys, not a list"},
    {"words: {bridge: [1]}\n",
     "demo.yaml:4:17: words.bridge must be a whole number from 0 to 4, not a list"},
    {"words: {bridge: {a: 1}}\n",
     "demo.yaml:4:17: words.bridge must be a whole number from 0 to 4, not a map"},
    {"words: {bridge: }\n",
     "demo.yaml:4:9: words.bridge has no value; leave the key out to get the default"},
    {"deliver: {joiner: ~}\n",
     "demo.yaml:4:11: deliver.joiner has no value; leave the key out to get the default"},
    {"run_folder: [a]\n",
     "demo.yaml:4:13: run_folder must be a text that is not empty, not a list"},
    {"passes: 3\n",
     "demo.yaml:4:9: passes must be a list of one pass or more, not '3'; leave the key out to get "
     "one pass with the defaults"},
    {"passes: []\n",
     "demo.yaml:4:9: passes must be a list of one pass or more, not an empty list; leave the key "
     "out to get one pass with the defaults"},
    {"passes:\n",
     "demo.yaml:4:1: passes must be a list of one pass or more, not nothing; leave the key out to "
     "get one pass with the defaults"},
    {"passes: [pairs]\n", "demo.yaml:4:10: passes.0 must be a map of keys, not 'pairs'"},
    // Whole numbers and their ranges.
    {"words: {bridge: 5}\n",
     "demo.yaml:4:17: words.bridge must be a whole number from 0 to 4, not '5'"},
    {"words: {bridge: -1}\n",
     "demo.yaml:4:17: words.bridge must be a whole number from 0 to 4, not '-1'"},
    {"words: {bridge: 1.5}\n",
     "demo.yaml:4:17: words.bridge must be a whole number from 0 to 4, not '1.5'"},
    {"phrases: {longest: 1}\n",
     "demo.yaml:4:20: phrases.longest must be a whole number from 2 to 64, not '1'"},
    {"phrases: {longest: 65}\n",
     "demo.yaml:4:20: phrases.longest must be a whole number from 2 to 64, not '65'"},
    {"passes: [{repeat: 0}]\n",
     "demo.yaml:4:19: passes.0.repeat must be a whole number from 1 to 99, not '0'"},
    {"passes: [{repeat: 100}]\n",
     "demo.yaml:4:19: passes.0.repeat must be a whole number from 1 to 99, not '100'"},
    {"passes: [{}, {take: 0}]\n",
     "demo.yaml:4:21: passes.1.take must be a whole number of at least 1, or 'all', not '0'"},
    {"limits: {threads: 257}\n",
     "demo.yaml:4:19: limits.threads must be a whole number from 0 to 256, not '257'"},
    {"limits: {threads: all}\n",
     "demo.yaml:4:19: limits.threads must be a whole number from 0 to 256, not 'all'"},
    // Sizes.
    {"limits: {memory: 15 MiB}\n",
     "demo.yaml:4:18: limits.memory must be a size of at least 16 MiB, such as 2 GiB, not '15 "
     "MiB'"},
    {"limits: {memory: lots}\n",
     "demo.yaml:4:18: limits.memory must be a size such as 2 GiB, 256 MiB or 1048576, not 'lots'"},
    {"limits: {memory: 2 GIG}\n",
     "demo.yaml:4:18: limits.memory must be a size such as 2 GiB, 256 MiB or 1048576, not '2 GIG'; "
     "did you mean 'GiB'?"},
    // Truths and choices.
    {"deliver: {spans: yes}\n", "demo.yaml:4:18: deliver.spans must be true or false, not 'yes'"},
    {"words: {fold: cse}\n",
     "demo.yaml:4:15: words.fold must be one of none, case, compatibility_case, not 'cse'; did you "
     "mean 'case'?"},
    {"words: {numbers: first}\n",
     "demo.yaml:4:18: words.numbers must be one of anywhere, not_first, nowhere, not 'first'"},
    // Measures and gates.
    {"passes: [{rank_by: nmpi}]\n",
     "demo.yaml:4:20: passes.0.rank_by must be a measure: pmi, npmi, pmi2, pmi3, pmi_floor, g2, "
     "chi2, t, dice, dp_forward, dp_backward, burst, not 'nmpi'; did you mean 'npmi'?"},
    {"passes: [{rank_by: documents}]\n",
     "demo.yaml:4:20: passes.0.rank_by must be a measure: pmi, npmi, pmi2, pmi3, pmi_floor, g2, "
     "chi2, t, dice, dp_forward, dp_backward, burst, not 'documents'; that is a count"},
    {"passes: [{accept: 5}]\n",
     "demo.yaml:4:19: passes.0.accept must be a map of gates, such as {occurrences: 8, pmi: 4.5}, "
     "not '5'"},
    {"passes: [{accept: {ocurrences: 5}}]\n",
     "demo.yaml:4:20: unknown gate 'ocurrences' in passes.0.accept; did you mean 'occurrences'?"},
    {"passes: [{accept: {weight: 5}}]\n",
     "demo.yaml:4:20: unknown gate 'weight' in passes.0.accept; gates are occurrences, documents, "
     "pmi, npmi, pmi2, pmi3, pmi_floor, g2, chi2, t, dice, dp_forward, dp_backward, burst"},
    {"passes: [{accept: {pmi: high}}]\n",
     "demo.yaml:4:25: passes.0.accept.pmi must be a number such as 5 or 0.25, not 'high'"},
    {"passes: [{accept: {pmi: .nan}}]\n",
     "demo.yaml:4:25: passes.0.accept.pmi must be a number such as 5 or 0.25, not '.nan'"},
    {"passes: [{accept: {pmi: [1]}}]\n",
     "demo.yaml:4:25: passes.0.accept.pmi must be a number, not a list"},
    {"passes: [{accept: {documents: 2.5}}]\n",
     "demo.yaml:4:31: passes.0.accept.documents must be a whole number of at least 1, not '2.5'"},
    {"passes: [{accept: {occurrences: 0}}]\n",
     "demo.yaml:4:33: passes.0.accept.occurrences must be a whole number of at least 1, not '0'"},
    // Texts.
    {"deliver: {joiner: \"\"}\n",
     "demo.yaml:4:19: deliver.joiner must be a text of 1 to 16 bytes without control characters, "
     "not ''"},
    {"deliver: {joiner: 12345678901234567}\n",
     "demo.yaml:4:19: deliver.joiner must be a text of 1 to 16 bytes without control characters, "
     "not '12345678901234567'"},
    {"run_folder: \"\"\n", "demo.yaml:4:13: run_folder must be a text that is not empty, not ''"},
    {"passes: [{name: \"\"}]\n",
     "demo.yaml:4:17: passes.0.name must be a text that is not empty, not ''"},
    // Function words and rulings.
    {"words: {function_words: englsh}\n",
     "demo.yaml:4:25: words.function_words: 'englsh' is neither a file nor one of the built-in "
     "lists none, english, french, german, spanish; did you mean 'english'?"},
};

TEST_F(JobFaults, AreNamedWithTheirPlace) {
  for (const Case& wrong : kCases) {
    const std::string message = FaultOf(wrong.lines);
    EXPECT_EQ(message.substr(0, message.find('\n')), wrong.message) << wrong.lines;
  }
}

TEST_F(JobFaults, EachComesAlone) {
  for (const Case& wrong : kCases) {
    const std::string message = FaultOf(wrong.lines);
    EXPECT_EQ(std::count(message.begin(), message.end(), '\n'), 2) << message;
  }
}

TEST_F(JobFaults, ACaretStandsUnderTheColumn) {
  EXPECT_EQ(FaultOf("words: {bridge: 9}\n"),
            "demo.yaml:4:17: words.bridge must be a whole number from 0 to 4, not '9'\n"
            "    words: {bridge: 9}\n"
            "                    ^");
}

TEST_F(JobFaults, ColumnsCountCharactersAndCaretsCountScreenColumns) {
  EXPECT_EQ(FaultOf("corpus2: {\"é漢\": 1}\n"),
            "demo.yaml:4:1: unknown key 'corpus2'; did you mean 'corpus'?\n"
            "    corpus2: {\"é漢\": 1}\n"
            "    ^");
  EXPECT_EQ(FaultOf("deliver: {\"é漢\": 1, spans: 2}\n").substr(0, 60),
            std::string("demo.yaml:4:11: unknown key 'é漢' in deliver; the keys here are c")
                .substr(0, 60));
  EXPECT_THAT(FaultOf("words: {\"bridge\": 2, hyphens: é漢}\n"),
              HasSubstr("demo.yaml:4:31: words.hyphens must be one of join, break, not 'é漢'"));
  EXPECT_THAT(FaultOf("passes: [{name: é漢, take: 0}]\n"),
              HasSubstr("demo.yaml:4:27: passes.0.take must be a whole number of at least 1, or "
                        "'all', not '0'\n"
                        "    passes: [{name: é漢, take: 0}]\n"
                        "                               ^"));
}

TEST_F(JobFaults, ALongLineIsShownAroundTheFault) {
  const std::string message = FaultOf("passes: [{name: " + std::string(300, 'x') +
                                      ", take: 0, margins: " + std::string(300, 'y') + "}]\n");
  EXPECT_THAT(message, StartsWith("demo.yaml:4:325: passes.0.take must be"));
  size_t start = message.find('\n') + 1;
  const size_t end = message.find('\n', start);
  const std::string line = message.substr(start, end - start);
  const std::string caret = message.substr(end + 1, message.find('\n', end + 1) - end - 1);
  EXPECT_LT(line.size(), 105u);
  EXPECT_EQ(line[caret.size() - 1], '0');
}

TEST_F(JobFaults, AllAreReportedAtOnceInTheOrderOfTheirPlaces) {
  EXPECT_EQ(Fault("words:\n  bridge: 9\nlimits: {threads: x}\njob: a b\n"
                  "corpus: {files: [], fields: [a, a, [b]]}\n"),
            "demo.yaml:2:11: words.bridge must be a whole number from 0 to 4, not '9'\n"
            "      bridge: 9\n"
            "              ^\n"
            "demo.yaml:3:19: limits.threads must be a whole number from 0 to 256, not 'x'\n"
            "    limits: {threads: x}\n"
            "                      ^\n"
            "demo.yaml:4:6: job must be a name of at most 200 letters A-Z a-z, digits, '.', '_' "
            "and '-', not 'a b'\n"
            "    job: a b\n"
            "         ^\n"
            "demo.yaml:5:17: corpus.files is empty; name at least one\n"
            "    corpus: {files: [], fields: [a, a, [b]]}\n"
            "                    ^\n"
            "demo.yaml:5:33: corpus.fields names 'a' twice\n"
            "    corpus: {files: [], fields: [a, a, [b]]}\n"
            "                                    ^\n"
            "demo.yaml:5:36: corpus.fields must hold texts that are not empty and have no control "
            "characters, not a list\n"
            "    corpus: {files: [], fields: [a, a, [b]]}\n"
            "                                       ^");
}

TEST_F(JobFaults, FilesMustBeNamed) {
  const std::string missing =
      "corpus.files is missing: name at least one file, such as files: [\"notes/*.txt\"]";
  EXPECT_THAT(Fault(""), StartsWith("demo.yaml:1:1: " + missing));
  EXPECT_THAT(Fault("# nothing\n"), StartsWith("demo.yaml:1:1: " + missing));
  EXPECT_THAT(Fault("job: a\ncorpus:\n  layout: lines\n"), StartsWith("demo.yaml:2:1: " + missing));
  EXPECT_THAT(Fault("corpus: {files: notes.txt}"),
              StartsWith("demo.yaml:1:17: corpus.files must be a list of texts, such as [first, "
                         "second], not 'notes.txt'"));
  EXPECT_THAT(Fault("corpus: {files: [a, \"\"]}"),
              StartsWith("demo.yaml:1:21: corpus.files must hold texts that are not empty"));
}

TEST_F(JobFaults, FieldsMustNotBeEmpty) {
  EXPECT_THAT(Fault("corpus: {files: [a], layout: json_lines, fields: []}"),
              StartsWith("demo.yaml:1:50: corpus.fields is empty; name at least one"));
}

TEST_F(JobFaults, JobNamesArePlain) {
  for (const std::string_view name : {"a/b", "..", ".", "\"\"", "\"a b\"", "naïve", "a:b"}) {
    EXPECT_THAT(Fault("job: " + std::string(name) + "\ncorpus: {files: [a]}\n"),
                StartsWith("demo.yaml:1:6: job must be a name of at most 200 letters"));
  }
  EXPECT_EQ(Good("job: A.b_c-9\ncorpus: {files: [a]}\n").job, "A.b_c-9");
}

TEST_F(JobFaults, ControlCharactersInTextsAreRefused) {
  EXPECT_THAT(FaultOf("deliver: {joiner: \"\\t\"}\n"), HasSubstr("; it holds a control character"));
  EXPECT_THAT(FaultOf("run_folder: \"a\\0b\"\n"), HasSubstr("; it holds a control character"));
  EXPECT_THAT(FaultOf("passes: [{name: \"a\\nb\"}]\n"),
              HasSubstr("; it holds a control character"));
}

// What yaml-cpp says is wrong is passed on, with the place counted from 1.
TEST_F(JobFaults, YamlFaultsHaveTheirPlace) {
  EXPECT_EQ(FaultOf("words: }\n"),
            "demo.yaml:4:8: not YAML: illegal flow end\n    words: }\n           ^");
  EXPECT_THAT(FaultOf("words: a: b\n"),
              StartsWith("demo.yaml:4:9: not YAML: illegal map value (is the indentation right, "
                         "and is there one 'key: value' on the line?)"));
  EXPECT_THAT(FaultOf("words:\n\tbridge: 1\n"),
              HasSubstr("(indent with spaces; YAML allows no tabs there)"));
  EXPECT_THAT(FaultOf("run_folder: *.txt\n"),
              StartsWith("demo.yaml:4:13: not YAML: the referenced anchor is not defined (put "
                         "quotes around a text that starts with *)"));
  EXPECT_THAT(FaultOf("run_folder: @x\n"),
              HasSubstr("(put quotes around a text that starts like this)"));
  EXPECT_THAT(FaultOf("words: {bridge: 1\n"), HasSubstr(": not YAML: end of map flow not found"));
}

// What yaml-cpp 0.7 lets pass without a word.
TEST_F(JobFaults, WhatTheYamlParserOverlooksIsFound) {
  EXPECT_THAT(FaultOf("run_folder: \"out\n"),
              StartsWith("demo.yaml:4:13: the closing quote of this text is missing"));
  EXPECT_THAT(FaultOf("run_folder: 'it''s\n"),
              StartsWith("demo.yaml:4:13: the closing quote of this text is missing"));
  EXPECT_THAT(FaultOf("run_folder: &a \"out\\\"\n"),
              StartsWith("demo.yaml:4:13: the closing quote of this text is missing"));
  EXPECT_EQ(Good("job: a\nrun_folder: &a 'it''s'\ncorpus: {files: [\"x\\\"\"]}\n").run_folder,
            "it's");
  EXPECT_THAT(FaultOf("run_folder: a\x04\nwords: {}\n"),
              StartsWith("demo.yaml:4:14: YAML does not allow the control character U+0004"));
  EXPECT_THAT(FaultOf("run_folder: \xC3\xA9\xFF\n"),
              StartsWith("demo.yaml:4:14: byte FF is not UTF-8; save the text as UTF-8"));
  EXPECT_THAT(FaultOf("---\njob: second\n"),
              StartsWith("demo.yaml:4:1: a second YAML document starts here"));
  EXPECT_THAT(FaultOf("run_folder: !!str out\n"),
              StartsWith("demo.yaml:4:13: YAML tags mean nothing here; remove it"));
  EXPECT_THAT(FaultOf("passes: &a [*a]\n"),
              StartsWith("demo.yaml:4:13: this alias stands inside what it names"));
}

TEST_F(JobFaults, DeepNestingIsAFaultAndNoCrash) {
  EXPECT_THAT(FaultOf("words: " + std::string(100000, '[')), HasSubstr("demo.yaml:4:"));
}

TEST_F(JobFaults, TheWholeFileMustBeAMap) {
  EXPECT_THAT(Fault("- a\n"), StartsWith("demo.yaml:1:1: a job file is a map of keys, not a list"));
  EXPECT_THAT(Fault("job:tides\n"),
              StartsWith("demo.yaml:1:1: a job file is a map of keys, not 'job:tides'; put a space "
                         "after the colon"));
}

TEST_F(JobFaults, ASettingIsNamedAsItWasGiven) {
  const std::string yaml = "corpus: {files: [a]}\npasses: [{}]\n";
  EXPECT_EQ(Fault(yaml, {"words.bridge=9"}),
            "--set words.bridge=9: words.bridge must be a whole number from 0 to 4, not '9'");
  EXPECT_EQ(Fault(yaml, {"words.brigde=1"}),
            "--set words.brigde=1: unknown key 'brigde' in words; did you mean 'bridge'?");
  EXPECT_EQ(Fault(yaml, {"limit.threads=1"}),
            "--set limit.threads=1: unknown key 'limit'; did you mean 'limits'?");
  EXPECT_EQ(Fault(yaml, {"words=3"}), "--set words=3: words must be a map of keys, not '3'");
  EXPECT_EQ(Fault(yaml, {"words.bridge="}),
            "--set words.bridge=: words.bridge has no value; leave the key out to get the default");
  EXPECT_EQ(Fault(yaml, {"words=[a"}), "--set words=[a: not YAML: end of sequence flow not found");
  EXPECT_EQ(Fault(yaml, {"words.function_words=grman"}),
            "--set words.function_words=grman: words.function_words: 'grman' is neither a file nor "
            "one of the built-in lists none, english, french, german, spanish; did you mean "
            "'german'?");
  const std::string shape = ": write it as key=value, such as --set limits.threads=4";
  EXPECT_EQ(Fault(yaml, {"threads"}), "--set threads" + shape);
  EXPECT_EQ(Fault(yaml, {"=3"}), "--set =3" + shape);
  EXPECT_EQ(Fault(yaml, {"limits..threads=3"}), "--set limits..threads=3" + shape);
}

TEST_F(JobFaults, ASettingMustFindItsPlace) {
  const std::string yaml = "job: tides\ncorpus: {files: [a]}\npasses: [{}]\n";
  EXPECT_EQ(Fault(yaml, {"passes.1.take=3"}),
            "--set passes.1.take=3: 'passes' is a list with 1 entry, counted from 0, and has no "
            "'1'");
  EXPECT_EQ(Fault(yaml, {"passes.take=3"}),
            "--set passes.take=3: 'passes' is a list with 1 entry, counted from 0, and has no "
            "'take'");
  EXPECT_EQ(Fault(yaml, {"job.name=x"}),
            "--set job.name=x: 'job' is 'tides' and has no keys, so it has no 'name'");
}

TEST_F(JobFaults, FaultsOfTheFileComeBeforeThoseOfSettings) {
  const std::string message =
      Fault("corpus: {files: [a]}\nwords: {bridge: 7}\n", {"limits.threads=-1", "job=/"});
  const size_t file = message.find("demo.yaml:2:17: words.bridge");
  const size_t first = message.find("--set limits.threads=-1: limits.threads must be");
  const size_t second = message.find("--set job=/: job must be");
  EXPECT_EQ(file, 0u);
  EXPECT_LT(file, first);
  EXPECT_LT(first, second);
  EXPECT_NE(second, std::string::npos);
}

}  // namespace
}  // namespace phraseweld
