#include "reference/inventory.h"

#include <algorithm>
#include <map>
#include <set>
#include <stdexcept>
#include <utility>

#include "reference/audit.h"
#include "reference/json_writer.h"
#include "reference/slots.h"
#include "reference/words.h"

namespace phraseweld::reference {
namespace {

// How a phrase was made: in this pass, out of this slot type (empty in pass 0).
using Derivation = std::pair<int, SlotType>;

struct Phrase {
  Forms forms;
  uint64_t occurrences = 0;
  uint64_t inside_longer = 0;
  std::set<size_t> documents;
  std::map<std::string, uint64_t> spellings;  // of its tokens in the final stream
  std::map<Derivation, uint64_t> joined;
};

Derivation DerivationOf(const Token& token) {
  if (token.pass == 0) return {0, SlotType{}};
  SlotType type;
  type.left = token.parts.front().forms;
  for (size_t i = 1; i + 1 < token.parts.size(); ++i) {
    type.bridge.push_back(token.parts[i].forms[0]);
  }
  type.right = token.parts.back().forms;
  return {token.pass, type};
}

// "words as in the source, a hyphen or an empty gap as it is, any other gap as one space"
std::string SpellingOf(const Token& token, const Passage& passage) {
  std::string spelling;
  for (size_t i = token.first_word; i <= token.last_word; ++i) {
    const Word& word = passage.words[i];
    if (i > token.first_word) {
      const size_t gap_begin = passage.words[i - 1].end;
      const std::string gap = passage.text.substr(gap_begin, word.begin - gap_begin);
      spelling += gap.empty() || IsHyphen(gap) ? gap : " ";
    }
    spelling += passage.text.substr(word.begin, word.end - word.begin);
  }
  return spelling;
}

// Takes in a merged token and the merged tokens inside it.
void TakeToken(const Token& token, bool inside_longer, size_t document, const Passage& passage,
               std::map<Forms, Phrase>& phrases) {
  if (token.parts.empty()) return;
  Phrase& phrase = phrases[token.forms];
  phrase.forms = token.forms;
  phrase.documents.insert(document);
  ++phrase.joined[DerivationOf(token)];
  if (inside_longer) {
    ++phrase.inside_longer;
  } else {
    ++phrase.occurrences;
    ++phrase.spellings[SpellingOf(token, passage)];
  }
  for (const Token& part : token.parts) TakeToken(part, true, document, passage, phrases);
}

// "the most frequent spelling of its tokens in the final stream (ties: byte order; where it has no
// token there, its text)"
std::string SurfaceOf(const Phrase& phrase) {
  std::string surface = Text(phrase.forms);
  uint64_t most = 0;
  for (const auto& [spelling, count] : phrase.spellings) {  // in byte order
    if (count > most) {
      surface = spelling;
      most = count;
    }
  }
  return surface;
}

// A derivation and what its pass said of it; pass 0 says nothing.
struct Made {
  int pass = 0;
  size_t rank = 0;
  uint64_t joined = 0;
  const Candidate* candidate = nullptr;
  const PassOptions* options = nullptr;
};

// "made_of lists every derivation", by pass, then rank.
std::vector<Made> MadeOf(const Phrase& phrase, const std::vector<PassRecord>& passes) {
  std::vector<Made> made_of;
  const auto pass_0 = phrase.joined.find({0, SlotType{}});
  if (pass_0 != phrase.joined.end()) {
    Made made;
    made.joined = pass_0->second;
    made_of.push_back(made);
  }
  for (const PassRecord& pass : passes) {
    for (size_t rank = 0; rank < pass.accepted.size(); ++rank) {
      const Candidate& candidate = pass.accepted[rank];
      if (candidate.joined == 0 || PhraseOf(candidate.type) != phrase.forms) continue;
      const auto found = phrase.joined.find({pass.number, candidate.type});
      if (found == phrase.joined.end() || found->second != candidate.joined) {
        throw std::logic_error("the merges of \"" + Text(phrase.forms) + "\" do not balance");
      }
      made_of.push_back({pass.number, rank, candidate.joined, &candidate, &pass.options});
    }
  }
  if (made_of.size() != phrase.joined.size()) {
    throw std::logic_error("\"" + Text(phrase.forms) + "\" was made of what was not accepted");
  }
  return made_of;
}

std::string MadeOfJson(const std::vector<Made>& made_of) {
  std::string list;
  for (const Made& made : made_of) {
    const SlotType type = made.candidate == nullptr ? SlotType{} : made.candidate->type;
    JsonObject derivation;
    derivation.Count("pass", static_cast<uint64_t>(made.pass));
    derivation.Text("left", Text(type.left));
    derivation.Text("bridge", Text(type.bridge));
    derivation.Text("right", Text(type.right));
    derivation.Count("joined", made.joined);
    if (!list.empty()) list += ",";
    list += derivation.Finish();
  }
  return std::string("[").append(list).append("]");
}

bool ComesFirst(const Phrase& a, const Phrase& b) {
  const uint64_t a_made = a.occurrences + a.inside_longer;
  const uint64_t b_made = b.occurrences + b.inside_longer;
  if (a_made != b_made) return a_made > b_made;
  if (Text(a.forms) != Text(b.forms)) return Text(a.forms) < Text(b.forms);
  return a.forms < b.forms;
}

}  // namespace

InventoryFiles MakeInventory(const std::vector<Document>& documents, const Lists& lists,
                             const std::vector<PassRecord>& passes) {
  std::map<Forms, Phrase> phrases;
  for (size_t d = 0; d < documents.size(); ++d) {
    for (const Passage& passage : documents[d].passages) {
      for (const Token& token : passage.tokens) TakeToken(token, false, d, passage, phrases);
    }
  }
  std::vector<Phrase> in_order;
  for (const auto& [forms, phrase] : phrases) in_order.push_back(phrase);
  std::sort(in_order.begin(), in_order.end(), ComesFirst);

  InventoryFiles files;
  files.tsv =
      "phrase\twords\tpass\toccurrences\tinside_longer\tdocuments\tsurface\tpmi\tnpmi\tg2\n";
  for (const Phrase& phrase : in_order) {
    const std::vector<Made> made_of = MadeOf(phrase, passes);
    const auto scored = std::find_if(made_of.begin(), made_of.end(),
                                     [](const Made& made) { return made.candidate != nullptr; });
    const auto pass = static_cast<uint64_t>(made_of.front().pass);

    JsonObject line;
    line.Text("phrase", Text(phrase.forms));
    line.Count("words", phrase.forms.size());
    line.Count("pass", pass);
    line.Count("occurrences", phrase.occurrences);
    line.Count("inside_longer", phrase.inside_longer);
    line.Count("documents", phrase.documents.size());
    line.Text("surface", SurfaceOf(phrase));
    line.Json("made_of", MadeOfJson(made_of));
    line.Json("scores",
              scored == made_of.end() ? "{}" : ScoresOf(*scored->candidate, *scored->options));
    for (const AlwaysRuling& ruling : lists.always) {
      if (ruling.forms == phrase.forms && !ruling.reason.empty()) {
        line.Text("reason", ruling.reason);
      }
    }
    files.jsonl += line.Finish() + "\n";

    files.tsv += Text(phrase.forms) + "\t" + std::to_string(phrase.forms.size()) + "\t" +
                 std::to_string(pass) + "\t" + std::to_string(phrase.occurrences) + "\t" +
                 std::to_string(phrase.inside_longer) + "\t" +
                 std::to_string(phrase.documents.size()) + "\t" + SurfaceOf(phrase);
    for (const Quantity quantity : {Quantity::kPmi, Quantity::kNpmi, Quantity::kG2}) {
      files.tsv += "\t";
      if (scored != made_of.end()) {
        files.tsv += NineDecimals(scored->candidate->values.at(quantity));
      }
    }
    files.tsv += "\n";
  }
  return files;
}

}  // namespace phraseweld::reference
