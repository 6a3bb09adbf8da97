#include "agreement/random_job.h"

#include <algorithm>

#include "absl/strings/str_cat.h"

namespace phraseweld {
namespace {

// Words that differ in what matters: plain, function words, numbers, letters that fold, words that
// end up as one form, dictionary scripts, a word whose form is empty or holds spaces.
const std::vector<std::string> kWords = {
    "a",   "b",  "c",      "d",       "of",    "the",        "A",      "B",       "1",
    "22",  "x9", "é",      "E\u0301", "don't", "don\u2019t", "straße", "STRASSE", "漢字",
    "ไทย", "ﷺ",  "\u115F", "ｆ",      "a_b",   "3.14",       "और",     "q",       "of"};

}  // namespace

const std::vector<std::string>& AgreementWords() { return kWords; }

std::vector<Gate> RandomJobs::Gates() {
  std::vector<Gate> gates;
  if (Chance(85)) gates.push_back({Quantity::kOccurrences, static_cast<double>(1 + Below(4))});
  if (Chance(40)) gates.push_back({Quantity::kDocuments, static_cast<double>(1 + Below(3))});
  for (int i = static_cast<int>(Quantity::kPmi); i < kQuantities; ++i) {
    if (!Chance(8)) continue;
    gates.push_back({static_cast<Quantity>(i), (static_cast<double>(Below(40)) - 10) / 8});
  }
  return gates;
}

Job RandomJobs::NextJob() {
  Job job;
  job.job = "agreement";
  job.corpus.layout = static_cast<Layout>(Below(4));
  job.corpus.fields = {"title", "body"};
  if (Chance(50)) job.corpus.id = "id";
  job.corpus.bad_lines = Chance(50) ? BadLines::kKeep : BadLines::kStop;
  job.words.fold = static_cast<Fold>(Below(3));
  job.words.strip_accents = Chance(30);
  job.words.hyphens = Chance(70) ? Hyphens::kJoin : Hyphens::kSeparate;
  job.words.numbers = static_cast<Numbers>(Below(3));
  if (Chance(60)) {
    job.words.function_words = "list";
    job.words.function_word_list = {"of", "the"};
    if (Chance(30)) job.words.function_word_list.push_back("1");
  }
  job.words.bridge = static_cast<int>(Below(4));
  job.passes.clear();
  for (uint64_t i = 0, passes = 1 + Below(3); i < passes; ++i) {
    PassOptions pass;
    pass.name = absl::StrCat("p", i);
    pass.repeat = 1 + static_cast<int>(Below(3));
    pass.rank_by = static_cast<Quantity>(
        Chance(50) ? static_cast<uint64_t>(Quantity::kPmi)
                   : static_cast<uint64_t>(Quantity::kPmi) +
                         Below(kQuantities - static_cast<uint64_t>(Quantity::kPmi)));
    pass.margins = Chance(30) ? Margins::kWords : Margins::kSlots;
    pass.accept = Gates();
    if (Chance(30)) pass.take = 1 + Below(4);
    job.passes.push_back(pass);
  }
  job.phrases.longest = 2 + static_cast<int>(Below(6));
  if (Chance(30)) {
    // Each phrase one ruling, so that none contradicts another.
    std::vector<std::string> seen;
    for (int i = 0; i < 3; ++i) {
      Ruling ruling;
      ruling.always = Chance(60);
      ruling.phrase = absl::StrCat(std::string(1, static_cast<char>('a' + Below(3))), " ",
                                   Pick<std::string>({"b", "of", "c", "the a", "d"}));
      if (Chance(50)) ruling.reason = "because \"so\"";
      ruling.file = "rulings.yaml";
      ruling.line = i + 1;
      if (std::find(seen.begin(), seen.end(), ruling.phrase) != seen.end()) continue;
      seen.push_back(ruling.phrase);
      job.phrases.ruling_list.push_back(ruling);
    }
  }
  job.deliver.corpus = static_cast<CorpusForm>(Below(3));
  job.deliver.joiner = Pick<std::string>({"_", "\"", "##", "\u00B7"});
  job.deliver.spans = Chance(50);
  job.deliver.report = false;
  alphabet_ = Chance(60) ? 6 : static_cast<int>(kWords.size());
  hostile_ = Chance(25);
  return job;
}

std::string RandomJobs::Text(int words, bool line_breaks) {
  static const std::vector<std::string> kGaps = {
      "  ", "-", "\u2010", ", ", ".", "\t", "\u00A0", "", " \u00A0", "--", "; ", "\u3000", " - "};
  static const std::vector<std::string> kBreaks = {"\n", "\r\n", "\n\n", " \n ", "\u2028"};
  static const std::vector<std::string> kHostile = {
      std::string(1, '\0'), "\xFF", "\xC3", "_", "\xEF\xBB\xBF", "\x7F", "\xF0\x9F\x98\x80"};
  std::string text;
  for (int i = 0; i < words; ++i) {
    text += kWords[Below(static_cast<uint64_t>(alphabet_))];
    if (Chance(70)) {
      text += ' ';
    } else if (line_breaks && Chance(30)) {
      text += Pick(kBreaks);
    } else if (hostile_ && Chance(30)) {
      text += Pick(kHostile);
    } else {
      text += Pick(kGaps);
    }
  }
  return text;
}

std::string RandomJobs::JsonString(const std::string& text) {
  std::string out = "\"";
  for (char c : text) {
    const auto byte = static_cast<unsigned char>(c);
    if (c == '"' || c == '\\') {
      out += '\\';
      out += c;
    } else if (byte < 0x20 || (byte < 0x80 && Chance(5))) {
      static constexpr char kDigits[] = "0123456789abcdef";
      out += "\\u00";
      out += kDigits[byte >> 4];
      out += kDigits[byte & 15];
    } else {
      out += c;
    }
  }
  return out + '"';
}

std::string RandomJobs::JsonDocument(const Job& job, int number) {
  std::string out = "{";
  if (Chance(70)) absl::StrAppend(&out, "\"id\": ", Chance(50) ? "\"n\\u00e9 " : "", number);
  if (out.find("n\\u00e9") != std::string::npos) out += "\"";
  const auto comma = [&] {
    if (out.size() > 1) out += ", ";
  };
  const bool was_hostile = hostile_;
  // The fields stand in any order, and not in that of the job alone.
  std::vector<std::string> fields = job.corpus.fields;
  if (Chance(40)) std::reverse(fields.begin(), fields.end());
  for (const std::string& field : fields) {
    if (Chance(15)) continue;
    comma();
    absl::StrAppend(&out, "\"", field, "\" :");
    // Bytes that are no UTF-8 would make the line bad, which is a case of its own.
    hostile_ = was_hostile && Chance(10);
    if (Chance(8)) {
      out += "[1, {\"body\": \"a b\"}]";
    } else {
      out += JsonString(Text(static_cast<int>(Below(25)), true));
    }
  }
  hostile_ = was_hostile;
  if (Chance(20)) {
    comma();
    out += "\"other\": null";
  }
  return out + "}";
}

std::vector<RefInput> RandomJobs::NextInputs(const Job& job) {
  std::vector<RefInput> inputs;
  const uint64_t files = 1 + Below(3);
  for (uint64_t i = 0; i < files; ++i) {
    RefInput input;
    input.name = absl::StrCat("in", i, ".txt");
    if (Chance(10)) input.bytes = "\xEF\xBB\xBF";
    const int documents = static_cast<int>(Below(12));
    for (int d = 0; d < documents; ++d) {
      const int words = static_cast<int>(Below(30));
      switch (job.corpus.layout) {
        case Layout::kText:
          input.bytes += Text(words, true);
          break;
        case Layout::kLines:
          input.bytes += Text(words, false) + (Chance(90) ? "\n" : "\r\n");
          break;
        case Layout::kParagraphs:
          input.bytes += Text(words, true) + (Chance(80) ? "\n\n" : "\n \r\n\n");
          break;
        case Layout::kJsonLines:
          input.bytes += JsonDocument(job, static_cast<int>(inputs.size()) * 100 + d);
          if (job.corpus.bad_lines == BadLines::kKeep && Chance(10)) input.bytes += "\nno object";
          if (Chance(10)) input.bytes += "\n  ";
          input.bytes += "\n";
          break;
      }
    }
    if (!input.bytes.empty() && Chance(30) && input.bytes.back() == '\n') input.bytes.pop_back();
    inputs.push_back(std::move(input));
  }
  return inputs;
}

}  // namespace phraseweld
