#include "cli/handle_verify.h"

#include "base/status.h"
#include "base/strings.h"
#include "base/units.h"
#include "cli/progress.h"
#include "run/verify.h"

namespace phraseweld {
namespace {

std::string Summary(const VerifyReport& report, const std::string& folder) {
  std::string text =
      Concat("files       ", FormatCount(report.files), ", ",
             RoundedBytes(static_cast<double>(report.file_bytes)), ", sizes and hashes as listed\n",
             "sources     ", FormatCount(report.inputs), ", ",
             RoundedBytes(static_cast<double>(report.text_bytes)), ", unchanged since the run\n");
  if (report.restored > 0) {
    AppendTo(&text, "restored    ", FormatCount(report.restored),
             " rewritten files, equal to their sources byte for byte\n");
  }
  AppendTo(&text, "recounted   ", FormatCount(report.documents), " documents, ",
           FormatCount(report.words), " words, ", FormatCount(report.passes), " passes\n",
           "audit       ", FormatCount(report.accepted), " accepted types and ",
           FormatCount(report.near_misses), " near misses, ", FormatCount(report.merges),
           " merges\n", "inventory   ", FormatCount(report.phrases), " phrases\n", "proved      ",
           folder, "\n");
  return text;
}

}  // namespace

absl::Status HandleVerify(const VerifyArguments& arguments, Console& console) {
  Progress progress(console);
  Stage current;
  Observer observer;
  observer.stage = [&](const Stage& stage) { current = stage; };
  observer.advance = [&](uint64_t done) {
    progress.Update({0, "", current.name, done, current.total, current.unit});
  };
  const absl::StatusOr<VerifyReport> report =
      VerifyRun(FileSystem::Posix(), arguments.run_folder, observer);
  progress.Clear();
  PW_RETURN_IF_ERROR(report.status());
  *console.out << Summary(*report, arguments.run_folder);
  return absl::OkStatus();
}

}  // namespace phraseweld
