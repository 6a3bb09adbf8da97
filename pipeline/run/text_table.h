#ifndef PHRASEWELD_RUN_TEXT_TABLE_H_
#define PHRASEWELD_RUN_TEXT_TABLE_H_

#include <cstddef>
#include <string>
#include <string_view>
#include <vector>

namespace phraseweld {

// Reports for a terminal fit this many columns.
inline constexpr size_t kTextWidth = 80;

// A table in columns: the first column's texts start at the left, are cut to what the others leave
// of kTextWidth and get "…" where they were cut; the other columns are numbers and stand at the
// right. Control characters are shown as U+FFFD.
class TextTable {
 public:
  explicit TextTable(std::vector<std::string> titles) { rows_.push_back(std::move(titles)); }
  void Add(std::vector<std::string> row) { rows_.push_back(std::move(row)); }
  bool empty() const { return rows_.size() == 1; }
  // Each line after two blanks.
  std::string Text() const;

 private:
  std::vector<std::vector<std::string>> rows_;
};

// `text` without control characters, cut to `width` columns.
std::string Shown(std::string_view text, size_t width);

// Lines of at most kTextWidth columns, broken at blanks, each after `indent` blanks and ended. A
// word that is longer stands out.
std::string WrappedText(std::string_view text, size_t indent);

// Appends the title of a part of a report, after an empty line.
void AppendTitle(std::string* text, std::string_view title);

// "12.3 %", of 0 "–".
std::string Percent(double part, double whole);

// With three decimals.
std::string Share(double value);

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_TEXT_TABLE_H_
