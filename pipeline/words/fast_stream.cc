#include <unicode/utf8.h>

#include <algorithm>
#include <array>
#include <memory>

#include "words/ascii.h"
#include "words/break_table.h"
#include "words/icu_segmenter.h"
#include "words/scan.h"
#include "words/word_stream.h"

namespace phraseweld {
namespace {

class FastStream final : public WordStream, private HardText {
 public:
  FastStream(const WordOptions& options, ScanFunction scan_function)
      : folder_(options), scan_function_(scan_function) {}

  void Start(std::string_view text) override {
    scan_ = Scan();
    scan_.text = text.data();
    scan_.size = static_cast<uint32_t>(text.size());
    scan_.hard_text = this;
    spilled_.clear();
    given_ = 0;
    held_back_ = false;
  }

  size_t Next(WordSpan* words, size_t capacity) override {
    if (given_ < spilled_.size()) return NextSpilled(words, capacity);
    scan_.first = scan_.out = words;
    scan_.limit = words + capacity;
    if (held_back_) *scan_.out++ = held_;
    held_back_ = false;
    scan_function_(&scan_);
    const auto count = static_cast<size_t>(scan_.out - words);
    const bool ended = scan_.at >= scan_.size && !scan_.open;
    // The scanner may yet take the last word back.
    if (ended || count == 0 || !spilled_.empty()) return count;
    held_ = words[count - 1];
    held_back_ = true;
    return count - 1;
  }

 private:
  // The words of a dictionary segment that had no room.
  size_t NextSpilled(WordSpan* words, size_t capacity) {
    const size_t count = std::min(capacity, spilled_.size() - given_);
    std::copy_n(spilled_.begin() + static_cast<ptrdiff_t>(given_), count, words);
    given_ += count;
    if (given_ == spilled_.size()) {
      spilled_.clear();
      given_ = 0;
    }
    return count;
  }

  uint32_t Resolve(uint32_t begin, uint32_t hard, Scan* scan) override {
    if (table_ == nullptr) table_ = &BreakTable::Get();
    uint32_t at = begin;
    while (true) {
      at = ResolveSegment(at, scan);
      if (at <= hard) continue;
      if (at == scan->size || scan->limit - scan->out < kScanRoom) return at;
      // A single ASCII byte between hard ones is not worth the change.
      if (IsAsciiByte(scan->text[at]) &&
          (at + 1 == scan->size || IsAsciiByte(scan->text[at + 1]))) {
        return at;
      }
    }
  }

  // Writes the words of the segment that starts at `begin` and returns its end.
  uint32_t ResolveSegment(uint32_t begin, Scan* scan) {
    const char* text = scan->text;
    const auto size = static_cast<int32_t>(scan->size);
    auto at = static_cast<int32_t>(begin);
    uint32_t end = begin;
    uint8_t state = BreakTable::kStart;
    uint8_t first_class = 0;
    bool dictionary = false;
    auto verdict = BreakTable::Verdict::kNoWord;
    while (at < size) {
      UChar32 code_point;
      U8_NEXT(text, at, size, code_point);
      if (code_point < 0) break;
      const uint8_t cls = table_->Class(static_cast<uint32_t>(code_point));
      if (state == BreakTable::kStart) first_class = cls;
      state = table_->Next(state, cls);
      if (state == BreakTable::kDead) break;
      dictionary |= table_->IsDictionary(cls);
      if (table_->verdict(state) != BreakTable::Verdict::kNotAccepting) {
        verdict = table_->verdict(state);
        end = static_cast<uint32_t>(at);
      }
    }
    if (end == begin) return begin + 1;  // an invalid byte
    if (verdict == BreakTable::Verdict::kNoWord) return end;
    const WordSpan word = {begin, end & 0x7FFFFFFFu, verdict == BreakTable::Verdict::kNumber};
    if (dictionary) {
      AddDictionaryWords(word, scan);
    } else if (!table_->MayVanish(first_class) || HasForm(word, scan)) {
      *scan->out++ = word;
    }
    return end;
  }

  void AddDictionaryWords(const WordSpan& segment, Scan* scan) {
    if (segmenter_ == nullptr) segmenter_ = std::make_unique<IcuSegmenter>();
    dictionary_words_.clear();
    segmenter_->AppendWords({scan->text + segment.begin, segment.end - segment.begin},
                            segment.begin, &dictionary_words_);
    for (const WordSpan& word : dictionary_words_) {
      if (!HasForm(word, scan)) continue;
      if (scan->out < scan->limit) {
        *scan->out++ = word;
      } else {
        spilled_.push_back(word);
      }
    }
  }

  // A word loses its whole form only if its first character vanishes.
  bool HasForm(const WordSpan& word, const Scan* scan) {
    const std::string_view text(scan->text + word.begin, word.end - word.begin);
    int32_t at = 0;
    UChar32 code_point;
    U8_NEXT_UNSAFE(text.data(), at, code_point);
    return !table_->MayVanish(table_->Class(static_cast<uint32_t>(code_point))) ||
           !folder_.Form(text).empty();
  }

  WordFolder folder_;
  const ScanFunction scan_function_;
  const BreakTable* table_ = nullptr;  // both made when the first text needs them
  std::unique_ptr<IcuSegmenter> segmenter_;
  Scan scan_;
  std::vector<WordSpan> dictionary_words_;
  std::vector<WordSpan> spilled_;
  size_t given_ = 0;  // of spilled_
  // The last word of the call before, until it is final.
  WordSpan held_ = {0, 0, 0};
  bool held_back_ = false;
};

ScanFunction FunctionOf(ScanLevel level) {
  switch (level) {
#if defined(__x86_64__)
    case ScanLevel::kSse2:
      return ScanSse2;
    case ScanLevel::kAvx2:
      return ScanAvx2;
    case ScanLevel::kAvx512:
      return ScanAvx512;
#endif
    default:
      return ScanScalar;
  }
}

}  // namespace

std::vector<ScanLevel> AvailableScanLevels() {
  std::vector<ScanLevel> levels = {ScanLevel::kScalar};
#if defined(__x86_64__)
  levels.push_back(ScanLevel::kSse2);
  const bool has_avx2 = __builtin_cpu_supports("avx2") && __builtin_cpu_supports("bmi") &&
                        __builtin_cpu_supports("bmi2") && __builtin_cpu_supports("popcnt");
  if (has_avx2) levels.push_back(ScanLevel::kAvx2);
  if (has_avx2 && __builtin_cpu_supports("avx512f") && __builtin_cpu_supports("avx512bw")) {
    levels.push_back(ScanLevel::kAvx512);
  }
#endif
  return levels;
}

std::unique_ptr<WordStream> MakeFastStream(const WordOptions& options, ScanLevel level) {
  return std::make_unique<FastStream>(options, FunctionOf(level));
}

std::unique_ptr<WordStream> MakeWordStream(const WordOptions& options, SplitPath path) {
  if (path == SplitPath::kExact) return MakeExactStream(options);
  static const ScanLevel best = AvailableScanLevels().back();
  return MakeFastStream(options, best);
}

}  // namespace phraseweld
