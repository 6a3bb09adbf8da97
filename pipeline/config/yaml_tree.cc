#include "config/yaml_tree.h"

#include <yaml-cpp/eventhandler.h>
#include <yaml-cpp/exceptions.h>
#include <yaml-cpp/mark.h>
#include <yaml-cpp/parser.h>

#include <algorithm>
#include <cstdint>
#include <map>
#include <sstream>

#include "absl/strings/str_format.h"
#include "base/strings.h"
#include "base/utf8.h"

namespace phraseweld {
namespace {

constexpr size_t kShownText = 60;  // columns of a value that a message repeats

// yaml-cpp takes lines to end in LF and counts lines and columns, in bytes, from 0. It leaves out
// a byte-order mark.
FaultPlace PlaceOf(const Source* source, const YAML::Mark& mark) {
  if (mark.is_null()) return {source, 1, 0};
  size_t column = static_cast<size_t>(mark.column);
  if (mark.line == 0 && source->text.starts_with(kByteOrderMark)) {
    column += kByteOrderMark.size();
  }
  return {source, static_cast<size_t>(mark.line) + 1, column};
}

FaultPlace PlaceOfByte(const Source* source, size_t offset) {
  const std::string_view before = std::string_view(source->text).substr(0, offset);
  const size_t line_end = before.rfind('\n');
  const size_t line_start = line_end == std::string_view::npos ? 0 : line_end + 1;
  const size_t line = 1 + static_cast<size_t>(std::count(before.begin(), before.end(), '\n'));
  return {source, line, offset - line_start};
}

// yaml-cpp carries invalid UTF-8 along and takes U+0004 for the end of the text, so what YAML 1.2
// forbids (its rule c-printable) is looked for first.
bool CheckCharacters(const Source* source, Faults* faults) {
  const std::string_view text = source->text;
  for (size_t at = 0; at < text.size();) {
    const size_t start = at;
    const auto point = NextCodePoint(text, &at);
    if (!point.has_value()) {
      faults->Add(PlaceOfByte(source, start),
                  absl::StrFormat("byte %02X is not UTF-8; save the text as UTF-8",
                                  static_cast<unsigned char>(text[start])));
      return false;
    }
    const bool allowed = !IsControl(*point) || *point == U'\t' || *point == U'\n' ||
                         *point == U'\r' || *point == 0x85;
    if (!allowed) {
      faults->Add(PlaceOfByte(source, start),
                  absl::StrFormat("YAML does not allow the control character U+%04X; remove it",
                                  static_cast<uint32_t>(*point)));
      return false;
    }
  }
  return true;
}

// Builds the tree of one document from the parser's events.
class TreeBuilder : public YAML::EventHandler {
 public:
  TreeBuilder(const Source* source, std::string_view text, Faults* faults)
      : source_(source), text_(text), faults_(faults) {}

  const YamlNodePtr& root() const { return root_; }
  bool failed() const { return failed_; }
  const std::optional<FaultPlace>& start() const { return start_; }

  void OnDocumentStart(const YAML::Mark& mark) override { start_ = PlaceOf(source_, mark); }
  void OnDocumentEnd() override {}

  void OnNull(const YAML::Mark& mark, YAML::anchor_t anchor) override {
    Finish(NewNode(YamlNode::Kind::kNull, mark), anchor);
  }

  void OnAlias(const YAML::Mark& mark, YAML::anchor_t anchor) override {
    const auto target = anchors_.find(anchor);
    if (target != anchors_.end()) {
      Attach(target->second);
      return;
    }
    Fail(PlaceOf(source_, mark), "this alias stands inside what it names");
    Attach(NewNode(YamlNode::Kind::kNull, mark));
  }

  void OnScalar(const YAML::Mark& mark, const std::string& tag, YAML::anchor_t anchor,
                const std::string& value) override {
    CheckTag(mark, tag);
    CheckClosingQuote(mark);
    auto node = NewNode(YamlNode::Kind::kScalar, mark);
    node->text = value;
    Finish(std::move(node), anchor);
  }

  void OnSequenceStart(const YAML::Mark& mark, const std::string& tag, YAML::anchor_t anchor,
                       YAML::EmitterStyle::value) override {
    CheckTag(mark, tag);
    open_.push_back({NewNode(YamlNode::Kind::kList, mark), anchor, nullptr});
  }
  void OnSequenceEnd() override { Close(); }

  void OnMapStart(const YAML::Mark& mark, const std::string& tag, YAML::anchor_t anchor,
                  YAML::EmitterStyle::value) override {
    CheckTag(mark, tag);
    open_.push_back({NewNode(YamlNode::Kind::kMap, mark), anchor, nullptr});
  }
  void OnMapEnd() override { Close(); }

 private:
  struct Open {
    std::shared_ptr<YamlNode> node;
    YAML::anchor_t anchor;
    YamlNodePtr key;  // of a map, until its value comes
  };

  std::shared_ptr<YamlNode> NewNode(YamlNode::Kind kind, const YAML::Mark& mark) const {
    auto node = std::make_shared<YamlNode>();
    node->kind = kind;
    node->place = PlaceOf(source_, mark);
    return node;
  }

  void Fail(const FaultPlace& place, std::string message) {
    faults_->Add(place, std::move(message));
    failed_ = true;
  }

  void CheckTag(const YAML::Mark& mark, const std::string& tag) {
    // "?" and "!" are the parser's own, for plain and for quoted.
    if (!tag.empty() && tag != "?" && tag != "!") {
      Fail(PlaceOf(source_, mark), "YAML tags mean nothing here; remove it");
    }
  }

  // yaml-cpp takes the end of the text for a closing quote.
  void CheckClosingQuote(const YAML::Mark& mark) {
    auto start = static_cast<size_t>(mark.pos);
    if (start < text_.size() && text_[start] == '&') {  // an anchor's name stands first
      start = text_.find_first_not_of(" \t", text_.find_first_of(" \t", start));
    }
    if (start >= text_.size() || (text_[start] != '"' && text_[start] != '\'')) return;
    const char quote = text_[start];
    for (size_t at = start + 1; at < text_.size(); ++at) {
      const bool escape = quote == '"' ? text_[at] == '\\' : text_.substr(at, 2) == "''";
      if (escape) {
        ++at;
      } else if (text_[at] == quote) {
        return;
      }
    }
    Fail(PlaceOf(source_, mark), "the closing quote of this text is missing");
  }

  void Finish(std::shared_ptr<YamlNode> node, YAML::anchor_t anchor) {
    if (anchor != 0) anchors_[anchor] = node;
    Attach(std::move(node));
  }

  void Close() {
    Open closed = std::move(open_.back());
    open_.pop_back();
    Finish(std::move(closed.node), closed.anchor);
  }

  void Attach(YamlNodePtr node) {
    if (open_.empty()) {
      root_ = std::move(node);
      return;
    }
    Open& parent = open_.back();
    if (parent.node->is_list()) {
      parent.node->items.push_back(std::move(node));
    } else if (parent.key == nullptr) {
      parent.key = std::move(node);
    } else {
      if (node->is_null()) {  // the parser places a missing value anywhere up to the next token
        auto missing = std::make_shared<YamlNode>();
        missing->place = parent.key->place;
        node = std::move(missing);
      }
      parent.node->entries.emplace_back(std::move(parent.key), std::move(node));
      parent.key = nullptr;
    }
  }

  const Source* source_;
  std::string_view text_;
  Faults* faults_;
  YamlNodePtr root_;
  std::optional<FaultPlace> start_;
  bool failed_ = false;
  std::vector<Open> open_;
  std::map<YAML::anchor_t, YamlNodePtr> anchors_;
};

// What people most often did when the parser says `message`.
std::string_view Hint(const FaultPlace& place, std::string_view message) {
  std::string_view line = place.source->text;
  for (size_t number = 1; number < place.line; ++number) line.remove_prefix(line.find('\n') + 1);
  line = line.substr(0, line.find('\n'));
  const std::string_view indent = line.substr(0, line.find_first_not_of(" \t"));
  if (Contains(indent, "\t")) return " (indent with spaces; YAML allows no tabs there)";
  const std::string_view at = line.substr(std::min(place.byte_column, line.size()));
  if (at.starts_with("*") || Contains(message, "alias")) {
    return " (put quotes around a text that starts with *)";
  }
  if (message == "unknown token") return " (put quotes around a text that starts like this)";
  if (message == "illegal map value") {
    return " (is the indentation right, and is there one 'key: value' on the line?)";
  }
  return "";
}

}  // namespace

std::string YamlNode::Described() const {
  switch (kind) {
    case Kind::kNull:
      return "nothing";
    case Kind::kList:
      return "a list";
    case Kind::kMap:
      return "a map";
    case Kind::kScalar:
      break;
  }
  const std::string_view front = FitWidth(text, kShownText);
  return Concat("'", front, front.size() < text.size() ? "..." : "", "'");
}

YamlNodePtr ParseYaml(const Source* source, Faults* faults) {
  if (!CheckCharacters(source, faults)) return nullptr;
  std::string_view text = source->text;
  if (text.starts_with(kByteOrderMark)) text.remove_prefix(kByteOrderMark.size());
  TreeBuilder document(source, text, faults);
  TreeBuilder second(source, text, faults);
  try {
    std::istringstream stream{std::string(text)};
    YAML::Parser parser(stream);
    parser.HandleNextDocument(document);
    if (document.failed()) return nullptr;
    parser.HandleNextDocument(second);
  } catch (const YAML::Exception& error) {
    if (document.failed()) return nullptr;  // a missing quote is the cause of what follows
    const FaultPlace place = PlaceOf(source, error.mark);
    faults->Add(place, Concat("not YAML: ", error.msg, Hint(place, error.msg)));
    return nullptr;
  }
  if (second.start().has_value()) {
    faults->Add(*second.start(),
                "a second YAML document starts here, where one is allowed; if that is not meant, "
                "look at the indentation");
    return nullptr;
  }
  if (document.root() == nullptr) {
    auto nothing = std::make_shared<YamlNode>();
    nothing->place = {source, 1, 0};
    return nothing;
  }
  return document.root();
}

}  // namespace phraseweld
