#include "deliver/compare_page.h"

#include <algorithm>
#include <optional>
#include <string_view>
#include <vector>

#include "absl/strings/str_format.h"
#include "base/strings.h"
#include "base/units.h"
#include "base/utf8.h"
#include "deliver/page_template.h"

namespace phraseweld {
namespace {

// Text that stays text, in an element or in a quoted attribute (HTML Standard, "Escaping a
// string"). Control characters, which HTML has no way to write, become U+FFFD.
std::string Escaped(std::string_view text) {
  std::string out;
  for (size_t at = 0; at < text.size();) {
    const size_t begin = at;
    const std::optional<char32_t> point = NextCodePoint(text, &at);
    if (!point || (IsControl(*point) && *point != '\t' && *point != '\n')) {
      out += "\xEF\xBF\xBD";
      continue;
    }
    switch (*point) {
      case '&':
        out += "&amp;";
        break;
      case '<':
        out += "&lt;";
        break;
      case '>':
        out += "&gt;";
        break;
      case '"':
        out += "&quot;";
        break;
      case '\'':
        out += "&#39;";
        break;
      default:
        out += text.substr(begin, at - begin);
    }
  }
  return out;
}

// The words sewn together where the phrase was made, apart where it was not. The direction of its
// letters stays inside.
std::string PhraseHtml(std::string_view phrase, bool sewn) {
  std::vector<std::string> words;
  for (const std::string_view word : Split(phrase, ' ')) {
    words.push_back(Concat("<span class=\"word\">", Escaped(word), "</span>"));
  }
  return Concat("<bdi class=\"phrase ", sewn ? "sewn" : "apart", "\">",
                Join(words, "<span class=\"stitch\"> </span>"), "</bdi>");
}

std::string Number(double value) {
  std::string digits = absl::StrFormat("%.9f", value);
  digits.erase(digits.find_last_not_of('0') + 1);
  if (digits.back() == '.') digits.pop_back();
  return digits;
}

std::string CountCell(uint64_t count) {
  return Concat("<td class=\"number\" data-value=\"", count, "\">", FormatCount(count), "</td>");
}

std::string PassCell(int pass) {
  return Concat("<td class=\"number\" data-value=\"", pass, "\"><span class=\"badge temper-",
                pass % 7, "\">", pass, "</span></td>");
}

// What a count was and became; sorts by the difference.
std::string ChangeCell(uint64_t left, uint64_t right) {
  const double difference = static_cast<double>(right) - static_cast<double>(left);
  std::string text = FormatCount(left);
  if (left != right) {
    AppendTo(&text, " → <span class=\"", right > left ? "more" : "less", "\">", FormatCount(right),
             "</span>");
  }
  return Concat("<td class=\"number\" data-value=\"", Number(difference), "\">", text, "</td>");
}

std::string ScoreCell(const std::optional<double>& left, const std::optional<double>& right) {
  if (!left || !right) return "<td class=\"number\" data-value=\"0\">–</td>";
  const double difference = *right - *left;
  return Concat("<td class=\"number\" data-value=\"", Number(difference), "\">",
                std::string(absl::StrFormat("%.2f", *left)),
                difference == 0 ? "" : std::string(absl::StrFormat(" → %.2f", *right)), "</td>");
}

std::string Title(std::string_view id, std::string_view text) {
  return Concat("<div class=\"seam-title\"><h2 id=\"", id, "\">", text, "</h2></div>\n");
}

// A table's head: titles that end in "#" are those of numbers.
std::string Head(const std::vector<std::string_view>& titles) {
  std::string head = "<thead><tr>";
  for (std::string_view title : titles) {
    const bool number = title.ends_with('#');
    if (number) title.remove_suffix(1);
    AppendTo(&head, number ? "<th scope=\"col\" class=\"number\">" : "<th scope=\"col\">", title,
             "</th>");
  }
  return head + "</tr></thead>\n";
}

std::string LeftOut(size_t all) {
  if (all <= kMostComparedRows) return "";
  return Concat("<p class=\"small\">", FormatCount(all - kMostComparedRows),
                " more are not shown here; the JSON answer of the command has all of them.</p>\n");
}

std::string SideHtml(std::string_view name, const ComparedRun& run) {
  return Concat("<div class=\"side\"><h3>", name, ": <bdi>", Escaped(run.folder),
                "</bdi></h3><p>job <bdi>", Escaped(run.job), "</bdi>, phraseweld ",
                Escaped(run.version), "</p><p>", FormatCount(run.documents), " documents, ",
                FormatCount(run.words), " words, ", FormatCount(run.words_in_phrases),
                " of them inside phrases</p><p>", FormatCount(run.phrases), " phrases in ",
                FormatCount(run.passes),
                run.passes == 1 ? " pass</p></div>\n" : " passes</p></div>\n");
}

std::string CausesHtml(const RunComparison& comparison) {
  std::string out = "<h3>Corpus</h3>\n";
  if (comparison.inputs.empty()) {
    AppendTo(&out, "<p>The same inputs, to the byte",
             comparison.input_order_differs ? ", in another order" : "", ".</p>\n");
  } else {
    AppendTo(&out, "<div class=\"wide\"><table class=\"list\">",
             Head({"input", "", "bytes on the left#", "bytes on the right#"}), "<tbody>\n");
    for (const InputDifference& input : comparison.inputs) {
      AppendTo(&out, "<tr><td><bdi>", Escaped(input.name), "</bdi></td><td>",
               kInputChangeNames[static_cast<size_t>(input.change)], "</td>",
               CountCell(input.left_bytes), CountCell(input.right_bytes), "</tr>\n");
    }
    out += "</tbody></table></div>\n";
  }
  out += "<h3>Job</h3>\n";
  if (comparison.keys.empty()) return out + "<p>Every key has the same value.</p>\n";
  AppendTo(&out, "<div class=\"wide\"><table class=\"list\">",
           Head({"key", "left", "right", "shapes the phrases"}), "<tbody>\n");
  for (const KeyDifference& key : comparison.keys) {
    AppendTo(&out, "<tr><td><code>", Escaped(key.key), "</code></td><td><bdi>",
             Escaped(key.left.value_or("–")), "</bdi></td><td><bdi>",
             Escaped(key.right.value_or("–")), "</bdi></td><td>", key.shapes_phrases ? "yes" : "no",
             "</td></tr>\n");
  }
  return out + "</tbody></table></div>\n";
}

std::string AgreementHtml(const std::vector<OrderAgreement>& agreements) {
  const auto value = [](const std::optional<double>& of) {
    return of ? std::string(absl::StrFormat("%.3f", *of)) : std::string("–");
  };
  std::string out = Concat(
      "<h3>How far the orders agree</h3>\n<p class=\"measure small\">Of the "
      "phrases that both runs have: 1 where they stand in the same order, "
      "−1 where in the opposite one.</p>\n<div class=\"wide\">"
      "<table class=\"list\">",
      Head({"ordered by", "phrases#", "Spearman’s ρ#", "Kendall’s τ-b#"}), "<tbody>\n");
  for (const OrderAgreement& agreement : agreements) {
    AppendTo(&out, "<tr><td>", Escaped(agreement.by), "</td>", CountCell(agreement.phrases),
             "<td class=\"number\">", value(agreement.spearman), "</td><td class=\"number\">",
             value(agreement.kendall), "</td></tr>\n");
  }
  return out + "</tbody></table></div>\n";
}

std::string OneSidedHtml(std::string_view name, const std::vector<OneSidedPhrase>& phrases,
                         bool sewn) {
  if (phrases.empty()) return "<p>None.</p>\n";
  std::string out = Concat(
      "<div class=\"bounded\" tabindex=\"0\" role=\"region\" "
      "aria-labelledby=\"",
      name,
      "-title\"><table class=\"list "
      "phrases-list\" data-name=\"",
      name, "\">", Head({"phrase", "occurrences#", "documents#", "pass#", "why"}), "<tbody>\n");
  for (size_t i = 0; i < std::min(phrases.size(), kMostComparedRows); ++i) {
    const OneSidedPhrase& row = phrases[i];
    AppendTo(&out, "<tr><td>", PhraseHtml(row.phrase.phrase, sewn), "</td>",
             CountCell(row.phrase.made()), CountCell(row.phrase.documents),
             PassCell(row.phrase.pass), "<td class=\"why\">", Escaped(row.why), "</td></tr>\n");
  }
  return Concat(out, "</tbody></table></div>\n", LeftOut(phrases.size()));
}

std::string KeptHtml(const std::vector<KeptPhrase>& kept) {
  if (kept.empty()) return "<p>None.</p>\n";
  std::string out = Concat(
      "<div class=\"bounded\" tabindex=\"0\" role=\"region\" aria-labelledby=\"kept-title\">"
      "<table class=\"list phrases-list\" data-name=\"kept\">",
      Head({"phrase", "occurrences#", "documents#", "pass#", "rank#", "PMI#", "NPMI#", "G²#"}),
      "<tbody>\n");
  for (size_t i = 0; i < std::min(kept.size(), kMostComparedRows); ++i) {
    const ComparedPhrase &left = kept[i].left, &right = kept[i].right;
    AppendTo(&out, "<tr><td>", PhraseHtml(left.phrase, true), "</td>",
             ChangeCell(left.made(), right.made()), ChangeCell(left.documents, right.documents),
             ChangeCell(static_cast<uint64_t>(left.pass), static_cast<uint64_t>(right.pass)),
             ChangeCell(left.rank, right.rank));
    for (const Quantity quantity : {Quantity::kPmi, Quantity::kNpmi, Quantity::kG2}) {
      out += ScoreCell(left.Score(quantity), right.Score(quantity));
    }
    out += "</tr>\n";
  }
  return Concat(out, "</tbody></table></div>\n", LeftOut(kept.size()));
}

std::string Section(std::string_view name, std::string_view title, const std::string& content) {
  const std::string id = Concat(name, "-title");
  return Concat("<section aria-labelledby=\"", id, "\">\n", Title(id, title), content,
                "</section>\n");
}

}  // namespace

std::string RenderComparePage(const RunComparison& comparison) {
  const std::string lede =
      Concat(FormatCount(comparison.gained.size()), " gained, ",
             FormatCount(comparison.lost.size()), " lost, ", FormatCount(comparison.kept.size()),
             " kept, of which ", FormatCount(comparison.kept_changed), " changed");
  std::string body = Concat(
      "<header class=\"masthead\">\n<div class=\"masthead-row\"><p class=\"maker\">Phraseweld</p>"
      "<div class=\"masthead-tools\"><button type=\"button\" id=\"theme\" hidden>Light or dark: as "
      "the system</button></div></div>\n<h1>Two runs compared</h1>\n<p class=\"lede\">",
      lede, "</p>\n</header>\n<main id=\"main\">\n");
  body += Section("causes", "What differs between the runs",
                  Concat("<div class=\"sides\">", SideHtml("Left", comparison.left),
                         SideHtml("Right", comparison.right), "</div>\n", CausesHtml(comparison)));
  body +=
      "<div id=\"phrases\" tabindex=\"-1\">\n<form class=\"filters\" role=\"search\" "
      "aria-label=\"Filter the phrases\" hidden><label class=\"grow\">Words in the phrase<input "
      "type=\"search\" id=\"filter-text\" autocomplete=\"off\" spellcheck=\"false\"></label></form>"
      "\n<p class=\"found\" id=\"found\" role=\"status\" aria-live=\"polite\"></p>\n";
  body += Section("gained", "Gained: in the right run alone",
                  OneSidedHtml("gained", comparison.gained, true));
  body +=
      Section("lost", "Lost: in the left run alone", OneSidedHtml("lost", comparison.lost, false));
  body += Section("kept", "Kept: in both",
                  Concat(comparison.kept.empty() ? "" : AgreementHtml(comparison.agreements),
                         KeptHtml(comparison.kept)));
  body += "</div>\n</main>\n";
  return Concat(kComparePageHead, body, kComparePageTail);
}

}  // namespace phraseweld
