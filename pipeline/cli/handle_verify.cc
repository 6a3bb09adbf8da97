#include "cli/handle_verify.h"

#include <string>
#include <string_view>

#include "base/status.h"
#include "base/strings.h"
#include "base/units.h"
#include "cli/watch.h"
#include "run/verify.h"

namespace phraseweld {
namespace {

// "1 pass", "2,000 passes".
std::string Counted(uint64_t count, std::string_view one, std::string_view more) {
  return Concat(FormatCount(count), " ", count == 1 ? one : more);
}

std::string Summary(const VerifyReport& report, const std::string& folder) {
  const auto size = [](uint64_t bytes) { return RoundedBytes(static_cast<double>(bytes)); };
  std::string text =
      Concat("files       ", FormatCount(report.files), ", ", size(report.file_bytes),
             ", sizes and hashes as listed\nsources     ", FormatCount(report.inputs), ", ",
             size(report.text_bytes), ", unchanged since the run\n");
  if (report.restored > 0) {
    AppendTo(&text, "restored    ", Counted(report.restored, "rewritten file", "rewritten files"),
             ", equal to the source byte for byte\n");
  }
  AppendTo(&text, "recounted   ", Counted(report.documents, "document", "documents"), ", ",
           Counted(report.words, "word", "words"), ", ", Counted(report.passes, "pass", "passes"),
           "\naudit       ", Counted(report.accepted, "accepted type", "accepted types"), ", ",
           Counted(report.near_misses, "near miss", "near misses"), ", ",
           Counted(report.merges, "merge", "merges"), "\ninventory   ",
           Counted(report.phrases, "phrase", "phrases"), "\nproved      ", folder, "\n");
  return text;
}

}  // namespace

absl::Status HandleVerify(const VerifyArguments& arguments, Console& console) {
  Watch watch(console);
  const absl::StatusOr<VerifyReport> report =
      VerifyRun(FileSystem::Posix(), arguments.run_folder, watch.observer());
  PW_RETURN_IF_ERROR(watch.End(report.status()));
  *console.out << Summary(*report, arguments.run_folder);
  return absl::OkStatus();
}

}  // namespace phraseweld
