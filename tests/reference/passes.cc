#include "reference/passes.h"

#include <algorithm>
#include <set>
#include <utility>

namespace phraseweld::reference {
namespace {

std::map<Forms, uint64_t> TokenFrequencies(const std::vector<Document>& documents) {
  std::map<Forms, uint64_t> frequencies;
  for (const Document& document : documents) {
    for (const Passage& passage : document.passages) {
      for (const Token& token : passage.tokens) ++frequencies[token.forms];
    }
  }
  return frequencies;
}

uint64_t CountTokens(const std::vector<Document>& documents) {
  uint64_t tokens = 0;
  for (const Document& document : documents) {
    for (const Passage& passage : document.passages) tokens += passage.tokens.size();
  }
  return tokens;
}

// Puts one token in the place of each of the given stretches of tokens (places in the passage's
// tokens, one behind the other each; no two stretches share a token).
void Merge(std::vector<std::vector<size_t>> stretches, int pass, Passage& passage) {
  std::sort(stretches.begin(), stretches.end());
  std::vector<Token> stream;
  size_t next = 0;
  for (const std::vector<size_t>& stretch : stretches) {
    while (next < stretch.front()) stream.push_back(passage.tokens[next++]);
    Token merged;
    merged.first_word = passage.tokens[stretch.front()].first_word;
    merged.last_word = passage.tokens[stretch.back()].last_word;
    merged.break_before = passage.tokens[stretch.front()].break_before;
    merged.pass = pass;
    for (const size_t place : stretch) {
      const Token& part = passage.tokens[place];
      merged.forms.insert(merged.forms.end(), part.forms.begin(), part.forms.end());
      merged.parts.push_back(part);
    }
    stream.push_back(std::move(merged));
    next = stretch.back() + 1;
  }
  while (next < passage.tokens.size()) stream.push_back(passage.tokens[next++]);
  passage.tokens = std::move(stream);
}

// Section 4: n, L, R, N, documents and the first slot of every slot type.
struct Counting {
  uint64_t slots = 0;
  std::map<SlotType, Candidate> types;
};

Counting CountSlots(const Job& job, const PassOptions& options, const Lists& lists,
                    const std::vector<Document>& documents) {
  Counting counting;
  std::map<std::pair<Forms, Forms>, uint64_t> with_left;   // (x, β)
  std::map<std::pair<Forms, Forms>, uint64_t> with_right;  // (β, y)
  std::map<Forms, uint64_t> with_bridge;                   // β
  std::map<SlotType, std::set<size_t>> documents_of;
  for (size_t d = 0; d < documents.size(); ++d) {
    for (const Passage& passage : documents[d].passages) {
      for (const auto& run : FindRuns(passage, lists, job.words.numbers)) {
        for (const Slot& slot : FindSlots(passage, run, lists, job.words.bridge)) {
          const SlotType& type = slot.type;
          Candidate& candidate = counting.types[type];
          if (candidate.counts.n == 0) {
            candidate.type = type;
            candidate.first_document = documents[d].name;
            candidate.first_passage = passage.name;
            candidate.first_byte =
                passage.words[passage.tokens[slot.tokens.front()].first_word].begin;
          }
          ++candidate.counts.n;
          ++counting.slots;
          ++with_left[{type.left, type.bridge}];
          ++with_right[{type.bridge, type.right}];
          ++with_bridge[type.bridge];
          documents_of[type].insert(d);
        }
      }
    }
  }

  const std::map<Forms, uint64_t> frequencies = TokenFrequencies(documents);
  const uint64_t tokens = CountTokens(documents);
  for (auto& [type, candidate] : counting.types) {
    Counts& counts = candidate.counts;
    counts.documents = documents_of[type].size();
    counts.L = with_left[{type.left, type.bridge}];
    counts.R = with_right[{type.bridge, type.right}];
    counts.N = with_bridge[type.bridge];
    counts.M = counting.slots;
    // "With margins: words slots with empty β use instead L = the token frequency of x, R = that
    // of y, and N = the number of tokens"; section 5: M is then the pass's tokens, for every β.
    if (options.margins == Margins::kWords) {
      counts.M = tokens;
      if (type.bridge.empty()) {
        counts.L = frequencies.at(type.left);
        counts.R = frequencies.at(type.right);
        counts.N = tokens;
      }
    }
  }
  return counting;
}

// Section 6: the gates and the rules.
void Judge(const Job& job, const PassOptions& options, const Lists& lists, Candidate& candidate) {
  for (const Gate& gate : options.accept) {
    if (!(candidate.values.at(gate.quantity) >= gate.least)) {
      candidate.failed_gates.push_back(gate.quantity);
    }
  }
  const Forms phrase = PhraseOf(candidate.type);
  const bool too_long = phrase.size() > static_cast<size_t>(job.phrases.longest);
  // Section 2: "With not_first a number that is a single word may not be the left side of a merge".
  const bool number_left =
      job.words.numbers == Numbers::kNotFirst && IsSingleNumber(candidate.type.left, lists);
  const bool ruled_out = lists.never.contains(phrase);
  candidate.breaks_a_rule = too_long || number_left || ruled_out;
}

// Section 6: "The order among accepted types".
bool RanksFirst(const Candidate& a, const Candidate& b, Quantity rank_by) {
  if (a.values.at(rank_by) != b.values.at(rank_by)) {
    return a.values.at(rank_by) > b.values.at(rank_by);
  }
  if (a.counts.n != b.counts.n) return a.counts.n > b.counts.n;
  const std::string a_phrase = Text(PhraseOf(a.type));
  const std::string b_phrase = Text(PhraseOf(b.type));
  if (a_phrase != b_phrase) return a_phrase < b_phrase;
  if (Text(a.type.left) != Text(b.type.left)) return Text(a.type.left) < Text(b.type.left);
  if (Text(a.type.bridge) != Text(b.type.bridge)) {
    return Text(a.type.bridge) < Text(b.type.bridge);
  }
  // Forms may hold spaces, so that two types can have all their texts alike.
  if (a.type.left != b.type.left) return a.type.left < b.type.left;
  if (a.type.bridge != b.type.bridge) return a.type.bridge < b.type.bridge;
  return a.type.right < b.type.right;
}

bool ShareAToken(const Slot& a, const Slot& b) {
  for (const size_t token : a.tokens) {
    if (std::find(b.tokens.begin(), b.tokens.end(), token) != b.tokens.end()) return true;
  }
  return false;
}

// Section 7: "In each run, while any accepted slot is left: take the one whose type ranks first,
// among slots of that same type the leftmost; merge it; drop the slots that shared a token with
// it." Returns the slots to merge; counts joined and yielded. `rank` holds the accepted types'
// places in `accepted`.
std::vector<Slot> ChooseSlots(std::vector<Slot> left, const std::map<SlotType, size_t>& rank,
                              std::vector<Candidate>& accepted) {
  std::vector<Slot> chosen;
  while (!left.empty()) {
    size_t best = 0;
    for (size_t i = 1; i < left.size(); ++i) {
      const size_t rank_i = rank.at(left[i].type);
      const size_t rank_best = rank.at(left[best].type);
      const bool further_left = left[i].tokens.front() < left[best].tokens.front();
      if (rank_i < rank_best || (rank_i == rank_best && further_left)) best = i;
    }
    const Slot taken = left[best];
    chosen.push_back(taken);
    ++accepted[rank.at(taken.type)].joined;
    left.erase(left.begin() + static_cast<std::ptrdiff_t>(best));
    std::vector<Slot> still_left;
    for (const Slot& slot : left) {
      if (ShareAToken(slot, taken)) {
        ++accepted[rank.at(slot.type)].yielded;
      } else {
        still_left.push_back(slot);
      }
    }
    left = still_left;
  }
  return chosen;
}

}  // namespace

// Section 6, rulings: "before pass 1 a pass 0 joins every stretch of tokens in a run whose forms
// are those words, longer rulings first (then byte order), leftmost first".
RulingsRecord JoinRulings(const Job& job, const Lists& lists, std::vector<Document>& documents) {
  RulingsRecord record;
  record.tokens_in = CountTokens(documents);
  record.types_in = TokenFrequencies(documents).size();
  for (const AlwaysRuling& ruling : lists.always) {
    RuledRecord ruled;
    ruled.ruling = ruling;
    const size_t length = ruling.forms.size();
    for (Document& document : documents) {
      bool joined_here = false;
      for (Passage& passage : document.passages) {
        std::vector<std::vector<size_t>> stretches;
        for (const auto& run : FindRuns(passage, lists, job.words.numbers)) {
          size_t i = 0;
          while (i + length <= run.size()) {
            bool matches = length > 0;
            for (size_t k = 0; k < length; ++k) {
              // A token of several words matches no single form.
              if (passage.tokens[run[i + k]].forms != Forms{ruling.forms[k]}) matches = false;
            }
            if (matches) {
              stretches.emplace_back(run.begin() + static_cast<std::ptrdiff_t>(i),
                                     run.begin() + static_cast<std::ptrdiff_t>(i + length));
              i += length;
            } else {
              ++i;
            }
          }
        }
        ruled.joined += stretches.size();
        joined_here = joined_here || !stretches.empty();
        Merge(stretches, 0, passage);
      }
      if (joined_here) ++ruled.documents;
    }
    record.ruled.push_back(ruled);
  }
  record.tokens_out = CountTokens(documents);
  return record;
}

PassRecord CarryOutPass(const Job& job, const PassOptions& options, int number, const Lists& lists,
                        std::vector<Document>& documents) {
  PassRecord record;
  record.number = number;
  record.options = options;
  record.tokens_in = CountTokens(documents);
  record.types_in = TokenFrequencies(documents).size();

  Counting counting = CountSlots(job, options, lists, documents);
  record.slots = counting.slots;
  record.slot_types = counting.types.size();

  // Sections 6 and 8: who is accepted, and who missed by one gate other than occurrences.
  for (auto& [type, candidate] : counting.types) {
    candidate.values = Measure(candidate.counts);
    Judge(job, options, lists, candidate);
    if (candidate.breaks_a_rule) continue;
    if (candidate.failed_gates.empty()) record.accepted.push_back(candidate);
    if (candidate.failed_gates.size() == 1 && candidate.failed_gates[0] != Quantity::kOccurrences) {
      record.near_misses.push_back(candidate);
    }
  }
  const auto ranks_first = [&options](const Candidate& a, const Candidate& b) {
    return RanksFirst(a, b, options.rank_by);
  };
  std::sort(record.accepted.begin(), record.accepted.end(), ranks_first);
  std::sort(record.near_misses.begin(), record.near_misses.end(), ranks_first);
  // "If take: K is set, the best K of the accepted are taken."
  if (options.take.has_value() && record.accepted.size() > *options.take) {
    record.accepted.resize(*options.take);
  }
  if (record.near_misses.size() > 200) record.near_misses.resize(200);

  // Section 7.
  std::map<SlotType, size_t> rank;
  for (size_t i = 0; i < record.accepted.size(); ++i) rank[record.accepted[i].type] = i;
  for (Document& document : documents) {
    for (Passage& passage : document.passages) {
      std::vector<std::vector<size_t>> stretches;
      for (const auto& run : FindRuns(passage, lists, job.words.numbers)) {
        std::vector<Slot> accepted_slots;
        for (const Slot& slot : FindSlots(passage, run, lists, job.words.bridge)) {
          if (rank.contains(slot.type)) accepted_slots.push_back(slot);
        }
        for (const Slot& slot : ChooseSlots(accepted_slots, rank, record.accepted)) {
          stretches.push_back(slot.tokens);
        }
      }
      Merge(stretches, number, passage);
    }
  }
  record.tokens_out = CountTokens(documents);
  return record;
}

}  // namespace phraseweld::reference
