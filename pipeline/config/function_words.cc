#include "config/function_words.h"

#include <utility>

#include "base/nearest.h"
#include "base/strings.h"
#include "base/utf8.h"

namespace phraseweld {
namespace {

std::vector<std::string> Words(const Source* source, Faults* faults) {
  std::vector<std::string> words;
  size_t line_number = 0;
  for (std::string_view line : Split(source->text, '\n')) {
    ++line_number;
    const std::string_view whole = line;
    if (line_number == 1 && line.starts_with(kByteOrderMark)) {
      line.remove_prefix(kByteOrderMark.size());
    }
    const std::string_view word = Strip(line.substr(0, line.find('#')));
    if (word.empty()) continue;
    const auto start = static_cast<size_t>(word.data() - whole.data());
    const size_t blank = word.find_first_of(" \t\v\f\r");
    if (const auto invalid = FirstInvalidUtf8(word); invalid.has_value()) {
      faults->Add({source, line_number, start + *invalid}, "not UTF-8; save the list as UTF-8");
    } else if (blank != std::string_view::npos) {
      faults->Add({source, line_number, start + blank},
                  "more than one word; a list of function words has one a line");
    } else {
      words.emplace_back(word);
    }
  }
  return words;
}

}  // namespace

std::vector<std::string> ReadFunctionWords(FileSystem& files, const std::string& name,
                                           const FaultPlace& named_at, Faults* faults) {
  std::vector<std::string_view> known = {"none"};
  if (name == "none") return {};
  for (const BuiltInFunctionWords& list : BuiltInFunctionWordLists()) {
    if (list.language == name) {
      return Words(faults->AddSource(Concat(name, ".txt"), std::string(list.text), true), faults);
    }
    known.push_back(list.language);
  }
  const auto info = files.Stat(name);
  const bool exists = info.ok() && info->exists;
  if (!exists && !Contains(name, "/") && !Contains(name, ".")) {
    faults->Add(named_at, Concat("words.function_words: '", name,
                                 "' is neither a file nor one "
                                 "of the built-in lists ",
                                 Join(known, ", "), DidYouMean(name, known)));
    return {};
  }
  auto text = ReadWhole(files, name);
  if (!text.ok()) {
    faults->Add(named_at, Concat("words.function_words: ", text.status().message(),
                                 "; a relative path starts at the working directory"));
    return {};
  }
  return Words(faults->AddSource(name, *std::move(text), true), faults);
}

}  // namespace phraseweld
