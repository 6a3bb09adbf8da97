#include "run/block_finder.h"

#include <algorithm>

#include "base/status.h"

namespace phraseweld {
namespace {

// Counts a match; true where its text is wanted too.
bool CountMatch(BlockFindings::Count* count, uint32_t document, bool broken, size_t contexts) {
  if (broken) {
    ++count->across_breaks;
  } else {
    ++count->occurrences;
    if (count->first_document == WordTree::kNone) count->first_document = document;
    count->documents += count->last_document != document ? 1 : 0;
    count->last_document = document;
  }
  return count->contexts[broken ? 1 : 0]++ < contexts;
}

}  // namespace

Wanted::Wanted(const Job& job, const std::vector<std::vector<std::string>>& phrases,
               const FindOptions& options, Vocabulary* vocabulary)
    : contexts_(options.contexts),
      keeps_runs_(options.keep_all || !options.keep.empty()),
      keeps_all_runs_(options.keep_all),
      filter_(job.words) {
  for (size_t i = 0; i < phrases.size(); ++i) {
    Add(phrases[i], {static_cast<uint32_t>(i), false}, vocabulary);
    lengths_.push_back(static_cast<uint32_t>(phrases[i].size()));
    longest_ = std::max(longest_, phrases[i].size());
  }
  for (const auto& forms : options.keep) Add(forms, {WordTree::kNone, true}, vocabulary);
  filters_ = !options.keep_all && filter_.pays();
}

void Wanted::Add(const std::vector<std::string>& forms, Sequence sequence, Vocabulary* vocabulary) {
  const auto [place, is_new] =
      number_of_.try_emplace(forms, static_cast<uint32_t>(sequences_.size()));
  if (is_new) {
    std::vector<uint32_t> words;
    for (const std::string& form : forms) {
      words.push_back(vocabulary->Intern(form, kNoPlace, false));
    }
    tree_.Add(words, place->second);
    filter_.Add(forms);
    sequences_.emplace_back();
  }
  sequences_[place->second].push_back(sequence);
}

absl::Status BlockFinder::Find(Block* block_to_fill, BlockFindings* found) {
  Block& block = *block_to_fill;
  // The encoder remembers words, on the understanding that it walks forward.
  if (encoder_ == nullptr || block.index < next_index_) {
    encoder_ = std::make_unique<Encoder>(words_, vocabulary_);
  }
  next_index_ = block.index + 1;
  PW_RETURN_IF_ERROR(parser_.Parse(&block));
  *found = BlockFindings{};
  uint64_t place = block.index << 32;
  for (size_t d = 0; d < block.documents.size(); ++d) {
    const size_t end =
        d + 1 < block.documents.size() ? block.documents[d + 1].first_piece : block.pieces.size();
    for (size_t p = block.documents[d].first_piece; p < end; ++p) {
      const TextPiece& piece = block.pieces[p];
      // Only whole passages: what reaches over a cut is looked for where the pieces are joined.
      if (wanted_.filters() && piece.begins_passage && piece.ends_passage &&
          !wanted_.filter().MayHold(piece.text, &lower_)) {
        continue;
      }
      entries_.clear();
      encoder_->Encode(piece.text, !piece.ends_passage, place, &entries_);
      place += entries_.size();
      FindIn(piece, static_cast<uint32_t>(d), found);
      if (wanted_.keeps_runs()) {
        KeepRuns(piece, static_cast<uint32_t>(d), p == 0, p + 1 == block.pieces.size(), found);
      }
    }
  }
  return absl::OkStatus();
}

void BlockFinder::FindIn(const TextPiece& piece, uint32_t document, BlockFindings* found) {
  bool is_split = false;
  const auto spans = [&]() -> const std::vector<WordSpan>& {
    if (!is_split) splitter_.Split(piece.text, &spans_);
    is_split = true;
    return spans_;
  };
  kept_at_.clear();
  wanted_.tree().Find(
      entries_, [&](uint32_t sequence, size_t at, uint32_t token, uint32_t break_after) {
        const bool broken = break_after != WordTree::kNone;
        for (const Wanted::Sequence& wanted : wanted_.sequences(sequence)) {
          if (wanted.keep && !broken) kept_at_.push_back(at);
          if (wanted.phrase == WordTree::kNone) continue;
          const bool text =
              CountMatch(&found->counts[wanted.phrase], document, broken, wanted_.contexts()) &&
              !has_its_contexts_(wanted.phrase, broken);
          if (!text && !broken) continue;
          const std::vector<WordSpan>& words = spans();
          if (broken) {
            const uint32_t from = words[break_after].end, to = words[break_after + 1].begin;
            ++found->breaks[{wanted.phrase, BreakName(piece.text.substr(from, to - from))}];
          }
          if (!text) continue;
          const uint32_t last = token + wanted_.words_of(wanted.phrase) - 1;
          RawContext raw;
          raw.phrase = wanted.phrase;
          raw.broken = broken;
          raw.document = document;
          raw.field = piece.field;
          const size_t begin = words[token].begin, end = words[last].end;
          const size_t from = begin > kRawContextBytes ? begin - kRawContextBytes : 0;
          raw.reaches_back = from == 0 && !piece.begins_passage;
          raw.reaches_forward = piece.text.size() - end < kRawContextBytes && !piece.ends_passage;
          raw.context.byte = piece.text_offset + begin;
          raw.context.before = piece.text.substr(from, begin - from);
          raw.context.match = piece.text.substr(begin, end - begin);
          raw.context.after = piece.text.substr(end, kRawContextBytes);
          found->contexts.push_back(std::move(raw));
        }
      });
}

void BlockFinder::KeepRuns(const TextPiece& piece, uint32_t document, bool first, bool last,
                           BlockFindings* found) {
  const std::vector<Entry>& entries = entries_;
  size_t begin = 0, end = entries.size();
  if (first && !piece.begins_passage) {
    while (begin < end && !IsMark(entries[begin])) ++begin;
    found->head.assign(entries.begin(), entries.begin() + static_cast<ptrdiff_t>(begin));
    found->one_run = begin == end && !piece.ends_passage;
  }
  if (last && !piece.ends_passage) {
    while (end > begin && !IsMark(entries[end - 1])) --end;
    found->tail.assign(entries.begin() + static_cast<ptrdiff_t>(end), entries.end());
  }
  size_t next_hit = 0;
  for (size_t at = begin; at < end;) {
    if (!wanted_.keeps_all_runs()) {
      while (next_hit < kept_at_.size() && kept_at_[next_hit] < at) ++next_hit;
      if (next_hit == kept_at_.size() || kept_at_[next_hit] >= end) break;
      const size_t hit = kept_at_[next_hit];
      for (at = hit; at > begin && !IsMark(entries[at - 1]);) --at;
    }
    const size_t run = at;
    while (at < end && !IsMark(entries[at])) ++at;
    if (run < at) {
      found->runs.insert(found->runs.end(), entries.begin() + static_cast<ptrdiff_t>(run),
                         entries.begin() + static_cast<ptrdiff_t>(at));
      found->run_ends.emplace_back(document, found->runs.size());
    }
    ++at;
  }
}

}  // namespace phraseweld
