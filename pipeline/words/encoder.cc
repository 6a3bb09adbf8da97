#include <algorithm>
#include <array>
#include <cstring>
#include <string>
#include <string_view>
#include <vector>

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

  void EncodeAhead(std::string_view text, bool more_follows, uint64_t place,
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
          const uint32_t id = IdOf(text, word, keys_[i - first]);
          if (id == kBreak) [[unlikely]] {
            Note(text, word, keys_[i - first], word_place, word_place - place);
          }
          *out++ = id;
        }
      }
      entries->insert(entries->end(), made_.data(), out);
      if (unknown_.size() >= kMostUnknown || bytes_.size() >= kMostBytes) Settle(entries);
    }
    const auto size = static_cast<uint32_t>(text.size());
    if (more_follows && last_end < size && IsBreak(text, last_end, size)) {
      entries->push_back(kBreak);
    }
  }

  // A thread's places ascend, so a word that the cache knows needs no second look: its place was
  // smaller when it came in.
  void Settle(std::vector<Entry>* entries) {
    if (unknown_.empty()) return;
    sightings_.clear();
    const std::string_view bytes = bytes_;
    for (const Unknown& unknown : unknown_) {
      const size_t begin = unknown.begin + unknown.surface_size;
      sightings_.push_back(
          {bytes.substr(begin, unknown.end - begin), unknown.place, unknown.number});
    }
    vocabulary_->Intern(absl::MakeSpan(sightings_));
    for (size_t i = 0; i < unknown_.size(); ++i) {
      const Unknown& unknown = unknown_[i];
      (*entries)[unknown.at] = sightings_[i].id;
      // The same word may have come several times before it was known.
      if (unknown.surface_size <= ShortWordCache::kMostBytes) {
        if (short_words_.Find(unknown.key) == kBreak) {
          short_words_.Add(unknown.key, sightings_[i].id);
        }
      } else if (unknown.surface_size <= LongWordCache::kMostBytes) {
        long_words_.Add(bytes.substr(unknown.begin, unknown.surface_size), sightings_[i].id);
      }
    }
    unknown_.clear();
    // A word of many megabytes is no reason to hold so many from now on.
    if (bytes_.capacity() > 4 * kMostBytes) bytes_ = std::string();
    bytes_.clear();
  }

 private:
  // A word that the caches do not know: its bytes in the text and then those of its form are in
  // bytes_[begin, end).
  struct Unknown {
    ShortWordCache::Key key;
    uint64_t place = 0;
    uint64_t at = 0;  // in the entries
    size_t begin = 0, end = 0;
    size_t surface_size = 0;
    bool number = false;
  };
  // The vocabulary is asked about so many at once: memory answers many questions side by side.
  static constexpr size_t kMostUnknown = 1024;
  static constexpr size_t kMostBytes = size_t{1} << 16;

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

  // The id, or kBreak where neither cache knows it.
  uint32_t IdOf(std::string_view text, const WordSpan& word, ShortWordCache::Key key) {
    const uint32_t size = word.end - word.begin;
    if (size <= ShortWordCache::kMostBytes) [[likely]]
      return short_words_.Find(key);
    if (size > LongWordCache::kMostBytes) return kBreak;
    return long_words_.Find(text.substr(word.begin, size));
  }

  // Keeps a word for Settle(); it will be at entries[at].
  void Note(std::string_view text, const WordSpan& word, ShortWordCache::Key key, uint64_t place,
            uint64_t at) {
    const std::string_view surface = text.substr(word.begin, word.end - word.begin);
    Unknown unknown{key, place, at, bytes_.size()};
    unknown.surface_size = surface.size();
    unknown.number = word.number != 0;
    bytes_ += surface;
    bytes_ += folder_.Form(surface);
    unknown.end = bytes_.size();
    unknown_.push_back(unknown);
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
  std::vector<Unknown> unknown_;
  std::string bytes_;
  std::vector<Vocabulary::Sighting> sightings_;
};

Encoder::Encoder(const WordOptions& options, Vocabulary* vocabulary, SplitPath path)
    : impl_(std::make_unique<Impl>(options, vocabulary, path)) {}

Encoder::~Encoder() = default;

void Encoder::Encode(std::string_view text, bool more_follows, uint64_t place,
                     std::vector<Entry>* entries) {
  impl_->EncodeAhead(text, more_follows, place, entries);
  impl_->Settle(entries);
}

void Encoder::EncodeAhead(std::string_view text, bool more_follows, uint64_t place,
                          std::vector<Entry>* entries) {
  impl_->EncodeAhead(text, more_follows, place, entries);
}

void Encoder::Settle(std::vector<Entry>* entries) { impl_->Settle(entries); }

}  // namespace phraseweld
