#include "run/job_options.h"

namespace phraseweld {

ReadOptions ReadOptionsOf(const Job& job, size_t block_bytes) {
  ReadOptions options;
  switch (job.corpus.layout) {
    case Layout::kText:
      options.layout = ReadLayout::kText;
      break;
    case Layout::kLines:
      options.layout = ReadLayout::kLines;
      break;
    case Layout::kParagraphs:
      options.layout = ReadLayout::kParagraphs;
      break;
    case Layout::kJsonLines:
      options.layout = ReadLayout::kJsonLines;
      break;
  }
  options.fields = job.corpus.fields;
  options.id = job.corpus.id;
  options.keep_bad_lines = job.corpus.bad_lines == BadLines::kKeep;
  options.block_bytes = block_bytes;
  options.may_cut_before = StartsWord;
  return options;
}

WordOptions WordOptionsOf(const Job& job) {
  WordOptions options;
  switch (job.words.fold) {
    case Fold::kNone:
      options.fold = FormFold::kNone;
      break;
    case Fold::kCase:
      options.fold = FormFold::kCase;
      break;
    case Fold::kCompatibilityCase:
      options.fold = FormFold::kCompatibilityCase;
      break;
  }
  options.strip_accents = job.words.strip_accents;
  options.join_hyphens = job.words.hyphens == Hyphens::kJoin;
  return options;
}

}  // namespace phraseweld
