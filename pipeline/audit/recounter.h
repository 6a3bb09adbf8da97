#ifndef PHRASEWELD_AUDIT_RECOUNTER_H_
#define PHRASEWELD_AUDIT_RECOUNTER_H_

#include <array>
#include <cstdint>
#include <deque>
#include <map>
#include <string>
#include <string_view>
#include <vector>

#include "absl/container/flat_hash_map.h"
#include "absl/types/span.h"
#include "base/records.h"
#include "base/table.h"

namespace phraseweld {

// A second way to the numbers of a finished run, for the sake of proving them: where the program
// counts all slots of the corpus pass by pass, this takes the run's word for which types were
// accepted in which order, and then carries each run of words through all passes at once, by the
// letter of the semantics in DEVELOPERS.md. It shares no step with what it checks. Memory grows
// with the audit, with the number of different words and with the longest run of words without a
// break, but not with the corpus.

// A slot type as forms.
struct RecountSlot {
  std::vector<std::string> left;
  std::vector<std::string> bridge;
  std::vector<std::string> right;
};

struct RecountPass {
  bool word_margins = false;
  std::vector<RecountSlot> accepted;  // in rank order; of equal ones the first is merged
  std::vector<RecountSlot> watched;   // counted and not merged
};

struct RecountRules {
  std::vector<std::string> function_words;  // forms
  int bridge = 0;
  bool numbers_end_runs = false;
  std::vector<std::vector<std::string>> always;  // forms, in the order in which they are joined
  std::vector<RecountPass> passes;
};

// Consecutive words of a passage with nothing but open gaps between them.
struct RecountRun {
  struct Word {
    uint32_t type = 0;            // what Recounter::Word() gave
    uint64_t begin = 0, end = 0;  // in `text`
  };
  std::string text;          // from the first byte of the first word to the end of the last
  uint64_t text_offset = 0;  // of text[0] in the passage's text
  std::vector<Word> words;
};

// A token of a run: `words` words from `first_word` on.
struct RecountToken {
  uint32_t type = 0;
  size_t first_word = 0;
  size_t words = 1;
};

struct SlotRecount {
  SlotTable table;  // all but `all`
  uint64_t joined = 0;
  uint64_t yielded = 0;
  Place first;          // where n > 0
  uint32_t phrase = 0;  // the type that it makes
};

struct PassRecount {
  uint64_t tokens_in = 0, types_in = 0, slots = 0;
  std::vector<SlotRecount> accepted, watched;  // as in RecountPass
  uint64_t joined = 0, words_absorbed = 0, tokens_out = 0;
};

struct RuledRecount {
  uint64_t joined = 0, documents = 0;
  uint32_t phrase = 0;
};

struct RulingsRecount {
  uint64_t tokens_in = 0, types_in = 0;
  std::vector<RuledRecount> ruled;
  uint64_t joined = 0, words_absorbed = 0, tokens_out = 0;
};

struct PhraseRecount {
  std::vector<uint32_t> words;
  uint64_t made = 0;         // tokens, in all passes
  uint64_t occurrences = 0;  // tokens of the final stream
  uint64_t documents = 0;    // in which one was made
  std::string surface;
};

// Not thread-safe.
class Recounter {
 public:
  explicit Recounter(const RecountRules& rules);

  // The type of a word. Call it for each word of the corpus in order: whether the form counts as a
  // number is what its first word said.
  uint32_t Word(std::string_view form, bool number);

  void BeginDocument(std::string_view name);
  void BeginPassage(std::string_view name);
  // Carries a run through all passes. Returns its tokens in the final stream, good until the next
  // call.
  const std::vector<RecountToken>& AddRun(const RecountRun& run);

  // Completes what follows. Nothing may be added after.
  void Finish();
  uint64_t documents() const { return documents_; }
  uint64_t words() const { return word_tokens_; }
  uint64_t word_types() const { return word_types_; }
  uint64_t tokens_out() const { return tokens_out_; }
  const std::vector<PassRecount>& passes() const { return results_; }
  const RulingsRecount& rulings() const { return rulings_; }

  // At any time.
  bool is_phrase(uint32_t type) const { return type >= kFirstPhrase; }
  const PhraseRecount& phrase(uint32_t type) const { return phrases_[type - kFirstPhrase]; }
  size_t phrases() const { return phrases_.size(); }
  uint32_t phrase_type(size_t i) const { return kFirstPhrase + static_cast<uint32_t>(i); }
  std::vector<std::string> Forms(uint32_t type) const;
  std::string Text(uint32_t type, std::string_view between = " ") const;
  bool IsNumber(std::string_view form) const;
  // Forms of the corpus that hold a space.
  const std::vector<std::string>& spaced_forms() const { return spaced_forms_; }

 private:
  static constexpr uint32_t kFirstPhrase = 0x80000000u;
  static constexpr uint32_t kNoBridge = 0xFFFFFFFFu;

  struct WordEntry {
    std::string form;
    bool occurs = false, number = false, function_word = false;
  };
  struct Slot {
    size_t left = 0, right = 0;  // places in tokens_
    uint32_t bridge = 0;         // kNoBridge: one that no audited type has
  };
  using SlotKey = std::array<uint32_t, 3>;  // left, bridge, right
  // A bit a type that occurs.
  struct TypeSet {
    std::vector<bool> words, phrases;
    uint64_t size = 0;
    void Add(std::vector<bool>* bits, uint32_t index);
  };
  struct Pass {
    bool word_margins = false;
    size_t accepted = 0;
    std::vector<SlotKey> keys;  // the accepted types, then the watched ones
    absl::flat_hash_map<SlotKey, uint32_t> places;
    absl::flat_hash_map<uint64_t, uint64_t> left, right;  // of type and bridge
    std::vector<uint64_t> with_bridge;
    absl::flat_hash_map<uint32_t, uint64_t> tokens;  // for word margins
    std::vector<SlotRecount> counts;
    std::vector<uint64_t> last_document;
    TypeSet types;
    uint64_t tokens_in = 0, slots = 0, joined = 0, words_absorbed = 0;
  };
  struct Spellings {
    uint64_t last_document = 0;  // in which the phrase was made, from 1
    std::map<std::string, uint64_t> counts;
  };
  struct Merge {
    uint32_t rank = 0;
    size_t left = 0, right = 0;  // places in tokens_
    uint32_t phrase = 0;
  };

  uint32_t Intern(std::string_view form);
  uint32_t TypeOf(const std::vector<std::string>& forms);
  uint32_t PhraseOf(std::vector<uint32_t> words);
  void Prepare(const RecountPass& from, Pass* pass);
  bool EndsRun(uint32_t type) const {
    return numbers_end_runs_ && !is_phrase(type) && words_[type].number;
  }
  bool IsFunctionWord(uint32_t type) const {
    return !is_phrase(type) && words_[type].function_word;
  }
  uint32_t BridgeBetween(size_t left, size_t right);
  void CountTypes(TypeSet* types);
  void FindSlots();
  void CountPass(const RecountRun& run, Pass* pass);
  void MergePass(Pass* pass);
  void JoinRulings();
  void JoinTokens(const std::vector<Merge>& merges);
  void Made(uint32_t type);
  void CountFinal(const RecountRun& run);
  void FinishPass(const Pass& pass);

  const int bridge_;
  const bool numbers_end_runs_;
  std::deque<WordEntry> words_;
  absl::flat_hash_map<std::string_view, uint32_t> ids_;  // into words_
  std::vector<std::string> spaced_forms_;
  std::vector<PhraseRecount> phrases_;
  std::vector<Spellings> spellings_;
  absl::flat_hash_map<std::vector<uint32_t>, uint32_t> phrase_types_;
  absl::flat_hash_map<std::vector<uint32_t>, uint32_t> bridges_;
  std::vector<std::vector<uint32_t>> always_;
  std::vector<Pass> passes_;

  std::string document_, passage_;
  uint64_t documents_ = 0, word_tokens_ = 0, word_types_ = 0, tokens_out_ = 0;
  TypeSet types_before_rulings_;
  RulingsRecount rulings_;
  std::vector<uint64_t> ruled_last_document_;
  std::vector<PassRecount> results_;

  // Of the run at hand.
  std::vector<RecountToken> tokens_;
  std::vector<Slot> slots_;
  std::vector<uint32_t> between_;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_AUDIT_RECOUNTER_H_
