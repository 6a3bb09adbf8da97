#ifndef PHRASEWELD_CONFIG_FAULTS_H_
#define PHRASEWELD_CONFIG_FAULTS_H_

#include <cstddef>
#include <deque>
#include <string>
#include <string_view>
#include <vector>

#include "absl/status/status.h"

namespace phraseweld {

// A text that faults point into: a file, or one setting of the command line.
struct Source {
  std::string label;  // the file's path, or "--set key=value"
  std::string text;
  bool has_lines;  // false: the label shows the whole text, so no line is quoted
  size_t order;    // faults are reported in the order in which their sources were added
};

// A place in a source. Line 0 stands for the source as a whole.
struct FaultPlace {
  const Source* source = nullptr;
  size_t line = 0;         // from 1
  size_t byte_column = 0;  // from 0
};

// Collects everything that is wrong before anything is reported. One thread at a time.
class Faults {
 public:
  // The source lives as long as this object.
  const Source* AddSource(std::string label, std::string text, bool has_lines);

  void Add(const FaultPlace& place, std::string message);

  bool empty() const { return faults_.empty(); }

  // OK when there are none; else InvalidArgument whose message holds, for each fault in the order
  // of its place, "file:line:column: message" and, where the source has lines, the line and a
  // caret under the column. Columns count code points from 1.
  absl::Status Status() const;

 private:
  struct Fault {
    FaultPlace place;
    std::string message;
  };
  std::deque<Source> sources_;
  std::vector<Fault> faults_;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_CONFIG_FAULTS_H_
