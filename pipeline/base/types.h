#ifndef PHRASEWELD_BASE_TYPES_H_
#define PHRASEWELD_BASE_TYPES_H_

#include <cstdint>
#include <functional>
#include <string>
#include <string_view>
#include <vector>

#include "absl/container/flat_hash_map.h"
#include "absl/types/span.h"
#include "base/slots.h"

namespace phraseweld {

// The types of a run: the words of the vocabulary have the ids below word_types(), phrases those
// from there on, in the order in which they were first made. A phrase is the sequence of its words,
// whichever way it was put together.
class TypeTable {
 public:
  using FormOf = std::function<std::string_view(uint32_t word)>;
  // Asks memory for what FormOf will read of these words.
  using ExpectForms = std::function<void(absl::Span<const uint32_t> words)>;
  TypeTable() = default;
  TypeTable(uint32_t word_types, FormOf form_of, ExpectForms expect_forms = nullptr)
      : word_types_(word_types),
        form_of_(std::move(form_of)),
        expect_forms_(std::move(expect_forms)),
        offsets_{0} {}

  uint32_t word_types() const { return word_types_; }
  uint32_t size() const { return word_types_ + static_cast<uint32_t>(offsets_.size() - 1); }
  bool is_phrase(uint32_t type) const { return type >= word_types_; }
  int word_count(uint32_t type) const {
    if (!is_phrase(type)) return 1;
    const uint32_t phrase = type - word_types_;
    return static_cast<int>(offsets_[phrase + 1] - offsets_[phrase]);
  }
  // Appends the words of `type`.
  void AppendWords(uint32_t type, std::vector<uint32_t>* words) const {
    if (!is_phrase(type)) {
      words->push_back(type);
      return;
    }
    const uint32_t phrase = type - word_types_;
    words->insert(words->end(), words_.begin() + static_cast<ptrdiff_t>(offsets_[phrase]),
                  words_.begin() + static_cast<ptrdiff_t>(offsets_[phrase + 1]));
  }
  void AppendSlotWords(const Slot& slot, const BridgeCodes& codes,
                       std::vector<uint32_t>* words) const {
    AppendWords(slot.left, words);
    if (slot.bridge != 0) {
      const std::vector<uint32_t> bridge = codes.Words(slot.bridge);
      words->insert(words->end(), bridge.begin(), bridge.end());
    }
    AppendWords(slot.right, words);
  }
  std::vector<uint32_t> SlotWords(const Slot& slot, const BridgeCodes& codes) const {
    std::vector<uint32_t> words;
    AppendSlotWords(slot, codes, &words);
    return words;
  }
  std::string_view form(uint32_t word) const { return form_of_(word); }
  // Before many calls of Text(), which would wait for memory one by one.
  void ExpectTexts(absl::Span<const uint32_t> types) const {
    if (!expect_forms_) return;
    std::vector<uint32_t> words;
    for (const uint32_t type : types) AppendWords(type, &words);
    expect_forms_(words);
  }
  std::string Text(absl::Span<const uint32_t> words, std::string_view between = " ") const {
    std::string text;
    for (size_t i = 0; i < words.size(); ++i) {
      if (i > 0) text += between;
      text += form_of_(words[i]);
    }
    return text;
  }
  std::string Text(uint32_t type, std::string_view between = " ") const {
    std::vector<uint32_t> words;
    AppendWords(type, &words);
    return Text(words, between);
  }

  // Before so many phrases more are interned.
  void Reserve(size_t more) { first_by_hash_.reserve(first_by_hash_.size() + more); }
  // The id of the phrase with these words (two or more), new where there is none yet.
  uint32_t Intern(absl::Span<const uint32_t> words);
  // The same, or kBreak where there is none.
  uint32_t Find(absl::Span<const uint32_t> words) const;

 private:
  uint32_t word_types_ = 0;
  FormOf form_of_;
  ExpectForms expect_forms_;
  std::vector<uint32_t> words_;
  std::vector<uint64_t> offsets_ = {0};
  absl::flat_hash_map<uint64_t, uint32_t> first_by_hash_;
  std::vector<uint32_t> next_same_hash_;  // a phrase, the next one with its hash, or kBreak
};

}  // namespace phraseweld

#endif  // PHRASEWELD_BASE_TYPES_H_
