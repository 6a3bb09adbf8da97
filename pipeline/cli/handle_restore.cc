#include "base/status.h"
#include "cli/handle_run.h"
#include "cli/watch.h"
#include "files/file_system.h"
#include "phraseweld/phraseweld.h"

namespace phraseweld {

absl::Status HandleRestore(const RestoreArguments& arguments, Console& console) {
  FileSystem& files = FileSystem::Posix();
  Watch watch(console, true);
  const auto stopped = [&] {
    return watch.observer().stop->load() ? absl::CancelledError("interrupted") : absl::OkStatus();
  };
  if (arguments.output.empty()) {
    const absl::Status status = Restore(arguments.file, [&](std::string_view bytes) {
      console.out->write(bytes.data(), static_cast<std::streamsize>(bytes.size()));
      return console.out->good() ? stopped()
                                 : absl::UnavailableError("cannot write to standard output");
    });
    console.out->flush();
    return watch.End(status);
  }
  // Under another name until it is whole and proved.
  const std::string partial = arguments.output + ".partial";
  absl::Status status = [&]() -> absl::Status {
    PW_ASSIGN_OR_RETURN(std::unique_ptr<WriteFile> out, files.CreateWrite(partial));
    PW_RETURN_IF_ERROR(Restore(arguments.file, [&](std::string_view bytes) -> absl::Status {
      PW_RETURN_IF_ERROR(stopped());
      return out->Append(bytes);
    }));
    PW_RETURN_IF_ERROR(out->Sync());
    PW_RETURN_IF_ERROR(out->Close());
    return files.Rename(partial, arguments.output);
  }();
  if (!status.ok()) files.RemoveAll(partial).IgnoreError();
  return watch.End(status, "interrupted; nothing was restored");
}

}  // namespace phraseweld
