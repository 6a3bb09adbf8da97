#include "config/overrides.h"

#include <algorithm>
#include <string_view>

#include "absl/strings/numbers.h"
#include "absl/types/span.h"
#include "base/strings.h"

namespace phraseweld {
namespace {

using Parts = absl::Span<const std::string_view>;

std::shared_ptr<YamlNode> NewNode(YamlNode::Kind kind, const FaultPlace& place) {
  auto node = std::make_shared<YamlNode>();
  node->kind = kind;
  node->place = place;
  return node;
}

// A copy of `node` (null: nothing there) in which the value at `path` is `value`. Shares all that
// is not on the way. Adds a fault and returns nullptr where the way ends.
YamlNodePtr Replaced(const YamlNodePtr& node, Parts path, std::string_view way,
                     const YamlNodePtr& value, Faults* faults) {
  if (path.empty()) return value;
  const std::string_view part = path.front();
  const std::string next_way = way.empty() ? std::string(part) : Concat(way, ".", part);
  const bool absent = node == nullptr || node->is_null();
  size_t index = 0;
  const bool is_index = absl::SimpleAtoi(std::string(part), &index);

  if (absent ? is_index : node->is_list()) {
    auto list =
        absent ? NewNode(YamlNode::Kind::kList, value->place) : std::make_shared<YamlNode>(*node);
    if (list->items.empty() && is_index && index == 0) list->items.push_back(nullptr);
    if (!is_index || index >= list->items.size()) {
      const size_t size = list->items.size();
      faults->Add(value->place,
                  Concat("'", way, "' is a list with ", size, size == 1 ? " entry" : " entries",
                         ", counted from 0, and has no '", part, "'"));
      return nullptr;
    }
    list->items[index] = Replaced(list->items[index], path.subspan(1), next_way, value, faults);
    return list->items[index] == nullptr ? nullptr : list;
  }
  if (!absent && !node->is_map()) {
    faults->Add(value->place, Concat("'", way, "' is ", node->Described(),
                                     " and has no keys, so it has no '", part, "'"));
    return nullptr;
  }
  auto map =
      absent ? NewNode(YamlNode::Kind::kMap, value->place) : std::make_shared<YamlNode>(*node);
  const auto entry = std::find_if(map->entries.begin(), map->entries.end(), [part](const auto& e) {
    return e.first->is_scalar() && e.first->text == part;
  });
  YamlNodePtr inner = Replaced(entry == map->entries.end() ? nullptr : entry->second,
                               path.subspan(1), next_way, value, faults);
  if (inner == nullptr) return nullptr;
  if (entry != map->entries.end()) {
    entry->second = std::move(inner);
  } else {
    auto name = NewNode(YamlNode::Kind::kScalar, value->place);
    name->text = std::string(part);
    map->entries.emplace_back(std::move(name), std::move(inner));
  }
  return map;
}

}  // namespace

YamlNodePtr ApplyOverrides(YamlNodePtr root, const std::vector<std::string>& overrides,
                           Faults* faults) {
  for (const std::string& setting : overrides) {
    const size_t equals = setting.find('=');
    const std::string path = setting.substr(0, equals);
    const std::string label = Concat("--set ", setting);
    const std::vector<std::string_view> parts = Split(path, '.');
    const bool whole = std::none_of(parts.begin(), parts.end(),
                                    [](std::string_view part) { return part.empty(); });
    if (equals == std::string::npos || !whole) {
      const Source* source = faults->AddSource(label, setting, false);
      faults->Add({source, 0, 0}, "write it as key=value, such as --set limits.threads=4");
      continue;
    }
    const Source* source = faults->AddSource(label, setting.substr(equals + 1), false);
    const YamlNodePtr value = ParseYaml(source, faults);
    if (value == nullptr) continue;
    if (YamlNodePtr changed = Replaced(root, parts, "", value, faults); changed != nullptr) {
      root = std::move(changed);
    }
  }
  return root;
}

}  // namespace phraseweld
