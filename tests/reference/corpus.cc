#include "reference/corpus.h"

#include <optional>
#include <stdexcept>
#include <utility>

#include "reference/json_reader.h"
#include "reference/utf8.h"

namespace phraseweld::reference {
namespace {

struct Line {
  size_t begin;  // byte offsets in the file
  size_t end;    // before the LF
};

std::vector<Line> SplitLines(const std::string& bytes) {
  std::vector<Line> lines;
  size_t begin = 0;
  while (begin < bytes.size()) {
    size_t end = bytes.find('\n', begin);
    if (end == std::string::npos) end = bytes.size();
    lines.push_back({begin, end});
    begin = end + 1;
  }
  return lines;
}

bool IsBlank(std::string_view line) {
  for (const char c : line) {
    if (c != ' ' && c != '\t' && c != '\r') return false;
  }
  return true;
}

// A document that is a stretch of the file and one passage.
Document PlainDocument(size_t input, const std::string& bytes, size_t begin, size_t end) {
  Passage passage;
  passage.text = bytes.substr(begin, end - begin);
  for (size_t i = begin; i <= end; ++i) passage.place.push_back(i);
  Document document;
  document.input = input;
  document.passages.push_back(std::move(passage));
  return document;
}

const JsonMember* FirstWithKey(const std::vector<JsonMember>& members, const std::string& key) {
  for (const JsonMember& member : members) {
    if (member.key == key) return &member;
  }
  return nullptr;
}

// Section 1: "each named field that is present and a string is one passage".
Document JsonDocument(const Job& job, size_t input, size_t line_begin,
                      const std::vector<JsonMember>& members) {
  Document document;
  document.input = input;
  for (const std::string& field : job.corpus.fields) {
    const JsonMember* member = FirstWithKey(members, field);
    if (member == nullptr || member->kind != JsonKind::kString) continue;
    Passage passage;
    passage.name = field;
    passage.text = member->string.text;
    for (const size_t place : member->string.place) passage.place.push_back(line_begin + place);
    document.passages.push_back(std::move(passage));
  }
  return document;
}

// The document's name where the line gives it one.
std::optional<std::string> NameInLine(const Job& job, const std::vector<JsonMember>& members) {
  if (job.corpus.id.empty()) return std::nullopt;
  const JsonMember* id = FirstWithKey(members, job.corpus.id);
  if (id == nullptr) return std::nullopt;
  if (id->kind == JsonKind::kString) return id->string.text;
  if (id->kind == JsonKind::kNumber || id->kind == JsonKind::kTrueOrFalse) return id->raw;
  return std::nullopt;
}

// Takes the documents of one input after the other in.
class Collector {
 public:
  Collector(const Job& job, std::vector<Document>& documents) : job_(job), documents_(documents) {}

  void Take(size_t input, const RefInput& file) {
    switch (job_.corpus.layout) {
      case Layout::kText:
        Add(PlainDocument(input, file.bytes, 0, file.bytes.size()));
        break;
      case Layout::kLines:
        TakeLines(input, file);
        break;
      case Layout::kParagraphs:
        TakeParagraphs(input, file);
        break;
      case Layout::kJsonLines:
        TakeJsonLines(input, file);
        break;
    }
  }

 private:
  // Without a name of its own a document is named by its ordinal in the corpus.
  void Add(Document document, const std::optional<std::string>& name = std::nullopt) {
    document.name = name.value_or(std::to_string(documents_.size() + 1));
    documents_.push_back(std::move(document));
  }

  void TakeLines(size_t input, const RefInput& file) {
    for (const Line& line : SplitLines(file.bytes)) {
      if (IsBlank(std::string_view(file.bytes).substr(line.begin, line.end - line.begin))) continue;
      Add(PlainDocument(input, file.bytes, line.begin, line.end));
    }
  }

  void TakeParagraphs(size_t input, const RefInput& file) {
    bool inside = false;
    Line paragraph{0, 0};
    for (const Line& line : SplitLines(file.bytes)) {
      if (IsBlank(std::string_view(file.bytes).substr(line.begin, line.end - line.begin))) {
        if (inside) Add(PlainDocument(input, file.bytes, paragraph.begin, paragraph.end));
        inside = false;
        continue;
      }
      if (!inside) paragraph.begin = line.begin;
      paragraph.end = line.end;
      inside = true;
    }
    if (inside) Add(PlainDocument(input, file.bytes, paragraph.begin, paragraph.end));
  }

  void TakeJsonLines(size_t input, const RefInput& file) {
    size_t number = 0;
    for (Line line : SplitLines(file.bytes)) {
      ++number;
      if (line.begin == 0 && HasByteOrderMark(file.bytes)) line.begin = 3;
      const std::string text = file.bytes.substr(line.begin, line.end - line.begin);
      if (IsBlank(text)) continue;
      const auto members = ReadJsonObject(text);
      if (!members.has_value()) {
        if (job_.corpus.bad_lines == BadLines::kKeep) continue;
        throw std::runtime_error(file.name + ":" + std::to_string(number) + ": byte offset " +
                                 std::to_string(line.begin) + ": the line is not a JSON object");
      }
      Document document = JsonDocument(job_, input, line.begin, *members);
      Add(std::move(document), NameInLine(job_, *members));
    }
  }

  const Job& job_;
  std::vector<Document>& documents_;
};

// Section 3: "At the start every word is a token; its type is its form."
void FindTokens(const Job::Words& options, Passage& passage) {
  passage.words = FindWords(passage.text, options);
  for (size_t i = 0; i < passage.words.size(); ++i) {
    const Word& word = passage.words[i];
    bool break_before = false;
    if (i > 0) {
      const size_t gap_begin = passage.words[i - 1].end;
      const auto gap = std::string_view(passage.text).substr(gap_begin, word.begin - gap_begin);
      break_before = !IsOpenGap(gap, options.hyphens);
    }
    Token token;
    token.forms = {word.form};
    token.first_word = i;
    token.last_word = i;
    token.break_before = break_before;
    passage.tokens.push_back(std::move(token));
  }
}

}  // namespace

std::vector<Document> ReadCorpus(const Job& job, const std::vector<RefInput>& inputs) {
  std::vector<Document> documents;
  Collector collector(job, documents);
  for (size_t i = 0; i < inputs.size(); ++i) collector.Take(i, inputs[i]);
  for (Document& document : documents) {
    for (Passage& passage : document.passages) FindTokens(job.words, passage);
  }
  return documents;
}

std::string Text(const Forms& forms) {
  std::string text;
  for (size_t i = 0; i < forms.size(); ++i) {
    if (i > 0) text += " ";
    text += forms[i];
  }
  return text;
}

}  // namespace phraseweld::reference
