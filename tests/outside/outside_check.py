#!/usr/bin/env python3
"""Holds phrases mined from real text against lists that people made.

Usage: outside_check.py PHRASEWELD FOLDER

PHRASEWELD is the program; FOLDER is what configs/fetch-real-text.sh laid out: two dictionaries
(GCIDE, FOLDOC), git's manuals, and lists of multi-word terms: WordNet's nouns, the compounds of
Webster's Second International (web2a), the dictionaries' own headwords, git's glossary.

For each corpus two things are printed. Recall: of the list entries that occur in the text as often
and in as many documents as the gates ask, counted here by a plain word rule, how many are in the
inventory. Precision at k: how many of the best k pairs are list entries, for the pairs of pass 1 in
the job's own order, against adjacent pairs by frequency, once all of them and once without those
that begin or end in a function word.

The check fails where a figure falls under its floor in FLOORS, which lies below what was measured,
or where the job's order is no better than adjacent pairs by frequency.
"""

import collections
import glob
import json
import os
import re
import subprocess
import sys
import tempfile

OCCURRENCES = 5
DOCUMENTS = 3
LONGEST = 6
BEST = (100, 500, 2000)

JOB = """job: outside
run_folder: "{run}"
corpus: {corpus}
words: {{function_words: english, bridge: 2}}
passes:
  - name: pairs
    rank_by: pmi_floor
    accept: {{occurrences: {occurrences}, documents: {documents}, pmi: 3.0}}
  - name: longer
    repeat: 4
    rank_by: pmi_floor
    accept: {{occurrences: {occurrences}, documents: {documents}, pmi: 3.0}}
phrases: {{longest: {longest}}}
deliver: {{corpus: none, report: false}}
"""

# The least recall of each list and the least precision at each k; the figures measured when this
# was written stand behind them. Between the dictionaries' texts and the lists there is much to
# find; in git's manuals few terms are in any list, and there frequency without function words does
# as well.
FLOORS = {
    "gcide": {
        "recall": {"WordNet": 0.92, "web2a": 0.93, "headwords": 0.93},  # 0.957, 0.964, 0.963
        "precision": {100: 0.80, 500: 0.65, 2000: 0.52},                # 0.90, 0.74, 0.61
        "beats_content_pairs": True,
    },
    "foldoc": {
        "recall": {"WordNet": 0.90, "web2a": 0.85, "headwords": 0.94},  # 0.946, 0.911, 0.975
        "precision": {100: 0.46, 500: 0.52, 2000: 0.45},                # 0.56, 0.61, 0.53
        "beats_content_pairs": True,
    },
    "git": {
        "recall": {"WordNet": 0.78, "web2a": 0.75, "glossary": 0.92},   # 0.892, 0.889, 1
        "precision": {100: 0.05, 500: 0.05},                            # 0.09, 0.068
        "beats_content_pairs": False,
    },
}

# Letters, digits and underscores, with single marks between two of them: close to UAX #29 in
# English.
WORD = re.compile(r"\w+(?:['\u2019.:\u00b7]\w+|(?<=\d)[,;]\d\w*)*")
OPEN_GAP = re.compile(r"[ \u00a0]*(?:\r?\n[ \u00a0]*)?|[-\u2010\u2011]")


def read_lines(path):
    with open(path, encoding="utf-8") as file:
        return file.read().splitlines()


class Corpus:
    """A corpus: what the job file says of it, and its documents as lists of passages."""

    def __init__(self, name, job, documents, lists):
        self.name = name
        self.job = job
        self.documents = documents
        self.lists = lists  # by name: paths


def open_corpora(folder):
    lists = {"WordNet": "lists/wordnet-nouns.txt", "web2a": "lists/web2a.txt"}

    def paths(**more):
        return {name: os.path.join(folder, path) for name, path in {**lists, **more}.items()}

    for name in ("gcide", "foldoc"):
        path = os.path.join(folder, "dictionaries", name + ".jsonl")
        entries = (json.loads(line) for line in read_lines_of_json(path))
        yield Corpus(name,
                     f'{{files: ["{path}"], layout: json_lines, fields: [title, body], id: id}}',
                     ([entry["title"], entry["body"]] for entry in entries),
                     paths(headwords=f"dictionaries/{name}-headwords.txt"))
    pattern = os.path.join(folder, "git/text/*.txt")
    texts = []
    for path in glob.glob(pattern):
        with open(path, encoding="utf-8", newline="") as file:
            texts.append([file.read()])
    yield Corpus("git", f'{{files: ["{pattern}"], layout: text}}', texts,
                 paths(glossary="git/glossary.txt"))


def read_lines_of_json(path):
    with open(path, encoding="utf-8", newline="\n") as file:
        yield from file


def runs_of(passage):
    """The words of a passage, cut into runs at every gap that is not open."""
    run = []
    end = 0
    for match in WORD.finditer(passage):
        if run and not OPEN_GAP.fullmatch(passage, end, match.start()):
            yield run
            run = []
        run.append(match.group().lower().replace("\u2019", "'"))
        end = match.end()
    if run:
        yield run


def read_entries(path, function_words):
    """The list's phrases of 2 to LONGEST words that neither begin nor end in a function word."""
    entries = set()
    for line in read_lines(path):
        runs = list(runs_of(line.strip()))
        if len(runs) == 1 and 2 <= len(runs[0]) <= LONGEST:
            if runs[0][0] not in function_words and runs[0][-1] not in function_words:
                entries.add(" ".join(runs[0]))
    return entries


def count(documents, entries):
    """Adjacent pairs, and per entry its occurrences and documents."""
    pairs = collections.Counter()
    occurrences = collections.Counter()
    in_documents = collections.Counter()
    lengths = collections.defaultdict(set)  # of the entries that begin with a pair of words
    for entry in entries:
        words = entry.split(" ")
        lengths[words[0], words[1]].add(len(words))
    for passages in documents:
        seen = set()
        for passage in passages:
            for run in runs_of(passage):
                for place, pair in enumerate(zip(run, run[1:])):
                    pairs[pair] += 1
                    for length in lengths.get(pair, ()):
                        phrase = " ".join(run[place:place + length])
                        if phrase in entries:
                            occurrences[phrase] += 1
                            seen.add(phrase)
        in_documents.update(seen)
    return pairs, occurrences, in_documents


def run_job(program, corpus, folder):
    """The pairs of pass 1 in rank order, and all phrases of the inventory."""
    run = os.path.join(folder, corpus.name)
    job = run + ".yaml"
    with open(job, "w", encoding="utf-8") as file:
        file.write(JOB.format(run=run, corpus=corpus.job, occurrences=OCCURRENCES,
                              documents=DOCUMENTS, longest=LONGEST))
    answer = subprocess.run([program, "run", job], capture_output=True, text=True, check=False)
    if answer.returncode != 0:
        sys.exit(f"{program} run ended with {answer.returncode}:\n{answer.stderr}")
    ranked = []
    for line in read_lines_of_json(os.path.join(run, "audit", "pass-01.jsonl")):
        line = json.loads(line)
        if line["kind"] == "accepted" and not line["bridge"]:
            ranked.append(line["phrase"])
    inventory = {json.loads(line)["phrase"]
                 for line in read_lines_of_json(os.path.join(run, "inventory.jsonl"))}
    return ranked, inventory


def precision(ranked, known, best):
    """The share of known phrases among the first, or None when there are not so many."""
    if len(ranked) < best:
        return None
    return sum(phrase in known for phrase in ranked[:best]) / best


def check_corpus(program, corpus, function_words, folder):
    """Prints the figures of one corpus; returns what is wrong."""
    faults = []
    lists = {name: read_entries(path, function_words) for name, path in corpus.lists.items()}
    known = set().union(*lists.values())
    pairs, occurrences, in_documents = count(corpus.documents, known)
    ranked, inventory = run_job(program, corpus, folder)
    floors = FLOORS[corpus.name]

    print(f"{corpus.name}: {len(inventory)} phrases, {len(ranked)} pairs in pass 1")
    for name, entries in lists.items():
        reached = [entry for entry in entries
                   if occurrences[entry] >= OCCURRENCES and in_documents[entry] >= DOCUMENTS]
        found = sum(entry in inventory for entry in reached)
        share = found / len(reached) if reached else 0.0
        print(f"  recall     {name:10} {found:6} of {len(reached):6}  {share:6.1%}")
        if share < floors["recall"][name]:
            faults.append(f"{corpus.name}: recall of {name} is {share:.1%}; the floor is "
                          f"{floors['recall'][name]:.0%}")

    by_frequency = sorted(pairs, key=lambda pair: (-pairs[pair], pair))
    everything = [" ".join(pair) for pair in by_frequency[:BEST[-1]]]
    content = [" ".join(pair) for pair in by_frequency if not function_words & set(pair)]
    print("  precision at       the job   pairs by frequency   without function words")
    for best in BEST:
        by_job, plain, filtered = (precision(order, known, best)
                                   for order in (ranked, everything, content))
        if by_job is None:
            continue
        print(f"  {best:12} {by_job:13.1%} {plain:20.1%} {filtered:24.1%}")
        if by_job < floors["precision"][best]:
            faults.append(f"{corpus.name}: precision at {best} is {by_job:.1%}; the floor is "
                          f"{floors['precision'][best]:.0%}")
        baseline = max(plain, filtered) if floors["beats_content_pairs"] else plain
        if by_job <= baseline:
            faults.append(f"{corpus.name}: precision at {best} is {by_job:.1%}, that of adjacent "
                          f"pairs by frequency {baseline:.1%}")
    return faults


def main():
    if len(sys.argv) != 3:
        sys.exit(__doc__)
    program, folder = os.path.abspath(sys.argv[1]), os.path.abspath(sys.argv[2])
    here = os.path.dirname(os.path.abspath(__file__))
    function_words = {line for line in read_lines(
        os.path.join(here, "../../configs/function-words/english.txt"))
        if line and not line.startswith("#")}
    faults = []
    with tempfile.TemporaryDirectory() as scratch:
        for corpus in open_corpora(folder):
            faults += check_corpus(program, corpus, function_words, scratch)
    for fault in faults:
        print("wrong: " + fault)
    sys.exit(1 if faults else 0)


if __name__ == "__main__":
    main()
