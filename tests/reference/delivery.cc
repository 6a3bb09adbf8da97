#include "reference/delivery.h"

#include <algorithm>

#include "reference/json_writer.h"
#include "reference/words.h"

namespace phraseweld::reference {
namespace {

// A gap inside a merged token, as offsets in the file.
struct ReplacedGap {
  size_t begin;
  size_t end;
};

}  // namespace

std::string SourceWithJoiners(const Job& job, const RefInput& file, size_t input,
                              const std::vector<Document>& documents) {
  std::vector<ReplacedGap> gaps;
  for (const Document& document : documents) {
    if (document.input != input) continue;
    for (const Passage& passage : document.passages) {
      for (const Token& token : passage.tokens) {
        for (size_t word = token.first_word; word < token.last_word; ++word) {
          gaps.push_back({passage.place[passage.words[word].end],
                          passage.place[passage.words[word + 1].begin]});
        }
      }
    }
  }
  // The fields of the job may stand in another order in a line.
  std::sort(gaps.begin(), gaps.end(),
            [](const ReplacedGap& a, const ReplacedGap& b) { return a.begin < b.begin; });

  const bool json = job.corpus.layout == Layout::kJsonLines;
  const std::string joiner = json ? Escape(job.deliver.joiner) : job.deliver.joiner;
  std::string rewritten;
  size_t next = 0;
  for (const ReplacedGap& gap : gaps) {
    rewritten += file.bytes.substr(next, gap.begin - next);
    rewritten += joiner;
    next = gap.end;
  }
  rewritten += file.bytes.substr(next);
  return rewritten;
}

std::string WordsOfInput(const Job& job, size_t input, const std::vector<Document>& documents) {
  std::string lines;
  for (const Document& document : documents) {
    if (document.input != input) continue;
    std::string line;
    for (const Passage& passage : document.passages) {
      for (const Token& token : passage.tokens) {
        if (!line.empty()) line += " ";
        for (size_t i = 0; i < token.forms.size(); ++i) {
          if (i > 0) line += job.deliver.joiner;
          line += token.forms[i];
        }
      }
    }
    lines += line + "\n";
  }
  return lines;
}

std::string Spans(const std::vector<Document>& documents) {
  std::string lines;
  for (const Document& document : documents) {
    for (const Passage& passage : document.passages) {
      std::string spans;
      for (const Token& token : passage.tokens) {
        if (token.parts.empty()) continue;
        if (!spans.empty()) spans += ",";
        spans += "[";
        spans += std::to_string(passage.words[token.first_word].begin) + ",";
        spans += std::to_string(passage.words[token.last_word].end) + ",\"";
        spans += Escape(Text(token.forms)) + "\"]";
      }
      JsonObject line;
      line.Text("document", document.name);
      line.Text("passage", passage.name);
      line.Json("spans", std::string("[").append(spans).append("]"));
      lines += line.Finish() + "\n";
    }
  }
  return lines;
}

}  // namespace phraseweld::reference
