#ifndef PHRASEWELD_CONFIG_JOB_READER_H_
#define PHRASEWELD_CONFIG_JOB_READER_H_

#include "base/job.h"
#include "config/faults.h"
#include "config/yaml_tree.h"

namespace phraseweld {

// Places that later checks point at.
struct JobPlaces {
  FaultPlace function_words;
  FaultPlace rulings;
};

// The job that the tree `root` says, defaults included, by the table of keys. Everything wrong
// becomes a fault; what is wrong keeps its default. Lists in other files are not read, and defaults
// that depend on other keys (job, run_folder) are left empty.
Job ReadJob(const YamlNode& root, Faults* faults, JobPlaces* places);

}  // namespace phraseweld

#endif  // PHRASEWELD_CONFIG_JOB_READER_H_
