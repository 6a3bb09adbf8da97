#ifndef PHRASEWELD_RUN_REPORT_H_
#define PHRASEWELD_RUN_REPORT_H_

#include <string>
#include <vector>

#include "absl/status/statusor.h"
#include "deliver/page.h"
#include "files/file_system.h"
#include "files/streams.h"
#include "read/corpus.h"
#include "run/finished_run.h"
#include "run/lanes.h"
#include "run/observer.h"

namespace phraseweld {

// So many phrases, the first of the inventory, get contexts on the page, and all near misses.
inline constexpr size_t kPhrasesWithContexts = 2000;
inline constexpr size_t kContextsShown = 3;

struct WrittenReport {
  OutputDigest digest;
  std::vector<std::string> notes;  // what the page lacks and why
};

// Makes the report page of the run whose files lie in `folder` and writes it to `output`. Its bytes
// depend on the run's files (less the manifest's timings and the job's limits) and its source
// alone. `inputs`: where the source is, in the order of the manifest; empty: where the manifest
// says, or else restored from the run's corpus, or else the page has no contexts and a note says
// so. Memory: the run's files, the words of the source, and about twice the page.
absl::StatusOr<WrittenReport> WriteReport(FileSystem& files, const std::string& folder,
                                          std::vector<InputFile> inputs, const std::string& output,
                                          ThreadLanes& lanes, const Observer& observer);

// What the page shows of a run, but for the contexts.
PageData ReportData(const FinishedRun& run);

}  // namespace phraseweld

#endif  // PHRASEWELD_RUN_REPORT_H_
