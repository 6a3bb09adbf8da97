#ifndef PHRASEWELD_RUN_KNOWN_PHRASES_H_
#define PHRASEWELD_RUN_KNOWN_PHRASES_H_

#include <cstdint>
#include <string>
#include <vector>

#include "absl/status/statusor.h"
#include "base/job.h"
#include "files/file_system.h"

namespace phraseweld {

// A list of known phrases, as the job's words.
struct KnownPhrases {
  std::vector<std::vector<std::string>> entries;  // forms; two or more, no two alike, as listed
  uint64_t short_lines = 0;                       // left out: they come to fewer than two words
  uint64_t double_lines = 0;  // left out: they come to the words of an earlier line
};

// Reads a file with one phrase a line; blank lines and those that begin with "#" mean nothing. A
// phrase goes through the job's rules for words as any text does; its gaps mean nothing.
// InvalidArgument where there is no such file or no entry in it.
absl::StatusOr<KnownPhrases> ReadKnownPhrases(FileSystem& files, const std::string& path,
                                              const Job& job);

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_KNOWN_PHRASES_H_
