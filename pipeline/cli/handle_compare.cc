#include "cli/handle_compare.h"

#include <cstddef>

#include "base/status.h"
#include "run/compare.h"

namespace phraseweld {
namespace {

constexpr size_t kRowsShown = 20;  // of each list, about a screen

}  // namespace

absl::Status HandleCompare(const CompareArguments& arguments, Console& console) {
  FileSystem& files = FileSystem::Posix();
  PW_ASSIGN_OR_RETURN(const RunComparison comparison,
                      CompareRuns(files, arguments.left_run, arguments.right_run));
  if (!arguments.html.empty()) {
    PW_RETURN_IF_ERROR(WriteComparisonPage(files, comparison, arguments.html));
  }
  *console.out << (arguments.json ? ComparisonJson(comparison)
                                  : ComparisonText(comparison, kRowsShown));
  return absl::OkStatus();
}

}  // namespace phraseweld
