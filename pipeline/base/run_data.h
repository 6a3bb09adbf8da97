#ifndef PHRASEWELD_BASE_RUN_DATA_H_
#define PHRASEWELD_BASE_RUN_DATA_H_

#include <cstdint>
#include <optional>
#include <string>
#include <utility>
#include <vector>

#include "base/job.h"
#include "base/quantity.h"
#include "base/records.h"
#include "base/table.h"

namespace phraseweld {

// What a finished run folder says, read back. Here phrases and their parts are texts (forms joined
// by one space), not ids. Two different phrases can have one text where a form holds a space.

// An accepted or a near_miss line of a pass's audit log.
struct RunSlot {
  uint64_t rank = 0;  // from 1, among the accepted types or among the near misses
  std::string phrase;
  std::string left;
  std::string bridge;
  std::string right;
  // `all` is the pass's number of slots; where the job says `margins: words` the measures want its
  // tokens there instead.
  SlotTable table;
  double expected = 0;
  std::vector<std::pair<Quantity, double>> scores;  // as printed
  uint64_t joined = 0;
  uint64_t yielded = 0;
  Place first;
  std::optional<Quantity> failed;  // near misses alone
};

// A ruled line of pass 0.
struct RunRuled {
  std::string phrase;
  uint64_t joined = 0;
  uint64_t documents = 0;
  std::string reason;
};

// The first line of a pass's audit log. Pass 0 has no slots, rank_by and gates.
struct RunPassHead {
  int number = 0;
  std::string name;
  uint64_t tokens_in = 0;
  uint64_t types_in = 0;
  uint64_t slots = 0;
  uint64_t slot_types = 0;
  std::optional<Quantity> rank_by;
  std::vector<Gate> accept;
};

// The last line.
struct RunBalance {
  uint64_t tokens_in = 0;
  uint64_t accepted = 0;
  uint64_t joined = 0;
  uint64_t words_absorbed = 0;
  uint64_t tokens_out = 0;
};

struct RunPass {
  RunPassHead head;
  std::vector<RunRuled> ruled;       // in the order in which they were carried out
  std::vector<RunSlot> accepted;     // in rank order
  std::vector<RunSlot> near_misses;  // in rank order
  RunBalance balance;
};

// One way in which a phrase was made; in pass 0 the texts are empty.
struct RunDerivation {
  int pass = 0;
  std::string left;
  std::string bridge;
  std::string right;
  uint64_t joined = 0;
};

// A line of inventory.jsonl.
struct RunPhrase {
  std::string phrase;
  int words = 0;
  int pass = 0;  // where it was first made
  uint64_t occurrences = 0;
  uint64_t inside_longer = 0;
  uint64_t documents = 0;
  std::string surface;
  std::vector<RunDerivation> made_of;
  std::vector<std::pair<Quantity, double>> scores;  // of its first derivation that has any
  std::string reason;                               // of an always-ruling

  uint64_t made() const { return occurrences + inside_longer; }
};

struct RunInput {
  std::string path;  // as it was opened
  std::string name;  // below corpus/
  uint64_t stored_bytes = 0;
  uint64_t text_bytes = 0;
  std::string xxh3_128;  // of the stored bytes, in hexadecimal
};

struct RunOutput {
  std::string path;  // in the run folder
  uint64_t bytes = 0;
  std::string xxh3_128;
};

struct ManifestTotals {
  uint64_t documents = 0;
  uint64_t words = 0;
  uint64_t word_types = 0;
  uint64_t passes = 0;
  uint64_t phrases = 0;
  uint64_t tokens_out = 0;
  uint64_t words_in_phrases = 0;
  uint64_t bad_lines = 0;
};

// manifest.json.
struct RunManifest {
  std::string program;
  std::string version;
  std::string job;
  std::vector<RunInput> inputs;    // in the order of the corpus
  std::vector<RunOutput> outputs;  // in the order of the manifest
  ManifestTotals totals;
  std::vector<std::pair<std::string, double>> timings;  // the numbers among them
};

// A whole run folder, less the corpus and the job.
struct RunData {
  std::string folder;
  RunManifest manifest;
  std::vector<RunPass> passes;     // by number; pass 0 only where something was ruled always
  std::vector<RunPhrase> phrases;  // in the order of the inventory
};

}  // namespace phraseweld

#endif  // PHRASEWELD_BASE_RUN_DATA_H_
