#ifndef PHRASEWELD_CONFIG_KEYS_H_
#define PHRASEWELD_CONFIG_KEYS_H_

#include <cstdint>
#include <functional>
#include <optional>
#include <string>
#include <string_view>
#include <variant>
#include <vector>

#include "absl/status/status.h"
#include "absl/types/span.h"
#include "base/job.h"

namespace phraseweld {

// The one table of the job file's keys. Reading, checking, defaults, the resolved job and the
// reference in the README all come from it.

enum class KeyKind {
  kWhole,    // a whole number in [least, most]
  kCount,    // a whole number of at least 1, or "all"
  kSize,     // bytes, at least `least`
  kTruth,    // true or false
  kChoice,   // one of `choices`
  kMeasure,  // the name of a measure
  kText,     // a text without control characters
  kTexts,    // a list of such texts, none of them empty or twice
  kGates,    // a map from quantities to the least value
};

// An enumeration by the position of its value in the key's `choices`.
struct ChoiceField {
  std::function<int()> get;
  std::function<void(int)> set;
};

using KeyField =
    std::variant<int*, std::optional<uint64_t>*, uint64_t*, bool*, ChoiceField, Quantity*,
                 std::string*, std::vector<std::string>*, std::vector<Gate>*>;

struct Key {
  std::string_view path;  // "words.bridge"; "passes[].take" stands in each pass
  KeyKind kind;
  // As it would be written in a job file. Empty: there is none, or it depends on other keys.
  std::string_view default_value;
  std::string_view default_words;  // what the reference says instead of `default_value`
  int64_t least = 0;
  int64_t most = 0;
  absl::Span<const std::string_view> choices;
  std::string_view unset;  // kText: the word that is read as, and written for, an empty text
  absl::Status (*check)(const std::string& text);  // kText: more to ask of it, may be null
  std::string_view meaning;                        // one sentence
  KeyField (*field)(Job& job, PassOptions* pass);  // `pass` for keys below "passes[]."
};

inline constexpr std::string_view kPassPrefix = "passes[].";

// In the order in which a job is written out.
absl::Span<const Key> JobKeys();

// What a value of `key` should be, for messages and the reference: "a whole number from 0 to 4".
std::string Wanted(const Key& key);

}  // namespace phraseweld

#endif  // PHRASEWELD_CONFIG_KEYS_H_
