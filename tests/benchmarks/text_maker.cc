#include "benchmarks/text_maker.h"

#include <algorithm>
#include <cmath>
#include <cstring>

namespace phraseweld::benchmarks {
namespace {

constexpr double kMeanSentences = 12;     // in a document
constexpr double kMeanWordsBetween = 45;  // from one planted thing to the next
constexpr uint64_t kMostSentences = 400;  // in a document
constexpr size_t kLongestLine = 72;       // columns of a paragraph

// The longest sentence has 34 places, each of them at most a phrase of five words with what
// separates them.
constexpr size_t kLongestSentence = 34 * 5 * (WordSource::kLongest + 8);

// Parts in 256 of the background words.
constexpr uint64_t kFollowers = 224;  // a word drawn by the word before it
constexpr uint64_t kArticles = 24;    // of those behind a function word: "the"
constexpr uint64_t kCommas = 24;
constexpr uint64_t kDashes = 1;
constexpr uint64_t kHyphens = 1;
constexpr uint64_t kNumbers = 2;

constexpr uint64_t kThe = 1;  // its rank

char* Append(std::string_view text, char* out) { return std::copy(text.begin(), text.end(), out); }

char* AppendNumber(uint64_t number, char* out) {
  char digits[4];
  size_t size = 0;
  do {
    digits[size++] = static_cast<char>('0' + number % 10);
    number /= 10;
  } while (number > 0);
  return std::reverse_copy(digits, digits + size, out);
}

}  // namespace

TextMaker::TextMaker(uint64_t seed, Layout layout, size_t phrases)
    : random_(seed),
      layout_(layout),
      planted_(phrases, random_),
      buffer_((kMostSentences + 1) * kLongestSentence),
      end_(buffer_.data()) {
  DrawPlanting(nullptr);
}

std::string_view TextMaker::NextDocument() {
  end_ = buffer_.data();
  line_start_ = end_;
  separator_ = {};
  ++documents_;
  const auto sentences = std::min<uint64_t>(
      1 + static_cast<uint64_t>(-std::log(random_.Unit()) * kMeanSentences), kMostSentences);
  for (uint64_t sentence = 0; sentence < sentences; ++sentence) AppendSentence();
  end_ = Append(layout_ == Layout::kLines ? "\n" : "\n\n", end_);
  return {buffer_.data(), static_cast<size_t>(end_ - buffer_.data())};
}

void TextMaker::AppendSentence() {
  const uint64_t bits = random_.Next();
  const uint64_t places = 4 + (bits & 15) + (bits >> 4 & 15);
  char* const first = end_ + separator_.size();
  char* out = end_;
  previous_rank_ = 0;
  separated_ = true;
  for (uint64_t place = 0; place < places; ++place) {
    if (until_planted_ == 0 && separated_ && next_planted_ != nullptr) {
      out = AppendPlanted(out);
    } else {
      out = AppendBackgroundWord(random_.Next(), out);
    }
  }
  if (*first >= 'a' && *first <= 'z') *first = static_cast<char>(*first - 'a' + 'A');
  // A comma, dash or hyphen behind the last word gives way to the end of the sentence.
  *out++ = (bits >> 8 & 31) == 0 ? '?' : '.';
  separator_ = " ";
  end_ = out;
}

char* TextMaker::StartWord(char* out) {
  if (separator_.size() == 1 && separator_[0] == ' ' && layout_ == Layout::kParagraphs &&
      static_cast<size_t>(out - line_start_) > kLongestLine) {
    *out++ = '\n';
    line_start_ = out;
  } else {
    out = Append(separator_, out);
  }
  ++words_;
  return out;
}

char* TextMaker::AppendBackgroundWord(uint64_t bits, char* out) {
  if (until_planted_ > 0) --until_planted_;
  out = StartWord(out);
  separator_ = " ";
  const uint64_t part = bits >> 48 & 255;
  if (part < kNumbers) {
    previous_rank_ = 0;
    separated_ = true;
    return AppendNumber((bits >> 16) % 2000, out);
  }
  const uint64_t other_part = bits >> 56;
  uint64_t rank;
  if (previous_rank_ > kThe && source_.IsFunctionWord(previous_rank_) && other_part < kArticles) {
    rank = kThe;
  } else if (previous_rank_ != 0 && other_part < kFollowers) {
    rank = source_.FollowerRank(previous_rank_, random_.Next());
  } else {
    rank = source_.Rank(bits);
  }
  out = source_.Spell(rank, out);
  previous_rank_ = rank;
  if (source_.IsFunctionWord(rank)) return out;
  separated_ = true;
  if (part >= 256 - kCommas) {
    separator_ = ", ";
  } else if (part >= 256 - kCommas - kDashes) {
    separator_ = " \u2013 ";
  } else if (part >= 256 - kCommas - kDashes - kHyphens) {
    separator_ = "-";
  }
  return out;
}

char* TextMaker::AppendPlanted(char* out) {
  PlantedPhrase& phrase = *next_planted_;
  if (next_is_single_) {
    out = Append(phrase.words.front(), StartWord(out));
    ++phrase.singles;
    DrawPlanting(nullptr);
  } else {
    for (const std::string& word : phrase.words) {
      out = Append(word, StartWord(out));
      separator_ = " ";
    }
    ++phrase.times;
    if (phrase.last_document != documents_) {
      phrase.last_document = documents_;
      ++phrase.documents;
    }
    DrawPlanting(&phrase);
  }
  separator_ = " ";
  separated_ = false;
  previous_rank_ = 0;
  return out;
}

// What to plant next and when. A phrase tends to come again soon, as phrases do.
void TextMaker::DrawPlanting(PlantedPhrase* again) {
  if (planted_.empty()) return;
  const uint64_t bits = random_.Next();
  until_planted_ = 1 + static_cast<uint64_t>(-std::log(random_.Unit()) * kMeanWordsBetween);
  next_planted_ = again != nullptr && (bits & 3) == 0 ? again : &planted_.Draw(random_);
  next_is_single_ = next_planted_->stands_singly && (bits >> 2 & 3) == 0;
}

}  // namespace phraseweld::benchmarks
