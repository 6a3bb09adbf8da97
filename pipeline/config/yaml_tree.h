#ifndef PHRASEWELD_CONFIG_YAML_TREE_H_
#define PHRASEWELD_CONFIG_YAML_TREE_H_

#include <memory>
#include <optional>
#include <string>
#include <string_view>
#include <utility>
#include <vector>

#include "config/faults.h"

namespace phraseweld {

struct YamlNode;
using YamlNodePtr = std::shared_ptr<const YamlNode>;

// A YAML value with its place. Unlike the parser's own nodes, a map keeps every entry in the order
// written, so that a key which stands twice is seen, and nodes are never changed, so that an
// alias can share what it names.
struct YamlNode {
  enum class Kind { kNull, kScalar, kList, kMap };
  Kind kind = Kind::kNull;
  FaultPlace place;
  std::string text;                                          // kScalar
  std::vector<YamlNodePtr> items;                            // kList
  std::vector<std::pair<YamlNodePtr, YamlNodePtr>> entries;  // kMap: key, value

  bool is_null() const { return kind == Kind::kNull; }
  bool is_scalar() const { return kind == Kind::kScalar; }
  bool is_list() const { return kind == Kind::kList; }
  bool is_map() const { return kind == Kind::kMap; }

  // What it is, for "not ...": "a list", "a map", "'text'", "nothing".
  std::string Described() const;
};

// The one document in `source`; a null node when there is none. Adds a fault and returns nullptr
// when the text is not YAML, is not UTF-8, holds control characters, more than one document, a
// tag, or a text whose closing quote is missing.
YamlNodePtr ParseYaml(const Source* source, Faults* faults);

}  // namespace phraseweld

#endif  // PHRASEWELD_CONFIG_YAML_TREE_H_
