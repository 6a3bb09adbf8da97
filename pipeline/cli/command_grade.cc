#include "base/nearest.h"
#include "base/strings.h"
#include "cli/options.h"

namespace phraseweld {
namespace {

constexpr std::string_view kAll = "all";
constexpr auto kFirstMeasure = static_cast<size_t>(Quantity::kPmi);

absl::Status ReadMeasures(const std::string& name, std::vector<Quantity>* measures) {
  if (name.empty()) return absl::OkStatus();
  if (name == kAll) {
    for (size_t i = kFirstMeasure; i < kQuantityNames.size(); ++i) {
      measures->push_back(static_cast<Quantity>(i));
    }
    return absl::OkStatus();
  }
  const auto quantity = QuantityFromName(name);
  if (quantity.has_value() && IsMeasure(*quantity)) {
    measures->push_back(*quantity);
    return absl::OkStatus();
  }
  std::vector<std::string_view> names(kQuantityNames.begin() + kFirstMeasure, kQuantityNames.end());
  names.push_back(kAll);
  return absl::InvalidArgumentError(Concat("--measure must be one of ", Join(names, ", "),
                                           ", not '", name, "'", DidYouMean(name, names)));
}

}  // namespace

Command GradeCommand(Handler<GradeArguments> handler) {
  return {"grade", "Score a run's phrases against a list of known ones.",
          "Compares the run's inventory with a list of phrases that are known to be right, one a "
          "line. Prints precision, recall and average precision of the inventory as each measure "
          "asked for would order it.",
          "phraseweld grade runs/ferry-notes known-terms.txt --measure all",
          [handler = std::move(handler)](CLI::App& app) -> Command::Action {
            auto arguments = std::make_shared<GradeArguments>();
            auto measure = std::make_shared<std::string>();
            AddArgument(app, "RUN", arguments->run_folder, "The folder of a finished run.");
            AddArgument(app, "LIST", arguments->list_file, "The known phrases, one a line.");
            AddOption(app, "--measure", "NAME", *measure,
                      "Order by this measure, or by each in turn with 'all'; without it, by the "
                      "one that the run ranked by.");
            app.add_flag("--json", arguments->json, "Answer in JSON.");
            return [handler, arguments, measure](Console& console) -> absl::Status {
              const absl::Status status = ReadMeasures(*measure, &arguments->measures);
              return status.ok() ? handler(*arguments, console) : status;
            };
          }};
}

}  // namespace phraseweld
