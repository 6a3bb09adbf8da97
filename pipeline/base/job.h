#ifndef PHRASEWELD_BASE_JOB_H_
#define PHRASEWELD_BASE_JOB_H_

#include <cstdint>
#include <optional>
#include <string>
#include <utility>
#include <vector>

#include "base/quantity.h"

namespace phraseweld {

enum class Layout { kText, kLines, kParagraphs, kJsonLines };
enum class BadLines { kStop, kKeep };
enum class Fold { kNone, kCase, kCompatibilityCase };
enum class Hyphens { kJoin, kSeparate };
enum class Numbers { kAnywhere, kNotFirst, kNowhere };
enum class Margins { kSlots, kWords };
enum class CorpusForm { kSource, kWords, kNone };
enum class Compress { kNone, kZstd };

// A gate: the value of `quantity` must be at least `least`.
struct Gate {
  Quantity quantity;
  double least;
};

struct PassOptions {
  std::string name = "pass";
  int repeat = 1;
  Quantity rank_by = Quantity::kPmi;
  Margins margins = Margins::kSlots;
  std::vector<Gate> accept = {{Quantity::kOccurrences, 5}};  // at most one a quantity, by Quantity
  std::optional<uint64_t> take;
};

// One line of a rulings file.
struct Ruling {
  bool always = false;
  std::string phrase;  // as written
  std::string reason;
  std::string file;
  int line = 0;  // from 1
};

// A job as resolved: what the job file says, with defaults, its lists read in.
struct Job {
  std::string job;
  std::string run_folder;
  struct Corpus {
    std::vector<std::string> files;  // as written: paths, globs, "-"
    Layout layout = Layout::kText;
    std::vector<std::string> fields = {"text"};
    std::string id;  // empty: documents are named by their ordinal
    BadLines bad_lines = BadLines::kStop;
  } corpus;
  struct Words {
    Fold fold = Fold::kCompatibilityCase;
    bool strip_accents = false;
    Hyphens hyphens = Hyphens::kJoin;
    Numbers numbers = Numbers::kNotFirst;
    std::string function_words = "none";          // as written: none, a language, or a file
    std::vector<std::string> function_word_list;  // read in, as written in the list
    int bridge = 2;
  } words;
  std::vector<PassOptions> passes = {PassOptions{}};
  struct Phrases {
    int longest = 6;
    std::string rulings;  // path, empty: none
    std::vector<Ruling> ruling_list;
  } phrases;
  struct Deliver {
    CorpusForm corpus = CorpusForm::kSource;
    std::string joiner = "_";
    Compress compress = Compress::kNone;
    bool spans = false;
    bool report = true;
  } deliver;
  struct Limits {
    uint64_t memory = uint64_t{2} << 30;  // bytes
    int threads = 0;                      // 0: all
  } limits;
  struct Debug {
    bool recount = false;  // count every pass from scratch as well and compare
  } debug;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_BASE_JOB_H_
