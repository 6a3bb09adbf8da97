// render_sample ROWS FILE: writes a report page about an invented job with at least ROWS phrases,
// some of them hostile, for the browser test to open.

#include <algorithm>
#include <array>
#include <charconv>
#include <cmath>
#include <cstdint>
#include <fstream>
#include <iostream>
#include <string>
#include <string_view>
#include <utility>
#include <vector>

#include "absl/strings/str_cat.h"
#include "base/hash.h"
#include "deliver/page.h"

namespace phraseweld {
namespace {

constexpr std::array<std::string_view, 24> kFirst = {
    "brake",  "stone", "wind",   "main",  "spur",   "grain", "sack",   "tail",
    "oak",    "crown", "great",  "storm", "hollow", "sweep", "canvas", "bedplate",
    "copper", "lower", "second", "hand",  "meal",   "flour", "dusty",  "north"};
constexpr std::array<std::string_view, 24> kSecond = {
    "wheel", "nut",    "shaft", "hopper", "hoist", "pole",   "bearing", "beam",
    "sail",  "damper", "cog",   "chain",  "floor", "spout",  "lever",   "bolt",
    "cap",   "ladder", "rope",  "brace",  "plate", "winder", "post",    "gate"};

// Numbers that are the same on every machine.
class Dice {
 public:
  uint64_t Below(uint64_t limit) { return Mix64(++state_ * 0x9E3779B97F4A7C15u) % limit; }
  double Unit() { return static_cast<double>(Below(1u << 30)) / (1u << 30); }

 private:
  uint64_t state_ = 0;
};

// Margins and scores for n slots of which the measures are about what `pmi` asks for.
PageMerge Merge(int pass, std::string left, std::string bridge, std::string right, uint64_t n,
                double pmi, Dice* dice) {
  PageMerge merge;
  merge.pass = pass;
  merge.left = std::move(left);
  merge.bridge = std::move(bridge);
  merge.right = std::move(right);
  const double total = 400000;
  const double sides = static_cast<double>(n) * total / std::exp2(pmi);
  merge.table.n = n;
  merge.table.left =
      std::max(n, static_cast<uint64_t>(std::sqrt(sides) * std::exp2(dice->Unit() * 2 - 1)));
  merge.table.right =
      std::max(n, static_cast<uint64_t>(sides / static_cast<double>(merge.table.left)));
  merge.table.total = merge.table.all = 400000;
  merge.table.documents = std::max<uint64_t>(1, n - dice->Below(n / 2 + 1));
  const double row = static_cast<double>(merge.table.left);
  const double column = static_cast<double>(merge.table.right);
  merge.expected = row * column / total;
  const double observed = static_cast<double>(n);
  const double ratio = std::log2(observed / merge.expected);
  const std::array<std::array<double, 2>, 4> cells = {
      {{observed, merge.expected},
       {row - observed, row * (total - column) / total},
       {column - observed, (total - row) * column / total},
       {total - row - column + observed, (total - row) * (total - column) / total}}};
  double g2 = 0;
  for (const auto& [cell, expected] : cells) {
    if (cell > 0) g2 += 2 * cell * std::log(cell / expected);
  }
  merge.scores = {{Quantity::kPmi, ratio},
                  {Quantity::kNpmi, ratio / -std::log2(observed / total)},
                  {Quantity::kG2, g2}};
  merge.joined = n - dice->Below(n / 8 + 1);
  merge.yielded = n - merge.joined;
  return merge;
}

std::vector<PageContext> Contexts(const std::string& phrase, Dice* dice) {
  std::vector<PageContext> contexts;
  for (int i = 0; i < 3; ++i) {
    contexts.push_back({absl::StrCat("note-", 1000 + dice->Below(800)), i == 1 ? "title" : "body",
                        dice->Below(4000), "After the gale we looked at the ", phrase,
                        " again and found a crack a hand wide, which Marten will see to."});
  }
  return contexts;
}

void Add(PageData* data, PageMerge merge, int words, const std::string& surface, Dice* dice) {
  PagePhrase phrase;
  phrase.phrase =
      absl::StrCat(merge.left, " ", merge.bridge, merge.bridge.empty() ? "" : " ", merge.right);
  phrase.surface = surface.empty() ? phrase.phrase : surface;
  phrase.words = words;
  phrase.pass = merge.pass;
  phrase.occurrences = merge.joined;
  phrase.documents = merge.table.documents;
  if (data->phrases.size() % 4 == 0) phrase.contexts = Contexts(phrase.surface, dice);
  phrase.made_of.push_back(std::move(merge));
  data->phrases.push_back(std::move(phrase));
}

// Pairs; then longer phrases over them; a number after the second word where words run out.
void AddPhrases(size_t rows, PageData* data, Dice* dice) {
  const size_t pairs = rows * 3 / 5;
  for (size_t i = 0; i < pairs; ++i) {
    const uint64_t n = 8 + static_cast<uint64_t>(5 * std::pow(dice->Unit() + 0.02, -1.6));
    const size_t place = i * 7 % 576;
    std::string right(kSecond[place % 24]);
    if (i >= 576) absl::StrAppend(&right, i / 576);
    Add(data,
        Merge(1, std::string(kFirst[place / 24]), i % 9 == 4 ? "of the" : "", right, n,
              5.1 + dice->Unit() * 7, dice),
        i % 9 == 4 ? 4 : 2, "", dice);
  }
  for (size_t i = pairs; i < rows; ++i) {
    PagePhrase& part = data->phrases[i - pairs];
    const uint64_t n = std::max<uint64_t>(5, part.occurrences / 3);
    PageMerge merge = Merge(2 + static_cast<int>(i % 2), part.phrase, "",
                            std::string(kSecond[(i + 5) % 24]), n, 4.2 + dice->Unit() * 8, dice);
    merge.joined = std::min(merge.joined, part.occurrences / 2);
    merge.yielded = n > merge.joined ? n - merge.joined : 0;
    part.occurrences -= merge.joined;
    part.inside_longer += merge.joined;
    Add(data, std::move(merge), part.words + 1, "", dice);
  }
}

// Texts that would break a page that took them for anything but text.
void AddHostile(PageData* data, Dice* dice) {
  const std::array<std::pair<std::string, std::string>, 6> sides = {
      {{"<script>window.broken=1</script>", "</script><img/src=x/onerror=window.broken=1>"},
       {"\"quoted\"", "back\\slash"},
       {"\xD7\xA8\xD7\x95\xD7\x97", "\xD7\xA6\xD7\xA4\xD7\x95\xD7\x9F"},  // Hebrew: north wind
       {"\xE2\x80\xAE"
        "gnirts",
        "lortnoc\nline"},  // starts with a right-to-left override
       {"\xF0\x9F\x8C\xAC\xEF\xB8\x8F", "\xF0\x9F\x91\xA9\xE2\x80\x8D\xF0\x9F\x94\xA7"},
       {"<!--", "--><style>*{display:none}</style>"}}};
  for (const auto& [left, right] : sides) {
    Add(data, Merge(1, left, "", right, 40 + dice->Below(900), 6.5, dice), 2, "", dice);
  }
  PagePhrase& broken = data->phrases.back();
  broken.surface = "cut \xE2\x82 bytes \xFF";
  broken.contexts = {
      {"</script>", "<b>", 7, "before \xF0\x9F", "<!-- match", "after\x01 </title>"}};
}

void AddNearMisses(PageData* data, Dice* dice) {
  for (int pass = 1; pass <= 3; ++pass) {
    const uint64_t least = pass == 1 ? 8 : 5;
    const double gate = pass == 1 ? 5 : 4;
    for (size_t i = 0; i < 60; ++i) {
      PageNearMiss miss;
      const bool rare = i % 3 == 0;
      miss.merge =
          Merge(pass, std::string(kSecond[i % 24]), "",
                std::string(kFirst[(i * 5 + i / 24) % 24]) + (pass > 1 ? "s" : ""),
                least + static_cast<uint64_t>(8 / (dice->Unit() + 0.03)),
                rare ? gate + 1 + dice->Unit() * 5 : gate - 0.2 - dice->Unit() * 2.5, dice);
      miss.merge.rank = i + 1;
      miss.merge.joined = miss.merge.yielded = 0;
      if (rare) miss.merge.table.documents = 1 + i % 2;
      miss.failed = rare ? Quantity::kDocuments : Quantity::kPmi;
      miss.phrase = absl::StrCat(miss.merge.left, " ", miss.merge.right);
      miss.words = 2;
      miss.contexts = Contexts(miss.phrase, dice);
      miss.contexts.resize(1);
      data->near_misses.push_back(std::move(miss));
    }
  }
}

// Ranks, and passes that balance.
void Finish(PageData* data) {
  std::sort(data->phrases.begin(), data->phrases.end(), [](const auto& a, const auto& b) {
    const uint64_t made_a = a.occurrences + a.inside_longer;
    const uint64_t made_b = b.occurrences + b.inside_longer;
    return made_a != made_b ? made_a > made_b : a.phrase < b.phrase;
  });
  data->passes[0].accepted = 1;
  std::array<uint64_t, 4> ranks{};
  for (PagePhrase& phrase : data->phrases) {
    for (PageMerge& merge : phrase.made_of) {
      PagePass& pass = data->passes[static_cast<size_t>(merge.pass)];
      const auto bridge = static_cast<uint64_t>(phrase.words == 4 && merge.pass == 1 ? 2 : 0);
      merge.rank = ++ranks[static_cast<size_t>(merge.pass)];
      if (merge.pass > 0) ++pass.accepted;
      pass.joined += merge.joined;
      pass.words_absorbed += merge.joined * (1 + bridge);
    }
  }
  uint64_t tokens = 0;
  for (const PagePhrase& phrase : data->phrases) {
    tokens += phrase.occurrences * static_cast<uint64_t>(phrase.words);
  }
  tokens = tokens * 5 / 2;
  for (PagePass& pass : data->passes) {
    pass.tokens_in = tokens;
    pass.types_in = tokens / 30;
    pass.slots = tokens / 2;
    pass.slot_types = tokens / 9;
    pass.tokens_out = tokens = tokens - pass.words_absorbed;
  }
}

PageData Sample(size_t rows) {
  Dice dice;
  PageData data;
  data.program = "phraseweld 0.1.0";
  data.job = "mill-repairs";
  data.files = 4;
  data.bytes = 48318464;
  data.documents = 18204;
  data.settings = {{"words.fold", "compatibility_case"},
                   {"words.hyphens", "join"},
                   {"words.numbers", "not_first"},
                   {"words.function_words", "english"},
                   {"words.bridge", "2"},
                   {"phrases.longest", "6"}};
  const std::vector<std::pair<Quantity, double>> pairs = {
      {Quantity::kOccurrences, 8}, {Quantity::kDocuments, 3}, {Quantity::kPmi, 5}};
  const std::vector<std::pair<Quantity, double>> longer = {
      {Quantity::kOccurrences, 5}, {Quantity::kDocuments, 3}, {Quantity::kPmi, 4}};
  data.passes.resize(4);
  for (int pass = 0; pass < 4; ++pass) {
    PagePass& entry = data.passes[static_cast<size_t>(pass)];
    entry.pass = pass;
    entry.name = pass == 0 ? "rulings" : pass == 1 ? "pairs" : "longer";
    if (pass > 0) entry.accept = pass == 1 ? pairs : longer;
  }
  AddPhrases(rows, &data, &dice);
  AddHostile(&data, &dice);
  PagePhrase ruled;
  ruled.phrase = "old miller's knot";
  ruled.surface = "Old Miller\xE2\x80\x99s knot";
  ruled.words = 3;
  ruled.documents = 12;
  ruled.occurrences = 31;
  ruled.made_of.resize(1);
  ruled.made_of[0].joined = 31;
  data.phrases.push_back(std::move(ruled));
  data.rulings = {{true, "Old Miller's Knot", "old miller's knot", "the name of a knot"},
                  {false, "and so \"on\"", "and so on", ""}};
  AddNearMisses(&data, &dice);
  Finish(&data);
  return data;
}

}  // namespace
}  // namespace phraseweld

int main(int argc, char** argv) {
  size_t rows = 0;
  const std::string_view wanted = argc == 3 ? argv[1] : "";
  const auto parsed = std::from_chars(wanted.data(), wanted.data() + wanted.size(), rows);
  if (wanted.empty() || parsed.ec != std::errc() || parsed.ptr != wanted.data() + wanted.size()) {
    std::cerr << "usage: render_sample ROWS FILE\n";
    return 2;
  }
  std::ofstream file(argv[2], std::ios::binary);
  file << phraseweld::RenderPage(phraseweld::Sample(rows));
  file.close();
  if (!file) {
    std::cerr << "render_sample: cannot write " << argv[2] << "\n";
    return 1;
  }
  return 0;
}
