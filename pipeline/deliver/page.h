#ifndef PHRASEWELD_DELIVER_PAGE_H_
#define PHRASEWELD_DELIVER_PAGE_H_

#include <cstdint>
#include <string>
#include <utility>
#include <vector>

#include "base/quantity.h"
#include "base/table.h"

namespace phraseweld {

// What the report page shows of a run. All texts are UTF-8; a byte outside well-formed UTF-8 is
// shown as U+FFFD. A phrase's text is its words' forms joined by one space, and the texts of the
// sides and the bridge of a merge are written alike, so that a side that is itself a phrase of
// `PageData::phrases` is found there by its text.

// A place in the corpus. `byte` is the offset of the match in the passage's text; `before` and
// `after` are as much of the text around it as is to be shown.
struct PageContext {
  std::string document;
  std::string passage;
  uint64_t byte = 0;
  std::string before;
  std::string match;
  std::string after;
};

// A slot type in one pass: how a phrase was made, or nearly.
struct PageMerge {
  int pass = 0;       // 0: joined by an always-ruling, and only `joined` means anything
  uint64_t rank = 0;  // from 1
  std::string left;
  std::string bridge;  // empty: the sides are neighbours
  std::string right;
  SlotTable table;
  double expected = 0;
  std::vector<std::pair<Quantity, double>> scores;
  uint64_t joined = 0;
  uint64_t yielded = 0;
};

// A row of the inventory.
struct PagePhrase {
  std::string phrase;
  std::string surface;
  int words = 0;
  int pass = 0;  // where it was first made
  uint64_t occurrences = 0;
  uint64_t inside_longer = 0;
  uint64_t documents = 0;
  std::vector<PageMerge> made_of;     // by pass, then rank
  std::vector<PageContext> contexts;  // a few; the page grows by each
};

struct PageNearMiss {
  std::string phrase;
  int words = 0;
  PageMerge merge;
  Quantity failed = Quantity::kDocuments;  // a gate of its pass
  std::vector<PageContext> contexts;
};

struct PagePass {
  int pass = 0;  // 0: the rulings
  std::string name;
  uint64_t tokens_in = 0;
  uint64_t types_in = 0;
  uint64_t slots = 0;
  uint64_t slot_types = 0;
  Quantity rank_by = Quantity::kPmi;
  std::vector<std::pair<Quantity, double>> accept;  // gates: value at least so much
  uint64_t accepted = 0;                            // types
  uint64_t joined = 0;                              // merges
  uint64_t words_absorbed = 0;
  uint64_t tokens_out = 0;
};

// A ruling that the run was made under.
struct PageRuling {
  bool always = false;
  std::string phrase;  // as written
  std::string form;    // as the phrases' texts are written
  std::string reason;
};

struct PageData {
  std::string program;  // name and version
  std::string job;
  uint64_t files = 0;
  uint64_t bytes = 0;
  uint64_t documents = 0;
  std::vector<std::pair<std::string, std::string>> settings;  // keys of the job file and values
  std::vector<PagePass> passes;                               // in order, also the empty ones
  std::vector<PagePhrase> phrases;                            // in the order of the inventory
  std::vector<PageNearMiss> near_misses;                      // by pass, then rank
  std::vector<PageRuling> rulings;                            // in the order of their file
};

// The report: one HTML file that loads nothing from anywhere, the same bytes for the same data.
// Pure; any thread. Takes memory of about twice the page's size.
std::string RenderPage(const PageData& data);

}  // namespace phraseweld

#endif  // PHRASEWELD_DELIVER_PAGE_H_
