#include "run/known_phrases.h"

#include <string_view>
#include <utility>

#include "absl/container/flat_hash_set.h"
#include "base/status.h"
#include "base/strings.h"
#include "run/job_options.h"
#include "words/splitter.h"

namespace phraseweld {

absl::StatusOr<KnownPhrases> ReadKnownPhrases(FileSystem& files, const std::string& path,
                                              const Job& job) {
  PW_ASSIGN_OR_RETURN(const FileInfo info, files.Stat(path));
  if (!info.exists || info.is_directory) {
    return absl::InvalidArgumentError(Concat(path, info.exists
                                                       ? ": this is a folder, not a list of phrases"
                                                       : ": there is no such list of phrases"));
  }
  PW_ASSIGN_OR_RETURN(const std::string text, ReadWhole(files, path));
  const WordOptions options = WordOptionsOf(job);
  WordSplitter splitter(options);
  WordFolder folder(options);
  std::vector<WordSpan> spans;
  absl::flat_hash_set<std::vector<std::string>> seen;
  KnownPhrases known;
  for (const std::string_view line : Split(text, '\n')) {
    const std::string_view phrase = Strip(line);
    if (phrase.empty() || phrase.front() == '#') continue;
    splitter.Split(phrase, &spans);
    if (spans.size() < 2) {
      ++known.short_lines;
      continue;
    }
    std::vector<std::string> forms;
    for (const WordSpan& span : spans) {
      forms.push_back(folder.Form(phrase.substr(span.begin, span.end - span.begin)));
    }
    if (seen.insert(forms).second) {
      known.entries.push_back(std::move(forms));
    } else {
      ++known.double_lines;
    }
  }
  if (known.entries.empty()) {
    return absl::InvalidArgumentError(
        Concat(path,
               ": there is no phrase of two words or more in this list; it should have one "
               "phrase a line"));
  }
  return known;
}

}  // namespace phraseweld
