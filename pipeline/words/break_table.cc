#include "words/break_table.h"

#include <unicode/uniset.h>
#include <unicode/unistr.h>

#include <algorithm>
#include <bitset>
#include <cassert>
#include <string>
#include <unordered_map>

namespace phraseweld {
namespace {

// The sets that the rules speak of. A code point's memberships are a bit mask of them; code points
// with equal memberships form one class.
enum Set : uint32_t {
  kCr = 1u << 0,
  kLf = 1u << 1,
  kNewline = 1u << 2,
  kIgnored = 1u << 3,  // Extend, Format and ZWJ: rule WB4 looks through them
  kZwj = 1u << 4,
  kRegional = 1u << 5,
  kKatakana = 1u << 6,
  kHebrew = 1u << 7,
  kLetter = 1u << 8,
  kSingleQuote = 1u << 9,
  kDoubleQuote = 1u << 10,
  kMidNumLet = 1u << 11,
  kMidLetter = 1u << 12,
  kMidNum = 1u << 13,
  kNumeric = 1u << 14,
  kExtendNumLet = 1u << 15,
  kSpace = 1u << 16,
  kPictograph = 1u << 17,
  kHiragana = 1u << 18,
  kIdeographic = 1u << 19,
  kHangul = 1u << 20,
  kKanaKanji = 1u << 21,
  kDictionary = 1u << 22,
  kVanishing = 1u << 23,
  kBase = 1u << 24,  // all but CR, LF, Newline and the ignored
  kAny = 1u << 25,
};

struct SetPattern {
  Set set;
  const char* pattern;  // as icu::UnicodeSet reads it
};

// ICU's tailoring shows here: "@" is a letter, the colon and its wide and small forms are no
// MidLetter, South East Asian characters count as letters and Han, kana and Hangul syllables do
// not. ICU hands Hangul to its Chinese and Japanese dictionary too, but that one holds no Hangul,
// so Hangul counts as no dictionary script.
constexpr SetPattern kPatterns[] = {
    {kCr, "[\\p{WB=CR}]"},
    {kLf, "[\\p{WB=LF}]"},
    {kNewline, "[\\p{WB=Newline}]"},
    {kIgnored, "[[\\p{WB=Extend}-[:Han:]] \\p{WB=Format} \\p{WB=ZWJ}]"},
    {kZwj, "[\\p{WB=ZWJ}]"},
    {kRegional, "[\\p{WB=Regional_Indicator}]"},
    {kKatakana, "[\\p{WB=Katakana}]"},
    {kHebrew, "[\\p{WB=Hebrew_Letter}]"},
    {kLetter,
     "[[[\\p{WB=ALetter} @] - [[:Han:] [:Hiragana:] \\p{WB=Katakana} \\uac00-\\ud7a3]]"
     " [\\p{LB=SA} - [\\p{WB=Extend} - [:Han:]] - [\\p{GCB=Control}]]]"},
    {kSingleQuote, "[\\p{WB=Single_Quote}]"},
    {kDoubleQuote, "[\\p{WB=Double_Quote}]"},
    {kMidNumLet, "[\\p{WB=MidNumLet}]"},
    {kMidLetter, "[\\p{WB=MidLetter} - [\\: \\uFE55 \\uFF1A]]"},
    {kMidNum, "[\\p{WB=MidNum}]"},
    {kNumeric, "[\\p{WB=Numeric}]"},
    {kExtendNumLet, "[\\p{WB=ExtendNumLet}]"},
    {kSpace, "[\\p{WB=WSegSpace}]"},
    {kPictograph, "[\\p{Extended_Pictographic}]"},
    {kHiragana, "[:Hiragana:]"},
    {kIdeographic, "[\\p{Ideographic}]"},
    {kHangul, "[\\uac00-\\ud7a3]"},
    {kKanaKanji, "[[:Han:] [:Hiragana:] \\p{WB=Katakana}]"},
    {kDictionary, "[\\p{LB=SA} [:Han:] [:Hiragana:] \\p{WB=Katakana}]"},
    {kVanishing, "[\\p{gc=Mn} \\p{Default_Ignorable_Code_Point}]"},
};

constexpr uint32_t kCodePoints = 0x110000;

// One factor of a rule: a character of `sets` (any of them), once or any number of times.
struct Factor {
  uint32_t sets;
  bool repeated = false;
};

constexpr Factor kIgnoreds{kIgnored, true};
constexpr uint32_t kAnyLetter = kLetter | kHebrew;
constexpr uint32_t kLetterMid = kMidLetter | kMidNumLet | kSingleQuote;
constexpr uint32_t kNumberMid = kMidNum | kMidNumLet | kSingleQuote;

// A rule keeps its factors together. Rules chain: the last character of one match may be the first
// of the next, unless `opens_only`, which holds for rules that apply at a boundary alone. Of the
// statuses of the rules that end at the same character the largest counts; words have 200 or more
// (ICU's 400 for kana and ideographs says nothing more to us), numbers 100.
struct Rule {
  std::vector<Factor> factors;
  int status = 0;
  bool opens_only = false;
};

const std::vector<Rule>& Rules() {
  static const std::vector<Rule>& rules = *new std::vector<Rule>{
      // WB3, WB3c, WB3d.
      {{{kCr}, {kLf}}},
      {{{kZwj}, {kPictograph}}},
      {{{kSpace}, {kSpace}}},
      // WB4.
      {{{kIgnored}, kIgnoreds}, 0, true},
      {{{kBase}, kIgnoreds}},
      // What a character is by itself.
      {{{kNumeric}, kIgnoreds}, 100},
      {{{kAnyLetter}, kIgnoreds}, 200},
      {{{kHangul}}, 200},
      {{{kKatakana | kHiragana | kIdeographic}, kIgnoreds}, 200},
      // WB5, WB6 and WB7, WB7a, WB7b and WB7c.
      {{{kAnyLetter}, kIgnoreds, {kAnyLetter}}},
      {{{kAnyLetter}, kIgnoreds, {kLetterMid}, kIgnoreds, {kAnyLetter}}, 200},
      {{{kHebrew}, kIgnoreds, {kSingleQuote}}, 200},
      {{{kHebrew}, kIgnoreds, {kDoubleQuote}, kIgnoreds, {kHebrew}}},
      // WB8 to WB10, WB11 and WB12.
      {{{kNumeric}, kIgnoreds, {kNumeric}}},
      {{{kAnyLetter}, kIgnoreds, {kNumeric}}},
      {{{kNumeric}, kIgnoreds, {kAnyLetter}}},
      {{{kNumeric}, kIgnoreds, {kNumberMid}, kIgnoreds, {kNumeric}}},
      // WB13, WB13a, WB13b.
      {{{kKatakana}, kIgnoreds, {kKatakana}}, 200},
      {{{kAnyLetter | kKatakana | kExtendNumLet}, kIgnoreds, {kExtendNumLet}}, 200},
      {{{kNumeric}, kIgnoreds, {kExtendNumLet}}, 100},
      {{{kExtendNumLet}, kIgnoreds, {kAnyLetter | kKatakana}}, 200},
      {{{kExtendNumLet}, kIgnoreds, {kNumeric}}, 100},
      // WB15 and WB16.
      {{{kRegional}, kIgnoreds, {kRegional}}, 0, true},
      // ICU's own: what its dictionaries are to cut stays together until then.
      {{{kHangul}, {kHangul}}, 200},
      {{{kKanaKanji}, {kKanaKanji}}, 200},
      // WB999.
      {{{kAny}}},
  };
  return rules;
}

// The rules as a nondeterministic automaton: a position stands before a factor of a rule; the last
// position of a rule stands at its end.
constexpr size_t kMostPositions = 128;
using Positions = std::bitset<kMostPositions>;

struct Automaton {
  std::vector<Factor> factors;  // by position; ends have the empty set
  std::vector<int> statuses;    // by position; -1 where no rule ends
  std::vector<Positions> follow;
  Positions start;
  Positions chained_start;
  Positions ends;
};

// Adds to *out the positions that can consume next when the factors before `position` are done.
void AddReachable(const Automaton& automaton, size_t position, Positions* out) {
  out->set(position);
  while (automaton.factors[position].repeated) out->set(++position);
}

Automaton BuildAutomaton() {
  Automaton automaton;
  std::vector<size_t> first_positions;
  for (const Rule& rule : Rules()) {
    first_positions.push_back(automaton.factors.size());
    for (const Factor& factor : rule.factors) {
      automaton.factors.push_back(factor);
      automaton.statuses.push_back(-1);
    }
    automaton.factors.push_back({0});
    automaton.statuses.push_back(rule.status);
  }
  assert(automaton.factors.size() <= kMostPositions);
  automaton.follow.resize(automaton.factors.size());
  for (size_t position = 0; position < automaton.factors.size(); ++position) {
    if (automaton.statuses[position] >= 0) {
      automaton.ends.set(position);
    } else {
      const bool repeated = automaton.factors[position].repeated;
      AddReachable(automaton, repeated ? position : position + 1, &automaton.follow[position]);
    }
  }
  for (size_t rule = 0; rule < first_positions.size(); ++rule) {
    automaton.start.set(first_positions[rule]);
    if (!Rules()[rule].opens_only) automaton.chained_start.set(first_positions[rule]);
  }
  return automaton;
}

Positions Step(const Automaton& automaton, const Positions& from, uint32_t memberships) {
  Positions to;
  for (size_t position = 0; position < automaton.factors.size(); ++position) {
    if (from[position] && (automaton.factors[position].sets & memberships) != 0) {
      to |= automaton.follow[position];
    }
  }
  if ((to & automaton.ends).none()) return to;
  for (size_t position = 0; position < automaton.factors.size(); ++position) {
    if (automaton.chained_start[position] &&
        (automaton.factors[position].sets & memberships) != 0) {
      to |= automaton.follow[position];
    }
  }
  return to;
}

BreakTable::Verdict VerdictOf(const Automaton& automaton, const Positions& state) {
  int status = -1;
  for (size_t position = 0; position < automaton.factors.size(); ++position) {
    if (state[position]) status = std::max(status, automaton.statuses[position]);
  }
  if (status < 0) return BreakTable::Verdict::kNotAccepting;
  if (status < 100) return BreakTable::Verdict::kNoWord;
  return status < 200 ? BreakTable::Verdict::kNumber : BreakTable::Verdict::kWord;
}

}  // namespace

const BreakTable& BreakTable::Get() {
  static const BreakTable& table = *new BreakTable();
  return table;
}

BreakTable::BreakTable() {
  std::vector<uint32_t> memberships_of_class;
  Classify(&memberships_of_class);
  Compile(memberships_of_class);
}

void BreakTable::Classify(std::vector<uint32_t>* memberships_of_class) {
  std::vector<uint32_t> memberships(kCodePoints, kAny);
  for (const SetPattern& entry : kPatterns) {
    UErrorCode error = U_ZERO_ERROR;
    const icu::UnicodeSet set(icu::UnicodeString(entry.pattern, -1, US_INV), error);
    assert(U_SUCCESS(error));
    for (int32_t range = 0; range < set.getRangeCount(); ++range) {
      const auto first = static_cast<uint32_t>(set.getRangeStart(range));
      const auto last = static_cast<uint32_t>(set.getRangeEnd(range));
      for (uint32_t code_point = first; code_point <= last; ++code_point) {
        memberships[code_point] |= entry.set;
      }
    }
  }
  std::unordered_map<uint32_t, uint8_t> class_of;
  std::unordered_map<std::string, uint16_t> block_ids;
  std::string block(kBlockSize, '\0');
  uint32_t last_seen = 0;  // no code point has these memberships
  uint8_t last_class = 0;
  for (uint32_t code_point = 0; code_point < kCodePoints; ++code_point) {
    uint32_t sets = memberships[code_point];
    if ((sets & (kCr | kLf | kNewline | kIgnored)) == 0) sets |= kBase;
    if (sets != last_seen) {
      last_seen = sets;
      const auto [found, added] =
          class_of.try_emplace(sets, static_cast<uint8_t>(memberships_of_class->size()));
      if (added) memberships_of_class->push_back(sets);
      last_class = found->second;
    }
    block[code_point % kBlockSize] = static_cast<char>(last_class);
    if (code_point % kBlockSize != kBlockSize - 1) continue;
    const auto [found, added] =
        block_ids.try_emplace(block, static_cast<uint16_t>(block_ids.size()));
    if (added) blocks_.insert(blocks_.end(), block.begin(), block.end());
    block_of_.push_back(found->second);
  }
  assert(memberships_of_class->size() <= kMostClasses);
}

void BreakTable::Compile(const std::vector<uint32_t>& memberships_of_class) {
  for (const uint32_t sets : memberships_of_class) {
    dictionary_.push_back((sets & kDictionary) != 0 ? 1 : 0);
    vanishing_.push_back((sets & kVanishing) != 0 ? 1 : 0);
  }
  const Automaton automaton = BuildAutomaton();
  // The subset construction; state kDead is the empty set.
  std::vector<Positions> states = {Positions(), automaton.start};
  std::unordered_map<Positions, uint8_t> state_of = {{states[kDead], kDead},
                                                     {states[kStart], kStart}};
  for (size_t state = 0; state < states.size(); ++state) {
    next_.resize((state + 1) * kMostClasses, kDead);
    verdicts_.push_back(VerdictOf(automaton, states[state]));
    for (size_t cls = 0; cls < memberships_of_class.size(); ++cls) {
      const Positions to = Step(automaton, states[state], memberships_of_class[cls]);
      // A state that only ends a rule still accepts; it dies at the next character.
      const auto [found, added] = state_of.try_emplace(to, static_cast<uint8_t>(states.size()));
      if (added) states.push_back(to);
      next_[state * kMostClasses + cls] = found->second;
    }
  }
  assert(states.size() <= 256);
}

}  // namespace phraseweld
