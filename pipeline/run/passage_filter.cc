#include "run/passage_filter.h"

#include <algorithm>
#include <cstring>

namespace phraseweld {

void PassageFilter::Add(const std::vector<std::string>& forms) {
  const std::string& longest = *std::max_element(
      forms.begin(), forms.end(),
      [](const std::string& a, const std::string& b) { return a.size() < b.size(); });
  if (std::find(keys_.begin(), keys_.end(), longest) == keys_.end()) keys_.push_back(longest);
}

bool PassageFilter::MayHold(std::string_view text, std::string* buffer) const {
  buffer->resize(text.size());
  char* const lower = buffer->data();
  unsigned char all = 0;
  // One loop that compilers make vectors of.
  for (size_t at = 0; at < text.size(); ++at) {
    const auto byte = static_cast<unsigned char>(text[at]);
    all |= byte;
    const bool capital = folds_ && static_cast<unsigned char>(byte - 'A') < 26;
    lower[at] = static_cast<char>(byte | (capital ? 0x20 : 0));
  }
  if (all >= 0x80) return true;
  return std::any_of(keys_.begin(), keys_.end(), [&](const std::string& key) {
    return memmem(lower, text.size(), key.data(), key.size()) != nullptr;
  });
}

}  // namespace phraseweld
