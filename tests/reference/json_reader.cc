#include "reference/json_reader.h"

#include <cstdint>
#include <utility>

#include "reference/utf8.h"

namespace phraseweld::reference {
namespace {

bool IsDigit(char c) { return c >= '0' && c <= '9'; }

void AppendUtf8(uint32_t code_point, std::string& text) {
  const auto add = [&text](uint32_t byte) { text.push_back(static_cast<char>(byte)); };
  if (code_point < 0x80) {
    add(code_point);
  } else if (code_point < 0x800) {
    add(0xC0 | (code_point >> 6));
    add(0x80 | (code_point & 0x3F));
  } else if (code_point < 0x10000) {
    add(0xE0 | (code_point >> 12));
    add(0x80 | ((code_point >> 6) & 0x3F));
    add(0x80 | (code_point & 0x3F));
  } else {
    add(0xF0 | (code_point >> 18));
    add(0x80 | ((code_point >> 12) & 0x3F));
    add(0x80 | ((code_point >> 6) & 0x3F));
    add(0x80 | (code_point & 0x3F));
  }
}

// Recursive descent over the grammar of RFC 8259. Each Read... starts at the first byte of what it
// reads, stops behind its last byte, and returns false where the grammar is broken.
class Reader {
 public:
  explicit Reader(std::string_view line) : line_(line) {}

  bool ReadWholeLine(std::vector<JsonMember>& members) {
    SkipBlanks();
    if (!ReadObject(members)) return false;
    SkipBlanks();
    return at_ == line_.size();
  }

 private:
  // 0 behind the end; a zero byte of the line is no part of the grammar either.
  char Peek() const { return at_ < line_.size() ? line_[at_] : '\0'; }

  void SkipBlanks() {
    while (Peek() == ' ' || Peek() == '\t' || Peek() == '\n' || Peek() == '\r') ++at_;
  }

  bool Take(char wanted) {
    if (Peek() != wanted) return false;
    ++at_;
    return true;
  }

  bool TakeLiteral(std::string_view wanted) {
    if (line_.substr(at_, wanted.size()) != wanted) return false;
    at_ += wanted.size();
    return true;
  }

  bool ReadObject(std::vector<JsonMember>& members) {
    if (!Take('{')) return false;
    SkipBlanks();
    if (Take('}')) return true;
    while (true) {
      SkipBlanks();
      JsonText key;
      if (!ReadString(key)) return false;
      SkipBlanks();
      if (!Take(':')) return false;
      SkipBlanks();
      JsonMember member;
      member.key = key.text;
      const size_t begin = at_;
      if (!ReadValue(member)) return false;
      member.raw = line_.substr(begin, at_ - begin);
      members.push_back(std::move(member));
      SkipBlanks();
      if (Take('}')) return true;
      if (!Take(',')) return false;
    }
  }

  bool ReadArray() {
    if (!Take('[')) return false;
    SkipBlanks();
    if (Take(']')) return true;
    while (true) {
      SkipBlanks();
      JsonMember element;
      if (!ReadValue(element)) return false;
      SkipBlanks();
      if (Take(']')) return true;
      if (!Take(',')) return false;
    }
  }

  bool ReadValue(JsonMember& value) {
    if (Peek() == '"') {
      value.kind = JsonKind::kString;
      return ReadString(value.string);
    }
    if (Peek() == '{') {
      value.kind = JsonKind::kObject;
      std::vector<JsonMember> members;
      return ReadObject(members);
    }
    if (Peek() == '[') {
      value.kind = JsonKind::kArray;
      return ReadArray();
    }
    if (Peek() == 't' || Peek() == 'f') {
      value.kind = JsonKind::kTrueOrFalse;
      return TakeLiteral("true") || TakeLiteral("false");
    }
    if (Peek() == 'n') {
      value.kind = JsonKind::kNull;
      return TakeLiteral("null");
    }
    value.kind = JsonKind::kNumber;
    return ReadNumber();
  }

  bool ReadDigits() {
    if (!IsDigit(Peek())) return false;
    while (IsDigit(Peek())) ++at_;
    return true;
  }

  bool ReadNumber() {
    Take('-');
    if (!Take('0') && !ReadDigits()) return false;
    if (Take('.') && !ReadDigits()) return false;
    if (Take('e') || Take('E')) {
      if (!Take('+')) Take('-');
      return ReadDigits();
    }
    return true;
  }

  bool ReadFourHexDigits(uint32_t& value) {
    value = 0;
    for (int i = 0; i < 4; ++i) {
      const char c = Peek();
      uint32_t digit = 0;
      if (IsDigit(c)) {
        digit = static_cast<uint32_t>(c - '0');
      } else if (c >= 'a' && c <= 'f') {
        digit = static_cast<uint32_t>(c - 'a') + 10;
      } else if (c >= 'A' && c <= 'F') {
        digit = static_cast<uint32_t>(c - 'A') + 10;
      } else {
        return false;
      }
      value = value * 16 + digit;
      ++at_;
    }
    return true;
  }

  // Behind the backslash.
  bool ReadEscape(uint32_t& code_point) {
    const char c = Peek();
    ++at_;
    switch (c) {
      case '"':
      case '\\':
      case '/':
        code_point = static_cast<uint32_t>(c);
        return true;
      case 'b':
        code_point = 0x08;
        return true;
      case 'f':
        code_point = 0x0C;
        return true;
      case 'n':
        code_point = 0x0A;
        return true;
      case 'r':
        code_point = 0x0D;
        return true;
      case 't':
        code_point = 0x09;
        return true;
      case 'u':
        break;
      default:
        return false;
    }
    if (!ReadFourHexDigits(code_point)) return false;
    if (code_point >= 0xDC00 && code_point <= 0xDFFF) return false;
    if (code_point >= 0xD800 && code_point <= 0xDBFF) {
      uint32_t low = 0;
      if (!TakeLiteral("\\u") || !ReadFourHexDigits(low)) return false;
      if (low < 0xDC00 || low > 0xDFFF) return false;
      code_point = 0x10000 + ((code_point - 0xD800) << 10) + (low - 0xDC00);
    }
    return true;
  }

  bool ReadString(JsonText& string) {
    if (!Take('"')) return false;
    while (at_ < line_.size()) {
      const size_t begin = at_;
      const char c = line_[at_];
      if (c == '"') {
        string.place.push_back(at_);
        ++at_;
        return true;
      }
      if (static_cast<unsigned char>(c) < 0x20) return false;
      if (c == '\\') {
        ++at_;
        uint32_t code_point = 0;
        if (!ReadEscape(code_point)) return false;
        AppendUtf8(code_point, string.text);
        while (string.place.size() < string.text.size()) string.place.push_back(begin);
      } else {
        string.text.push_back(c);
        string.place.push_back(at_);
        ++at_;
      }
    }
    return false;
  }

  std::string_view line_;
  size_t at_ = 0;
};

}  // namespace

std::optional<std::vector<JsonMember>> ReadJsonObject(std::string_view line) {
  if (!IsValidUtf8(line)) return std::nullopt;
  std::vector<JsonMember> members;
  if (!Reader(line).ReadWholeLine(members)) return std::nullopt;
  return members;
}

}  // namespace phraseweld::reference
