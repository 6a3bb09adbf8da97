#include "benchmarks/planted.h"

#include <cmath>

namespace phraseweld::benchmarks {
namespace {

constexpr double kRateSpread = 100;  // the most frequent phrase against the rarest

// "Of the" is itself a thousandth of the text. A phrase that took a large share of it would have a
// small PMI, for each bridge has a contingency table of its own.
constexpr double kRateSpreadOfLongBridges = 15;

// Of 20 phrases 10 have two words, 5 three, 3 four and 2 five.
size_t DrawLength(uint64_t bits) {
  const uint64_t twentieth = bits % 20;
  if (twentieth < 10) return 2;
  if (twentieth < 15) return 3;
  return twentieth < 18 ? 4 : 5;
}

}  // namespace

PlantedPhrases::PlantedPhrases(size_t count, Random& random) {
  constexpr std::string_view kBridges[] = {"of", "for", "in", "and"};
  uint64_t reserved = 0;
  while (phrases_.size() < count) {
    const uint64_t bits = random.Next();
    const size_t length = DrawLength(bits >> 32);
    double spread = kRateSpread;
    PlantedPhrase phrase{PlantedPhrase::Kind::kPlain, {}, (bits & 3) == 0};
    const bool after_plain =
        !phrases_.empty() && phrases_.back().kind == PlantedPhrase::Kind::kPlain;
    if (length > 2 && (bits >> 2 & 3) == 0) {
      phrase.kind = PlantedPhrase::Kind::kBridged;
    } else if (after_plain && (bits >> 4 & 7) == 0) {
      phrase.kind = PlantedPhrase::Kind::kShared;
    }
    for (size_t place = 0; place < length; ++place) {
      if (place == 0 && phrase.kind == PlantedPhrase::Kind::kShared) {
        phrase.words.push_back(phrases_.back().words.front());
      } else if (place == 1 && phrase.kind == PlantedPhrase::Kind::kBridged) {
        phrase.words.emplace_back(length > 3 ? "of" : kBridges[bits >> 8 & 3]);
      } else if (place == 2 && length > 3 && phrase.kind == PlantedPhrase::Kind::kBridged) {
        phrase.words.emplace_back("the");
        spread = kRateSpreadOfLongBridges;
      } else {
        phrase.words.push_back("qu" + WordSource::InventWord(reserved++));
      }
    }
    const auto tickets = static_cast<size_t>(std::pow(spread, random.Unit()));
    draws_.insert(draws_.end(), tickets, static_cast<uint32_t>(phrases_.size()));
    phrases_.push_back(std::move(phrase));
  }
}

PlantedPhrase& PlantedPhrases::Draw(Random& random) {
  return phrases_[draws_[random.Next() % draws_.size()]];
}

std::string_view KindName(PlantedPhrase::Kind kind) {
  constexpr std::string_view kNames[] = {"plain", "shared", "bridged"};
  return kNames[static_cast<size_t>(kind)];
}

}  // namespace phraseweld::benchmarks
