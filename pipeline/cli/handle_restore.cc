#include "base/status.h"
#include "cli/handle_run.h"
#include "files/file_system.h"
#include "phraseweld/phraseweld.h"

namespace phraseweld {

absl::Status HandleRestore(const RestoreArguments& arguments, Console& console) {
  FileSystem& files = FileSystem::Posix();
  if (arguments.output.empty()) {
    PW_RETURN_IF_ERROR(Restore(arguments.file, [&](std::string_view bytes) {
      console.out->write(bytes.data(), static_cast<std::streamsize>(bytes.size()));
      return console.out->good() ? absl::OkStatus()
                                 : absl::UnavailableError("cannot write to standard output");
    }));
    console.out->flush();
    return absl::OkStatus();
  }
  // Under another name until it is whole and proved.
  const std::string partial = arguments.output + ".partial";
  absl::Status status = [&]() -> absl::Status {
    PW_ASSIGN_OR_RETURN(std::unique_ptr<WriteFile> out, files.CreateWrite(partial));
    PW_RETURN_IF_ERROR(
        Restore(arguments.file, [&](std::string_view bytes) { return out->Append(bytes); }));
    PW_RETURN_IF_ERROR(out->Sync());
    PW_RETURN_IF_ERROR(out->Close());
    return files.Rename(partial, arguments.output);
  }();
  if (!status.ok()) files.RemoveAll(partial).IgnoreError();
  return status;
}

}  // namespace phraseweld
