#include "run/verify_faults.h"

#include <algorithm>
#include <optional>
#include <utility>

#include "base/strings.h"
#include "base/utf8.h"

namespace phraseweld {
namespace {

constexpr size_t kShownBytes = 48;  // of either side of a difference
constexpr size_t kBufferBytes = size_t{1} << 18;

// A value of a JSON text with the way to it: "first.byte", "made_of[1].pass".
struct JsonValue {
  std::string path;
  std::string_view raw;
};

// Takes JSON to pieces, down to strings, numbers and the like. It need not judge its grammar.
class Flattener {
 public:
  explicit Flattener(std::string_view text) : text_(text) {}

  std::optional<std::vector<JsonValue>> Flatten() {
    if (!Value("") || at_ != text_.size()) return std::nullopt;
    return std::move(values_);
  }

 private:
  bool Value(const std::string& path) {
    if (At('{')) return Object(path);
    if (At('[')) return Array(path);
    const size_t begin = at_;
    if (At('"')) {
      if (!SkipString()) return false;
    } else {
      at_ = std::min(text_.find_first_of(",]}", at_), text_.size());
    }
    values_.push_back({path, text_.substr(begin, at_ - begin)});
    return at_ > begin;
  }

  bool Object(const std::string& path) {
    ++at_;
    for (bool first = true; !At('}'); first = false) {
      if (!first && !Take(',')) return false;
      const size_t key = at_ + 1;
      if (!At('"') || !SkipString()) return false;
      const std::string name(text_.substr(key, at_ - 1 - key));
      if (!Take(':') || !Value(path.empty() ? name : Concat(path, ".", name))) return false;
    }
    return Take('}');
  }

  bool Array(const std::string& path) {
    ++at_;
    for (size_t i = 0; !At(']'); ++i) {
      if (i > 0 && !Take(',')) return false;
      if (!Value(Concat(path, "[", i, "]"))) return false;
    }
    return Take(']');
  }

  bool SkipString() {
    for (++at_; at_ < text_.size() && text_[at_] != '"'; ++at_) {
      if (text_[at_] == '\\') ++at_;
    }
    return Take('"');
  }

  bool At(char c) const { return at_ < text_.size() && text_[at_] == c; }
  bool Take(char c) {
    if (!At(c)) return false;
    ++at_;
    return true;
  }

  std::string_view text_;
  size_t at_ = 0;
  std::vector<JsonValue> values_;
};

}  // namespace

std::string Shown(std::string_view bytes) {
  constexpr char kDigits[] = "0123456789abcdef";
  std::string shown = "\"";
  bool cut = false;
  for (size_t at = 0; at < bytes.size();) {
    const size_t begin = at;
    const std::optional<char32_t> point = NextCodePoint(bytes, &at);
    if (at > kShownBytes) {
      cut = true;
      break;
    }
    if (point.has_value() && !IsControl(*point)) {
      shown += bytes.substr(begin, at - begin);
      continue;
    }
    for (const char c : bytes.substr(begin, at - begin)) {
      const auto byte = static_cast<unsigned char>(c);
      shown += "\\x";
      shown += kDigits[byte >> 4];
      shown += kDigits[byte & 15];
    }
  }
  shown += cut ? "\"..." : "\"";
  return shown;
}

void VerifyFaults::Add(std::string fault) {
  if (++count_ <= kMostShown) shown_.push_back(std::move(fault));
}

void VerifyFaults::Add(std::string_view place, std::string_view what, std::string_view found,
                       std::string_view expected) {
  Add(Concat(place, ": ", what, ": found ", found, ", expected ", expected));
}

void VerifyFaults::Append(const VerifyFaults& others) {
  for (const std::string& fault : others.shown_) Add(fault);
  count_ += others.count_ - others.shown_.size();
}

absl::Status VerifyFaults::Status(std::string_view folder) const {
  if (count_ == 0) return absl::OkStatus();
  std::string message =
      Concat(folder, ": this run is not what it says, or its sources have changed (", count_,
             count_ == 1 ? " fault)" : " faults)");
  for (const std::string& fault : shown_) AppendTo(&message, "\n  ", fault);
  if (count_ > shown_.size()) AppendTo(&message, "\n  and ", count_ - shown_.size(), " more");
  return absl::DataLossError(message);
}

void CompareJsonLines(std::string_view place, std::string_view found, std::string_view expected,
                      VerifyFaults* faults) {
  if (found == expected) return;
  const auto found_values = Flattener(found).Flatten();
  const auto expected_values = Flattener(expected).Flatten();
  const auto same_path = [](const JsonValue& a, const JsonValue& b) { return a.path == b.path; };
  bool told = false;
  if (found_values && expected_values &&
      std::equal(found_values->begin(), found_values->end(), expected_values->begin(),
                 expected_values->end(), same_path)) {
    for (size_t i = 0; i < found_values->size(); ++i) {
      const JsonValue& value = (*found_values)[i];
      const JsonValue& truth = (*expected_values)[i];
      if (value.raw == truth.raw) continue;
      told = true;
      faults->Add(place, value.path, value.raw, truth.raw);
    }
  }
  if (told) return;
  const auto differs =
      std::mismatch(found.begin(), found.end(), expected.begin(), expected.end()).first;
  const auto column = static_cast<size_t>(differs - found.begin());
  faults->Add(place, Concat("from byte ", column, " of the line"), Shown(found.substr(column)),
              Shown(expected.substr(column)));
}

ByteComparer::ByteComparer(FileSystem& files, const std::string& path, const std::string& undone,
                           VerifyFaults* faults)
    : path_(path), undone_(undone), faults_(faults), buffer_(kBufferBytes) {
  absl::StatusOr<std::unique_ptr<InputStream>> stream = InputStream::Open(files, path);
  if (stream.ok()) {
    stream_ = *std::move(stream);
    return;
  }
  failed_ = true;
  faults_->Add(std::string(stream.status().message()));
}

// Makes sure that there is a byte of the file; false at its end and where it cannot be read.
bool ByteComparer::Fill() {
  if (at_ < end_) return true;
  absl::StatusOr<size_t> got = stream_->Read(buffer_.data(), buffer_.size());
  if (!got.ok()) {
    failed_ = true;
    faults_->Add(std::string(got.status().message()));
    return false;
  }
  at_ = 0;
  end_ = *got;
  return end_ > 0;
}

void ByteComparer::Fail(std::string_view of_file, std::string_view of_pieces) {
  failed_ = true;
  const auto shown = [](std::string_view bytes) {
    return bytes.empty() ? std::string("the end") : Shown(bytes);
  };
  const std::string place = Concat("byte ", byte_, " (line ", line_, ")");
  if (undone_.empty()) {
    faults_->Add(path_, place, shown(of_file), shown(of_pieces));
  } else {
    faults_->Add(undone_, Concat("undone, it is not ", path_, " from ", place), shown(of_pieces),
                 shown(of_file));
  }
}

void ByteComparer::Next(std::string_view bytes) {
  while (!failed_ && !bytes.empty()) {
    if (!Fill()) {
      if (!failed_) Fail({}, bytes);
      return;
    }
    const size_t size = std::min(bytes.size(), end_ - at_);
    const std::string_view of_file(buffer_.data() + at_, size);
    const auto same = static_cast<size_t>(
        std::mismatch(of_file.begin(), of_file.end(), bytes.begin()).first - of_file.begin());
    byte_ += same;
    line_ += static_cast<uint64_t>(std::count(bytes.begin(), bytes.begin() + same, '\n'));
    at_ += same;
    bytes.remove_prefix(same);
    if (same < size) Fail({buffer_.data() + at_, end_ - at_}, bytes);
  }
}

void ByteComparer::Finish() {
  if (!failed_ && Fill()) Fail({buffer_.data() + at_, end_ - at_}, {});
}

}  // namespace phraseweld
