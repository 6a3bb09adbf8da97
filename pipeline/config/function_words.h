#ifndef PHRASEWELD_CONFIG_FUNCTION_WORDS_H_
#define PHRASEWELD_CONFIG_FUNCTION_WORDS_H_

#include <string>
#include <string_view>
#include <vector>

#include "absl/types/span.h"
#include "config/faults.h"
#include "files/file_system.h"

namespace phraseweld {

// A list that is part of the program: the text of configs/function-words/LANGUAGE.txt.
struct BuiltInFunctionWords {
  std::string_view language;
  std::string_view text;
};

// By language, in byte order. Defined in a file that the build makes from the lists.
absl::Span<const BuiltInFunctionWords> BuiltInFunctionWordLists();

// The words that `name` stands for: "none", a built-in language, or a file (a name with a "/" or a
// "." in it, or one that exists, relative to the working directory). One word a line; "#" starts a
// comment; blank lines mean nothing; words come as written. Everything wrong becomes a fault, in
// the list or at `named_at`.
std::vector<std::string> ReadFunctionWords(FileSystem& files, const std::string& name,
                                           const FaultPlace& named_at, Faults* faults);

}  // namespace phraseweld

#endif  // PHRASEWELD_CONFIG_FUNCTION_WORDS_H_
