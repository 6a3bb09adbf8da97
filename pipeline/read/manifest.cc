#include <string>
#include <string_view>
#include <utility>

#include "base/status.h"
#include "base/strings.h"
#include "read/json_fields.h"
#include "read/run_folder.h"

namespace phraseweld {
namespace {

namespace dom = simdjson::dom;

// Calls take(fields, &entry) for each object of the array.
template <typename Entry, typename Take>
void TakeList(JsonFields& fields, std::string_view key, std::vector<Entry>* entries, Take&& take) {
  dom::array array;
  if (!fields.Take(key, &array)) return;
  for (const dom::element element : array) {
    dom::object object;
    if (element.get(object) != simdjson::SUCCESS) {
      fields.Fail(key, "an array of objects");
      return;
    }
    std::string fault;
    JsonFields entry(object, &fault);
    take(entry, &entries->emplace_back());
    if (!fault.empty()) {
      fields.Fail(key, Concat("good in its entry ", entries->size(), ": ", fault));
      return;
    }
  }
}

void TakeInput(JsonFields& fields, RunInput* input) {
  fields.Take("path", &input->path);
  fields.Take("name", &input->name);
  fields.Take("stored_bytes", &input->stored_bytes);
  fields.Take("text_bytes", &input->text_bytes);
  fields.Take("xxh3_128", &input->xxh3_128);
}

void TakeOutput(JsonFields& fields, RunOutput* output) {
  fields.Take("path", &output->path);
  fields.Take("bytes", &output->bytes);
  fields.Take("xxh3_128", &output->xxh3_128);
}

void TakeTotals(JsonFields& fields, ManifestTotals* totals) {
  fields.Take("documents", &totals->documents);
  fields.Take("words", &totals->words);
  fields.Take("word_types", &totals->word_types);
  fields.Take("passes", &totals->passes);
  fields.Take("phrases", &totals->phrases);
  fields.Take("tokens_out", &totals->tokens_out);
  fields.Take("words_in_phrases", &totals->words_in_phrases);
  fields.Take("bad_lines", &totals->bad_lines);
}

void TakeManifest(JsonFields& fields, RunManifest* manifest) {
  fields.Take("program", &manifest->program);
  fields.Take("version", &manifest->version);
  fields.Take("job", &manifest->job);
  TakeList(fields, "inputs", &manifest->inputs, TakeInput);
  TakeList(fields, "outputs", &manifest->outputs, TakeOutput);
  dom::object object;
  if (fields.Take("totals", &object)) {
    std::string fault;
    JsonFields totals(object, &fault);
    TakeTotals(totals, &manifest->totals);
    if (!fault.empty()) fields.Fail("totals", Concat("whole: ", fault));
  }
  if (fields.Has("timings") && fields.Take("timings", &object)) {
    for (const auto [name, element] : object) {
      double value = 0;
      if (element.get(value) == simdjson::SUCCESS) manifest->timings.emplace_back(name, value);
    }
  }
}

}  // namespace

absl::StatusOr<RunManifest> ReadManifest(FileSystem& files, const std::string& path) {
  PW_ASSIGN_OR_RETURN(const FileInfo info, files.Stat(path));
  if (!info.exists || info.is_directory) {
    return absl::NotFoundError(
        Concat(path, ": there is no such file, so this is no finished run folder"));
  }
  PW_ASSIGN_OR_RETURN(const std::string bytes, ReadWhole(files, path));
  dom::parser parser;
  dom::object object;
  std::string fault;
  RunManifest manifest;
  if (const auto error = parser.parse(bytes).get_object().get(object); error != simdjson::SUCCESS) {
    fault = Concat("this is no JSON object (", simdjson::error_message(error), ")");
  } else {
    JsonFields fields(object, &fault);
    TakeManifest(fields, &manifest);
  }
  if (!fault.empty()) {
    // The parser does not say where; the fields of the one object are told apart by their names.
    return absl::DataLossError(Concat(path, ": ", fault,
                                      "; the run folder is damaged, so make it anew or take it "
                                      "from a copy"));
  }
  return manifest;
}

}  // namespace phraseweld
