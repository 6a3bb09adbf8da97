#include <algorithm>
#include <array>
#include <cstring>

#include "words/surface_cache.h"
#include "words/vocabulary.h"
#include "words/word_stream.h"

namespace phraseweld {
namespace {

// The ASCII bytes that no open gap begins with.
constexpr std::array<bool, 256> kClosesGap = [] {
  std::array<bool, 256> closes{};
  for (int byte = 0; byte < 0x80; ++byte) {
    closes[static_cast<size_t>(byte)] = byte != ' ' && byte != '\n' && byte != '\r' && byte != '-';
  }
  return closes;
}();

}  // namespace

class Encoder::Impl {
 public:
  Impl(const WordOptions& options, Vocabulary* vocabulary, SplitPath path)
      : options_(options),
        vocabulary_(vocabulary),
        stream_(MakeWordStream(options, path)),
        folder_(options) {}

  void Encode(std::string_view text, bool more_follows, uint64_t place,
              std::vector<Entry>* entries) {
    stream_->Start(text);
    uint32_t last_end = kNoWordYet;
    while (const size_t count = stream_->Next(words_.data(), words_.size())) {
      if (last_end == kNoWordYet) last_end = words_[0].begin;  // what stands before breaks nothing
      const uint64_t first_place = place + entries->size();
      // Entries are made here and then copied, so that the vector need not clear what it grows by.
      Entry* out = made_.data();
      for (size_t first = 0; first < count; first += kGroup) {
        const size_t end = std::min(count, first + kGroup);
        for (size_t i = first; i < end; ++i) FindKey(text, words_[i], &keys_[i - first]);
        for (size_t i = first; i < end; ++i) {
          const WordSpan word = words_[i];
          // Written in any case, kept only where the gap is not open.
          *out = kBreak;
          out += IsBreak(text, last_end, word.begin) ? 1 : 0;
          last_end = word.end;
          const uint64_t word_place = first_place + static_cast<uint64_t>(out - made_.data());
          *out++ = IdOf(text, word, keys_[i - first], word_place);
        }
      }
      entries->insert(entries->end(), made_.data(), out);
    }
    const auto size = static_cast<uint32_t>(text.size());
    if (more_follows && last_end < size && IsBreak(text, last_end, size)) {
      entries->push_back(kBreak);
    }
  }

 private:
  static constexpr uint32_t kNoWordYet = 0xFFFFFFFFu;
  // Keys are made for so many words before the first is looked up: time for memory to answer.
  static constexpr size_t kGroup = 64;
  static constexpr size_t kWords = 1024;

  void FindKey(std::string_view text, const WordSpan& word, ShortWordCache::Key* key) const {
    const uint32_t size = word.end - word.begin;
    if (size > ShortWordCache::kMostBytes) return;
    *key = ShortWordCache::KeyOf(text, word.begin, size);
    short_words_.Prefetch(*key);
  }

  bool IsBreak(std::string_view text, uint32_t last_end, uint32_t begin) const {
    const uint32_t size = begin - last_end;
    const char first = text[last_end];
    // The commonest gaps need no branch that the processor must guess.
    const bool open = (size == 0) | ((size == 1) & ((first == ' ') | (first == '\n')));
    const bool closed = kClosesGap[static_cast<unsigned char>(first)] & !open;
    if (open | closed) [[likely]]
      return closed;
    return !GapIsOpen(text.substr(last_end, size), options_.join_hyphens);
  }

  uint32_t IdOf(std::string_view text, const WordSpan& word, ShortWordCache::Key key,
                uint64_t place) {
    const uint32_t size = word.end - word.begin;
    if (size <= ShortWordCache::kMostBytes) [[likely]] {
      uint32_t id = short_words_.Find(key);
      if (id == kBreak) [[unlikely]] {
        id = Intern(text, word, place);
        short_words_.Add(key, id);
      }
      return id;
    }
    if (size > LongWordCache::kMostBytes) return Intern(text, word, place);
    const std::string_view surface = text.substr(word.begin, size);
    uint32_t id = long_words_.Find(surface);
    if (id == kBreak) {
      id = Intern(text, word, place);
      long_words_.Add(surface, id);
    }
    return id;
  }

  // A thread's places ascend, so a word that the cache knows needs no second look: its place was
  // smaller when it came in.
  uint32_t Intern(std::string_view text, const WordSpan& word, uint64_t place) {
    return vocabulary_->Intern(folder_.Form(text.substr(word.begin, word.end - word.begin)), place,
                               word.number != 0);
  }

  const WordOptions options_;
  Vocabulary* const vocabulary_;
  std::unique_ptr<WordStream> stream_;
  WordFolder folder_;
  ShortWordCache short_words_;
  LongWordCache long_words_;
  // 17 KiB together, which stay in the first-level cache.
  std::array<WordSpan, kWords> words_;
  std::array<Entry, 2 * kWords> made_;
  std::array<ShortWordCache::Key, kGroup> keys_;
};

Encoder::Encoder(const WordOptions& options, Vocabulary* vocabulary, SplitPath path)
    : impl_(std::make_unique<Impl>(options, vocabulary, path)) {}

Encoder::~Encoder() = default;

void Encoder::Encode(std::string_view text, bool more_follows, uint64_t place,
                     std::vector<Entry>* entries) {
  impl_->Encode(text, more_follows, place, entries);
}

}  // namespace phraseweld
