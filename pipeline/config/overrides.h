#ifndef PHRASEWELD_CONFIG_OVERRIDES_H_
#define PHRASEWELD_CONFIG_OVERRIDES_H_

#include <string>
#include <vector>

#include "config/faults.h"
#include "config/yaml_tree.h"

namespace phraseweld {

// The tree `root` with each setting "key=value" laid over it in turn, the last winning. A key is a
// path such as "limits.threads" or "passes.0.accept.pmi" (lists count from 0); the value is YAML.
// Keys that are not there are added, list entries are not, but for the first of an absent list.
// Whether keys and values make sense is left to the reader of the tree. Settings that cannot be
// laid over become faults under "--set key=value".
YamlNodePtr ApplyOverrides(YamlNodePtr root, const std::vector<std::string>& overrides,
                           Faults* faults);

}  // namespace phraseweld

#endif  // PHRASEWELD_CONFIG_OVERRIDES_H_
