#include "read/json_line.h"

#include <simdjson.h>

#include <algorithm>
#include <cstring>

#include "read/json_escape.h"

namespace phraseweld {
namespace {

constexpr bool IsJsonBlank(char byte) {
  return byte == ' ' || byte == '\t' || byte == '\n' || byte == '\r';
}

constexpr bool IsDigit(char byte) { return byte >= '0' && byte <= '9'; }

// The functions below walk a valid JSON object, so that each finds what it looks for before the
// closing brace.

const char* SkipBlanks(const char* at) {
  while (IsJsonBlank(*at)) ++at;
  return at;
}

// The quotation mark that closes the string whose inside begins at `begin`.
const char* StringEnd(const char* begin, const char* end) {
  for (const char* at = begin;;) {
    at = static_cast<const char*>(std::memchr(at, '"', static_cast<size_t>(end - at)));
    // An odd number of backslashes before it escapes it.
    const char* backslashes = at;
    while (backslashes > begin && backslashes[-1] == '\\') --backslashes;
    if ((at - backslashes) % 2 == 0) return at;
    ++at;
  }
}

// The end of the value that begins at `at`.
const char* ValueEnd(const char* at, const char* end) {
  if (*at == '"') return StringEnd(at + 1, end) + 1;
  if (*at != '{' && *at != '[') {
    while (*at != ',' && *at != '}' && !IsJsonBlank(*at)) ++at;
    return at;
  }
  for (size_t depth = 0;; ++at) {
    if (*at == '"') at = StringEnd(at + 1, end);
    if (*at == '{' || *at == '[') ++depth;
    if ((*at == '}' || *at == ']') && --depth == 0) return at + 1;
  }
}

// The line with its numbers shortened so that no number is beyond the range of a double, while a
// number that is malformed stays so: the first two digits of each run of digits, in an exponent the
// first one.
std::string ShortenNumbers(std::string_view line) {
  std::string shortened;
  bool in_string = false, in_exponent = false;
  size_t digits = 0;
  for (size_t at = 0; at < line.size(); ++at) {
    const char byte = line[at];
    if (in_string) {
      shortened.push_back(byte);
      if (byte == '\\' && at + 1 < line.size()) shortened.push_back(line[++at]);
      if (byte == '"') in_string = false;
      continue;
    }
    if (IsDigit(byte)) {
      if (++digits <= (in_exponent ? 1u : 2u)) shortened.push_back(byte);
      continue;
    }
    digits = 0;
    if (byte == 'e' || byte == 'E') {
      in_exponent = true;
    } else if (byte != '+' && byte != '-') {
      in_exponent = false;
    }
    in_string = byte == '"';
    shortened.push_back(byte);
  }
  return shortened;
}

}  // namespace

class JsonLine::Checker {
 public:
  std::string Fault(std::string_view line) {
    simdjson::dom::element element;
    simdjson::error_code error = parser_.parse(line.data(), line.size(), false).get(element);
    if (error == simdjson::NUMBER_ERROR) {
      // simdjson refuses numbers that 64 bits do not hold; JSON has no such limit.
      const simdjson::padded_string shortened(ShortenNumbers(line));
      error = parser_.parse(shortened).get(element);
    }
    if (error != simdjson::SUCCESS) return simdjson::error_message(error);
    if (!element.is_object()) return "It is a JSON value of another kind.";
    if (HasLoneSurrogate(line)) return "It has a \\u escape that is half of a surrogate pair.";
    return "";
  }

 private:
  simdjson::dom::parser parser_;
};

struct JsonLine::Wanted {
  std::string name;
  bool seen = false;
  JsonMember member;
};

JsonLine::JsonLine(const std::vector<std::string>& names) : checker_(std::make_unique<Checker>()) {
  for (const std::string& name : names) {
    const auto known = std::find_if(wanted_.begin(), wanted_.end(),
                                    [&](const Wanted& wanted) { return wanted.name == name; });
    wanted_of_names_.push_back(static_cast<size_t>(known - wanted_.begin()));
    if (known == wanted_.end()) wanted_.push_back({.name = name, .seen = false, .member = {}});
  }
}

JsonLine::~JsonLine() = default;

size_t JsonLine::Padding() { return simdjson::SIMDJSON_PADDING; }

std::string JsonLine::Fault(std::string_view line) { return checker_->Fault(line); }

const std::vector<JsonMember>& JsonLine::Find(std::string_view line, std::string* decoded) {
  for (Wanted& wanted : wanted_) {
    wanted.seen = false;
    wanted.member = {};
  }
  unseen_ = wanted_.size();
  const char* const end = line.data() + line.size();
  const char* at = SkipBlanks(line.data()) + 1;  // behind the brace
  while (unseen_ > 0) {
    at = SkipBlanks(at);
    if (*at == ',') at = SkipBlanks(at + 1);
    if (*at == '}') break;
    const char* const key = at + 1;
    const char* const key_end = StringEnd(key, end);
    at = SkipBlanks(key_end + 1);  // the colon
    at = SkipBlanks(at + 1);       // the value
    const char* const value = at;
    at = ValueEnd(value, end);
    Take({key, static_cast<size_t>(key_end - key)}, {value, static_cast<size_t>(at - value)},
         decoded);
  }
  members_.clear();
  for (const size_t wanted : wanted_of_names_) members_.push_back(wanted_[wanted].member);
  return members_;
}

void JsonLine::Take(std::string_view key, std::string_view value, std::string* decoded) {
  if (key.find('\\') != std::string_view::npos) {
    key_.clear();
    AppendUnescaped(key, &key_);
    key = key_;
  }
  for (Wanted& wanted : wanted_) {
    if (wanted.name != key) continue;
    if (wanted.seen) return;
    wanted.seen = true;
    --unseen_;
    JsonMember& member = wanted.member;
    switch (value.front()) {
      case '"':
        member.kind = JsonMember::Kind::kString;
        member.raw = value.substr(1, value.size() - 2);
        member.escaped = member.raw.find('\\') != std::string_view::npos;
        member.text = member.raw;
        if (member.escaped) {
          const size_t begin = decoded->size();
          AppendUnescaped(member.raw, decoded);
          member.text = std::string_view(*decoded).substr(begin);
        }
        break;
      case '{':
      case '[':
      case 'n':
        break;
      default:
        member.kind = JsonMember::Kind::kScalar;
        member.raw = member.text = value;
    }
    return;
  }
}

}  // namespace phraseweld
