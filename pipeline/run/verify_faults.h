#ifndef PHRASEWELD_RUN_VERIFY_FAULTS_H_
#define PHRASEWELD_RUN_VERIFY_FAULTS_H_

#include <cstdint>
#include <memory>
#include <string>
#include <string_view>
#include <vector>

#include "absl/status/status.h"
#include "files/file_system.h"
#include "files/streams.h"

namespace phraseweld {

// Bytes as a fault shows them: in quotation marks, cut where they are long, with what is not
// printable as escapes.
std::string Shown(std::string_view bytes);

// What a verification found wrong, a line each.
class VerifyFaults {
 public:
  static constexpr size_t kMostShown = 20;

  void Add(std::string fault);
  // "PLACE: WHAT: found FOUND, expected EXPECTED".
  void Add(std::string_view place, std::string_view what, std::string_view found,
           std::string_view expected);
  void Append(const VerifyFaults& others);
  uint64_t count() const { return count_; }
  // DataLoss with the faults' lines; OK where there are none.
  absl::Status Status(std::string_view folder) const;

 private:
  std::vector<std::string> shown_;  // the first ones
  uint64_t count_ = 0;
};

// Compares two lines of JSON that should be equal to the byte, and adds a fault for each field in
// which they differ. `place` is "FILE:LINE".
void CompareJsonLines(std::string_view place, std::string_view found, std::string_view expected,
                      VerifyFaults* faults);

// Compares a file (decompressed, as its name says) with bytes that come piece by piece, and adds a
// fault for the first byte that differs. A file that cannot be read is a fault as well.
class ByteComparer {
 public:
  // `undone`: empty, or the path of the rewritten file that the pieces come from, which should be
  // those of its source `path`. Otherwise the pieces are what `path` should hold.
  ByteComparer(FileSystem& files, const std::string& path, const std::string& undone,
               VerifyFaults* faults);

  void Next(std::string_view bytes);
  void Finish();
  bool same() const { return !failed_; }

 private:
  bool Fill();
  void Fail(std::string_view of_file, std::string_view of_pieces);

  const std::string path_, undone_;
  VerifyFaults* faults_;
  std::unique_ptr<InputStream> stream_;
  std::vector<char> buffer_;
  size_t at_ = 0, end_ = 0;
  uint64_t byte_ = 0, line_ = 1;
  bool failed_ = false;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_VERIFY_FAULTS_H_
