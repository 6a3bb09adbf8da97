#ifndef PHRASEWELD_READ_JSON_FIELDS_H_
#define PHRASEWELD_READ_JSON_FIELDS_H_

#include <simdjson.h>

#include <cstdint>
#include <string>
#include <string_view>

#include "absl/strings/string_view.h"
#include "base/strings.h"

namespace phraseweld {

// Takes the fields of one JSON object. The first that is not there, or not what it should be, is
// kept in `fault`; what is taken after it stays as it was.
class JsonFields {
 public:
  JsonFields(simdjson::dom::object object, std::string* fault) : object_(object), fault_(fault) {}

  void Take(std::string_view key, std::string* text) {
    std::string_view view;
    if (Get(key, &view, "a text")) text->assign(view);
  }
  void Take(std::string_view key, uint64_t* count) { Get(key, count, "a whole number"); }
  void Take(std::string_view key, int* number) {
    int64_t wide = 0;
    if (!Get(key, &wide, "a whole number")) return;
    if (wide < 0 || wide > INT32_MAX) {
      Fail(key, "a whole number below 2^31");
    } else {
      *number = static_cast<int>(wide);
    }
  }
  void Take(std::string_view key, double* number) { Get(key, number, "a number"); }
  bool Take(std::string_view key, simdjson::dom::object* object) {
    return Get(key, object, "an object");
  }
  bool Take(std::string_view key, simdjson::dom::array* array) {
    return Get(key, array, "an array");
  }

  // Only where the field is there.
  template <typename Value>
  void TakeIfThere(std::string_view key, Value* value) {
    if (Has(key)) Take(key, value);
  }
  bool Has(std::string_view key) const { return object_.at_key(key).error() == simdjson::SUCCESS; }

  void Fail(std::string_view key, std::string_view wanted) {
    if (fault_->empty()) *fault_ = Concat("the field \"", key, "\" is not ", wanted);
  }
  bool ok() const { return fault_->empty(); }

 private:
  template <typename Value>
  bool Get(std::string_view key, Value* value, std::string_view wanted) {
    if (!fault_->empty()) return false;
    simdjson::dom::element element;
    if (object_.at_key(key).get(element) != simdjson::SUCCESS) {
      *fault_ = Concat("the field \"", key, "\" is missing");
      return false;
    }
    if (element.get(*value) != simdjson::SUCCESS) {
      Fail(key, wanted);
      return false;
    }
    return true;
  }

  simdjson::dom::object object_;
  std::string* fault_;
};

}  // namespace phraseweld

#endif  // PHRASEWELD_READ_JSON_FIELDS_H_
