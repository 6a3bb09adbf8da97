#include "reference/lists.h"

#include <algorithm>
#include <stdexcept>

#include "reference/words.h"

namespace phraseweld::reference {
namespace {

// Section 6: "The text of a ruling goes through section 2 like any text."
Forms FormsOf(const std::string& text, const Job::Words& options) {
  Forms forms;
  for (const Word& word : FindWords(text, options)) forms.push_back(word.form);
  return forms;
}

// Section 6: "longer rulings first (then byte order)".
bool ComesFirst(const AlwaysRuling& a, const AlwaysRuling& b) {
  if (a.forms.size() != b.forms.size()) return a.forms.size() > b.forms.size();
  if (Text(a.forms) != Text(b.forms)) return Text(a.forms) < Text(b.forms);
  return a.forms < b.forms;
}

}  // namespace

Lists MakeLists(const Job& job, const std::vector<Document>& documents) {
  Lists lists;

  for (const std::string& entry : job.words.function_word_list) {
    const Forms forms = FormsOf(entry, job.words);
    if (forms.size() != 1) {
      throw std::runtime_error("the function word \"" + entry + "\" is not exactly one word");
    }
    lists.function_words.insert(forms[0]);
  }

  // Section 2: "A form is a number when the first word of the corpus with that form has an ICU
  // rule status in the NUMBER range."
  std::set<std::string> seen;
  for (const Document& document : documents) {
    for (const Passage& passage : document.passages) {
      for (const Word& word : passage.words) {
        const bool first = seen.insert(word.form).second;
        if (first && IsNumberStatus(word.rule_status)) lists.numbers.insert(word.form);
      }
    }
  }

  std::set<Forms> ruled;
  for (const Ruling& ruling : job.phrases.ruling_list) {
    const Forms forms = FormsOf(ruling.phrase, job.words);
    if (!ruling.always) {
      lists.never.insert(forms);
    } else if (ruled.insert(forms).second) {
      lists.always.push_back({forms, ruling.reason});
    }
  }
  std::sort(lists.always.begin(), lists.always.end(), ComesFirst);
  return lists;
}

bool IsFunctionWord(const Token& token, const Lists& lists) {
  return token.forms.size() == 1 && lists.function_words.contains(token.forms[0]);
}

bool IsSingleNumber(const Forms& type, const Lists& lists) {
  return type.size() == 1 && lists.numbers.contains(type[0]);
}

}  // namespace phraseweld::reference
