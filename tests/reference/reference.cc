#include "reference/reference.h"

#include "reference/audit.h"
#include "reference/corpus.h"
#include "reference/delivery.h"
#include "reference/inventory.h"
#include "reference/lists.h"
#include "reference/passes.h"

namespace phraseweld {

std::map<std::string, std::string> ReferenceRun(const Job& job,
                                                const std::vector<RefInput>& inputs) {
  using namespace reference;  // NOLINT: everything below is of it
  std::map<std::string, std::string> files;

  // Sections 1 to 3.
  std::vector<Document> documents = ReadCorpus(job, inputs);
  const Lists lists = MakeLists(job, documents);

  // Sections 4 to 8. There is a pass 0 only where something is ruled always.
  if (!lists.always.empty()) {
    files[AuditPath(0)] = AuditOfRulings(JoinRulings(job, lists, documents));
  }
  std::vector<PassRecord> passes;
  for (const PassOptions& options : job.passes) {
    // "repeat: k does the pass up to k times and stops at the first time with nothing accepted".
    for (int time = 0; time < options.repeat; ++time) {
      const int number = static_cast<int>(passes.size()) + 1;
      passes.push_back(CarryOutPass(job, options, number, lists, documents));
      files[AuditPath(number)] = AuditOfPass(passes.back());
      if (passes.back().accepted.empty()) break;
    }
  }

  // Section 9.
  const InventoryFiles inventory = MakeInventory(documents, lists, passes);
  files["inventory.jsonl"] = inventory.jsonl;
  files["inventory.tsv"] = inventory.tsv;

  // Section 10.
  for (size_t i = 0; i < inputs.size(); ++i) {
    if (job.deliver.corpus == CorpusForm::kSource) {
      files["corpus/" + inputs[i].name] = SourceWithJoiners(job, inputs[i], i, documents);
    } else if (job.deliver.corpus == CorpusForm::kWords) {
      files["corpus/" + inputs[i].name] = WordsOfInput(job, i, documents);
    }
  }
  if (job.deliver.spans) files["spans.jsonl"] = Spans(documents);
  return files;
}

}  // namespace phraseweld
