#ifndef PHRASEWELD_RUN_VERIFY_WALK_H_
#define PHRASEWELD_RUN_VERIFY_WALK_H_

#include <cstdint>
#include <memory>
#include <string>
#include <string_view>
#include <vector>

#include "absl/status/status.h"
#include "audit/recounter.h"
#include "base/job.h"
#include "read/corpus.h"
#include "run/verify_faults.h"
#include "run/verify_folder.h"
#include "words/splitter.h"

namespace phraseweld {

// Cuts passages into runs of words by the exact path and gives them to a recounter; what comes
// back is compared with the texts that the run delivered: corpus/ and spans.jsonl.
class VerifyWalk {
 public:
  // `inputs`: where to read, and under which names the run has them.
  VerifyWalk(const FolderCheck& check, const Job& job, std::vector<InputFile> inputs,
             VerifyFaults* faults, Recounter* recounter);
  ~VerifyWalk();

  // The whole corpus. Errors: Cancelled.
  absl::Status Walk();
  uint64_t bad_lines() const { return bad_lines_; }
  // Of the inputs as read, after Walk().
  const std::vector<InputDigest>& digests() const { return digests_; }

 private:
  class RewrittenSource;

  void Take(const Block& block);
  void TakePiece(const Block& block, const TextPiece& piece);
  void BeginFile(uint32_t file);
  void EndFile();
  void BeginDocument(std::string_view id);
  void EndDocument();
  void BeginPassage(uint32_t field);
  void EndPassage();
  void EndRun();
  void Deliver(const std::vector<RecountToken>& tokens);

  const FolderCheck& check_;
  const Job& job_;
  const std::vector<InputFile> inputs_;
  VerifyFaults* faults_;
  Recounter* recounter_;
  WordSplitter splitter_;
  WordFolder folder_;
  uint64_t bad_lines_ = 0;
  std::vector<InputDigest> digests_;

  std::unique_ptr<ByteComparer> words_, spans_;  // where the run has them
  std::unique_ptr<RewrittenSource> source_;
  std::string document_, text_;
  bool document_has_words_ = false, passage_has_spans_ = false;

  // The run at hand, and where each of its words stands in the input.
  RecountRun run_;
  std::vector<std::pair<uint64_t, uint64_t>> places_;
  std::string gap_;              // after its last word
  uint64_t passage_offset_ = 0;  // of the end of `gap_` in the passage's text
  std::vector<WordSpan> spans_of_piece_;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_VERIFY_WALK_H_
