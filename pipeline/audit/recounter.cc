#include "audit/recounter.h"

#include <algorithm>
#include <utility>

namespace phraseweld {
namespace {

uint64_t Margin(uint32_t type, uint32_t bridge) { return uint64_t{type} << 32 | bridge; }

// How a surface shows a gap: an empty one and a hyphen as they are, any other as one space.
std::string_view ShownGap(std::string_view gap) {
  for (const std::string_view shown : {"", "-", "\u2010", "\u2011"}) {
    if (gap == shown) return gap;
  }
  return " ";
}

}  // namespace

Recounter::Recounter(const RecountRules& rules)
    : bridge_(rules.bridge), numbers_end_runs_(rules.numbers_end_runs) {
  for (const std::string& form : rules.function_words) words_[Intern(form)].function_word = true;
  bridges_[{}] = 0;
  for (const std::vector<std::string>& forms : rules.always) {
    std::vector<uint32_t> ids;
    for (const std::string& form : forms) ids.push_back(Intern(form));
    rulings_.ruled.push_back({0, 0, PhraseOf(ids)});
    always_.push_back(std::move(ids));
  }
  ruled_last_document_.resize(always_.size(), 0);
  passes_.resize(rules.passes.size());
  for (size_t i = 0; i < passes_.size(); ++i) Prepare(rules.passes[i], &passes_[i]);
  for (Pass& pass : passes_) pass.with_bridge.resize(bridges_.size(), 0);
}

void Recounter::Prepare(const RecountPass& from, Pass* pass) {
  pass->word_margins = from.word_margins;
  pass->accepted = from.accepted.size();
  for (const auto* list : {&from.accepted, &from.watched}) {
    for (const RecountSlot& slot : *list) {
      std::vector<uint32_t> bridge;
      for (const std::string& form : slot.bridge) bridge.push_back(Intern(form));
      const auto next = static_cast<uint32_t>(bridges_.size());
      const uint32_t bridge_id = bridges_.try_emplace(std::move(bridge), next).first->second;
      const SlotKey key = {TypeOf(slot.left), bridge_id, TypeOf(slot.right)};
      pass->places.try_emplace(key, static_cast<uint32_t>(pass->keys.size()));
      pass->keys.push_back(key);
      pass->left[Margin(key[0], bridge_id)] = 0;
      pass->right[Margin(key[2], bridge_id)] = 0;
      if (pass->word_margins && bridge_id == 0) pass->tokens[key[0]] = pass->tokens[key[2]] = 0;
      std::vector<std::string> forms = slot.left;
      forms.insert(forms.end(), slot.bridge.begin(), slot.bridge.end());
      forms.insert(forms.end(), slot.right.begin(), slot.right.end());
      pass->counts.emplace_back().phrase = TypeOf(forms);
    }
  }
  pass->last_document.resize(pass->keys.size(), 0);
}

uint32_t Recounter::Intern(std::string_view form) {
  if (const auto found = ids_.find(form); found != ids_.end()) return found->second;
  const auto id = static_cast<uint32_t>(words_.size());
  words_.emplace_back().form = form;
  ids_.emplace(words_.back().form, id);
  return id;
}

uint32_t Recounter::TypeOf(const std::vector<std::string>& forms) {
  std::vector<uint32_t> ids;
  for (const std::string& form : forms) ids.push_back(Intern(form));
  return ids.size() == 1 ? ids.front() : PhraseOf(std::move(ids));
}

uint32_t Recounter::PhraseOf(std::vector<uint32_t> words) {
  const auto next = kFirstPhrase + static_cast<uint32_t>(phrases_.size());
  const auto [place, is_new] = phrase_types_.try_emplace(words, next);
  if (is_new) {
    phrases_.emplace_back().words = std::move(words);
    spellings_.emplace_back();
  }
  return place->second;
}

uint32_t Recounter::Word(std::string_view form, bool number) {
  const uint32_t id = Intern(form);
  WordEntry& word = words_[id];
  if (!word.occurs) {
    word.occurs = true;
    word.number = number;
    ++word_types_;
    if (form.find(' ') != std::string_view::npos) spaced_forms_.emplace_back(form);
  }
  return id;
}

void Recounter::BeginDocument(std::string_view name) {
  ++documents_;
  document_ = name;
  passage_.clear();
}

void Recounter::BeginPassage(std::string_view name) { passage_ = name; }

const std::vector<RecountToken>& Recounter::AddRun(const RecountRun& run) {
  tokens_.clear();
  for (size_t i = 0; i < run.words.size(); ++i) tokens_.push_back({run.words[i].type, i, 1});
  word_tokens_ += tokens_.size();
  if (!always_.empty()) {
    rulings_.tokens_in += tokens_.size();
    CountTypes(&types_before_rulings_);
    JoinRulings();
  }
  for (Pass& pass : passes_) {
    pass.tokens_in += tokens_.size();
    CountTypes(&pass.types);
    FindSlots();
    CountPass(run, &pass);
    if (pass.accepted > 0) MergePass(&pass);
  }
  CountFinal(run);
  return tokens_;
}

void Recounter::TypeSet::Add(std::vector<bool>* bits, uint32_t index) {
  if (index >= bits->size()) bits->resize(std::max<size_t>(index + 1, bits->size() * 2), false);
  if ((*bits)[index]) return;
  (*bits)[index] = true;
  ++size;
}

void Recounter::CountTypes(TypeSet* types) {
  for (const RecountToken& token : tokens_) {
    if (is_phrase(token.type)) {
      types->Add(&types->phrases, token.type - kFirstPhrase);
    } else {
      types->Add(&types->words, token.type);
    }
  }
}

// The bridge of the slot between two tokens: what stands between them, function words all.
uint32_t Recounter::BridgeBetween(size_t left, size_t right) {
  if (left + 1 == right) return 0;
  between_.clear();
  for (size_t i = left + 1; i < right; ++i) between_.push_back(tokens_[i].type);
  const auto found = bridges_.find(between_);
  return found == bridges_.end() ? kNoBridge : found->second;
}

// Section 4 of the semantics: two content tokens and only function words between them, `bridge_` of
// them at most.
void Recounter::FindSlots() {
  slots_.clear();
  bool has_left = false;
  size_t left = 0;
  for (size_t i = 0; i < tokens_.size(); ++i) {
    if (EndsRun(tokens_[i].type)) {
      has_left = false;
    } else if (!IsFunctionWord(tokens_[i].type)) {
      if (has_left && i - left - 1 <= static_cast<size_t>(bridge_)) {
        slots_.push_back({left, i, BridgeBetween(left, i)});
      }
      has_left = true;
      left = i;
    }
  }
}

void Recounter::CountPass(const RecountRun& run, Pass* pass) {
  if (!pass->tokens.empty()) {
    for (const RecountToken& token : tokens_) {
      if (const auto found = pass->tokens.find(token.type); found != pass->tokens.end()) {
        ++found->second;
      }
    }
  }
  pass->slots += slots_.size();
  for (const Slot& slot : slots_) {
    if (slot.bridge == kNoBridge) continue;
    ++pass->with_bridge[slot.bridge];
    const uint32_t left = tokens_[slot.left].type, right = tokens_[slot.right].type;
    const auto with_left = pass->left.find(Margin(left, slot.bridge));
    if (with_left != pass->left.end()) ++with_left->second;
    const auto with_right = pass->right.find(Margin(right, slot.bridge));
    if (with_right == pass->right.end()) continue;
    ++with_right->second;
    if (with_left == pass->left.end()) continue;
    const auto place = pass->places.find({left, slot.bridge, right});
    if (place == pass->places.end()) continue;
    SlotRecount& count = pass->counts[place->second];
    if (count.table.n++ == 0) {
      const uint64_t byte = run.words[tokens_[slot.left].first_word].begin;
      count.first = {document_, passage_, run.text_offset + byte};
    }
    uint64_t& last_document = pass->last_document[place->second];
    if (last_document != documents_) ++count.table.documents;
    last_document = documents_;
  }
}

// Section 7: while any accepted slot is left, take the one whose type ranks first, of those the
// leftmost, merge it, and drop the slots that share a token with it. Going through the slots by
// rank and place, and passing over those of which a token is gone, is just that.
void Recounter::MergePass(Pass* pass) {
  std::vector<Merge> left;
  for (const Slot& slot : slots_) {
    if (slot.bridge == kNoBridge) continue;
    const auto place =
        pass->places.find({tokens_[slot.left].type, slot.bridge, tokens_[slot.right].type});
    if (place == pass->places.end() || place->second >= pass->accepted) continue;
    const uint32_t phrase = pass->counts[place->second].phrase;
    left.push_back({place->second, slot.left, slot.right, phrase});
  }
  if (left.empty()) return;
  std::sort(left.begin(), left.end(), [](const Merge& a, const Merge& b) {
    return a.rank != b.rank ? a.rank < b.rank : a.left < b.left;
  });
  std::vector<bool> gone(tokens_.size(), false);
  std::vector<Merge> merges;
  for (const Merge& slot : left) {
    SlotRecount& count = pass->counts[slot.rank];
    bool free = true;
    for (size_t i = slot.left; i <= slot.right; ++i) free = free && !gone[i];
    if (!free) {
      ++count.yielded;
      continue;
    }
    for (size_t i = slot.left; i <= slot.right; ++i) gone[i] = true;
    ++count.joined;
    ++pass->joined;
    pass->words_absorbed += slot.right - slot.left;
    Made(slot.phrase);
    merges.push_back(slot);
  }
  std::sort(merges.begin(), merges.end(),
            [](const Merge& a, const Merge& b) { return a.left < b.left; });
  JoinTokens(merges);
}

// Section 6: each ruling in its order joins every stretch of single words that are its words,
// leftmost first.
void Recounter::JoinRulings() {
  for (uint32_t ruling = 0; ruling < always_.size(); ++ruling) {
    const std::vector<uint32_t>& words = always_[ruling];
    RuledRecount& count = rulings_.ruled[ruling];
    std::vector<Merge> merges;
    for (size_t at = 0; at + words.size() <= tokens_.size();) {
      bool matches = true;
      for (size_t i = 0; matches && i < words.size(); ++i) {
        matches = tokens_[at + i].type == words[i] && !EndsRun(words[i]);
      }
      if (!matches) {
        ++at;
        continue;
      }
      merges.push_back({ruling, at, at + words.size() - 1, count.phrase});
      ++count.joined;
      ++rulings_.joined;
      rulings_.words_absorbed += words.size() - 1;
      if (ruled_last_document_[ruling] != documents_) ++count.documents;
      ruled_last_document_[ruling] = documents_;
      Made(count.phrase);
      at += words.size();
    }
    JoinTokens(merges);
  }
}

// Puts one token in the place of each stretch. `merges` are in order of place.
void Recounter::JoinTokens(const std::vector<Merge>& merges) {
  if (merges.empty()) return;
  std::vector<RecountToken> joined;
  size_t next = 0;
  for (const Merge& merge : merges) {
    while (next < merge.left) joined.push_back(tokens_[next++]);
    RecountToken token{merge.phrase, tokens_[merge.left].first_word, 0};
    while (next <= merge.right) token.words += tokens_[next++].words;
    joined.push_back(token);
  }
  while (next < tokens_.size()) joined.push_back(tokens_[next++]);
  tokens_ = std::move(joined);
}

void Recounter::Made(uint32_t type) {
  PhraseRecount& phrase = phrases_[type - kFirstPhrase];
  uint64_t& last_document = spellings_[type - kFirstPhrase].last_document;
  ++phrase.made;
  if (last_document != documents_) ++phrase.documents;
  last_document = documents_;
}

void Recounter::CountFinal(const RecountRun& run) {
  tokens_out_ += tokens_.size();
  for (const RecountToken& token : tokens_) {
    if (!is_phrase(token.type)) continue;
    ++phrases_[token.type - kFirstPhrase].occurrences;
    std::string spelling;
    for (size_t i = token.first_word; i < token.first_word + token.words; ++i) {
      const RecountRun::Word& word = run.words[i];
      if (i > token.first_word) {
        const uint64_t end = run.words[i - 1].end;
        spelling += ShownGap(std::string_view(run.text).substr(end, word.begin - end));
      }
      spelling.append(run.text, word.begin, word.end - word.begin);
    }
    ++spellings_[token.type - kFirstPhrase].counts[std::move(spelling)];
  }
}

void Recounter::Finish() {
  for (const Pass& pass : passes_) FinishPass(pass);
  for (size_t i = 0; i + 1 < results_.size(); ++i) {
    results_[i].tokens_out = results_[i + 1].tokens_in;
  }
  const uint64_t first_in = passes_.empty() ? tokens_out_ : passes_.front().tokens_in;
  if (!results_.empty()) results_.back().tokens_out = tokens_out_;
  rulings_.types_in = types_before_rulings_.size;
  rulings_.tokens_out = first_in;
  for (size_t i = 0; i < phrases_.size(); ++i) {
    // The map is in byte order, so that the first of the most frequent is the one that counts.
    uint64_t most = 0;
    phrases_[i].surface = Text(phrase_type(i));
    for (const auto& [spelling, count] : spellings_[i].counts) {
      if (count <= most) continue;
      most = count;
      phrases_[i].surface = spelling;
    }
  }
}

void Recounter::FinishPass(const Pass& pass) {
  PassRecount& result = results_.emplace_back();
  result.tokens_in = pass.tokens_in;
  result.types_in = pass.types.size;
  result.slots = pass.slots;
  result.joined = pass.joined;
  result.words_absorbed = pass.words_absorbed;
  for (size_t i = 0; i < pass.keys.size(); ++i) {
    const auto [left, bridge, right] = pass.keys[i];
    SlotRecount count = pass.counts[pass.places.at(pass.keys[i])];
    if (pass.word_margins && bridge == 0) {
      count.table.left = pass.tokens.at(left);
      count.table.right = pass.tokens.at(right);
      count.table.total = pass.tokens_in;
    } else {
      count.table.left = pass.left.at(Margin(left, bridge));
      count.table.right = pass.right.at(Margin(right, bridge));
      count.table.total = pass.with_bridge[bridge];
    }
    count.table.all = pass.word_margins ? pass.tokens_in : pass.slots;
    (i < pass.accepted ? result.accepted : result.watched).push_back(std::move(count));
  }
}

std::vector<std::string> Recounter::Forms(uint32_t type) const {
  if (!is_phrase(type)) return {words_[type].form};
  std::vector<std::string> forms;
  for (const uint32_t word : phrase(type).words) forms.push_back(words_[word].form);
  return forms;
}

std::string Recounter::Text(uint32_t type, std::string_view between) const {
  std::string text;
  for (const std::string& form : Forms(type)) {
    if (!text.empty()) text += between;
    text += form;
  }
  return text;
}

bool Recounter::IsNumber(std::string_view form) const {
  const auto found = ids_.find(form);
  return found != ids_.end() && words_[found->second].number;
}

}  // namespace phraseweld
