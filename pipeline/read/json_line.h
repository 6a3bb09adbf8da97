#ifndef PHRASEWELD_READ_JSON_LINE_H_
#define PHRASEWELD_READ_JSON_LINE_H_

#include <memory>
#include <string>
#include <string_view>
#include <vector>

namespace phraseweld {

// A top-level member of a JSON object that was asked for.
struct JsonMember {
  enum class Kind {
    kAbsent,  // or an object, an array or null
    kString,  // raw: what is inside the quotation marks
    kScalar,  // a number, true or false
  };
  Kind kind = Kind::kAbsent;
  std::string_view raw;   // of the line
  std::string_view text;  // raw itself, or where `escaped` what it stands for, in `decoded`
  bool escaped = false;
};

// Checks lines and finds members in them. Not thread-safe.
class JsonLine {
 public:
  // The members of these names are found. Names may repeat.
  explicit JsonLine(const std::vector<std::string>& names);
  ~JsonLine();

  // Bytes that must be readable after a line, whatever they are.
  static size_t Padding();

  // Why `line` is not one JSON object (RFC 8259, in UTF-8, without lone surrogates, nested less
  // than 1024 deep), or nothing where it is. A number may have any size.
  std::string Fault(std::string_view line);

  // Finds the members of a line without fault; of equal names the first counts. Appends to
  // *decoded, whose capacity must have room for line.size() more bytes. The result holds until the
  // next call: one member a name, in the order of the names.
  const std::vector<JsonMember>& Find(std::string_view line, std::string* decoded);

 private:
  struct Wanted;
  void Take(std::string_view key, std::string_view value, std::string* decoded);

  class Checker;
  std::unique_ptr<Checker> checker_;
  std::vector<Wanted> wanted_;           // by name, each once
  std::vector<size_t> wanted_of_names_;  // by index of the name
  std::vector<JsonMember> members_;
  size_t unseen_ = 0;  // of wanted_, in this line
  std::string key_;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_READ_JSON_LINE_H_
