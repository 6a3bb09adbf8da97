#ifndef PHRASEWELD_CONFIG_RULINGS_H_
#define PHRASEWELD_CONFIG_RULINGS_H_

#include <string>
#include <vector>

#include "base/job.h"
#include "config/faults.h"
#include "files/file_system.h"

namespace phraseweld {

// The entries of the rulings file at `path`: a YAML list of maps {never: PHRASE, reason: WHY} or
// {always: PHRASE, reason: WHY}, the reason optional. A file without any entry has none. Everything
// wrong becomes a fault; a file that cannot be read, one at `named_at`. The same text ruled both
// ways is refused; texts are compared here by ASCII case folding and with runs of white space as
// one space, and by the job's own word forms when it runs.
std::vector<Ruling> ReadRulings(FileSystem& files, const std::string& path, const FaultPlace& named_at,
                                Faults* faults);

}  // namespace phraseweld

#endif  // PHRASEWELD_CONFIG_RULINGS_H_
