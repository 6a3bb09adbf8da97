#!/usr/bin/env python3
"""Holds a finished run on made text against the list of what was planted in it.

Usage: check_planted.py RUN PLANTED

RUN is a run folder whose job read one file of corpus_maker, with `function_words: english`,
`bridge` of 2 or more and a `longest` of 5 or more; PLANTED is the list that corpus_maker wrote.
Demanded are:

  words      the first pass begins with as many tokens as words were made;
  pairs      each planted phrase of two words that pass 1 accepted has its exact n and documents;
  made       no phrase was made more often than it was planted, and one that was made less often
             lost the rest to overlapping phrases: its derivations' `yielded`, and what merges with
             a neighbour took from its ends, add up to no less than what is missing;
  recall     of the phrases planted as often as the strictest gates ask, at least 99 % were made.

The exit status is 1 when one of these fails.
"""

import collections
import json
import os
import sys

LEAST_RECALL = 0.99  # a rare phrase may lose a part to a chance neighbour that ranks higher


def read_lines(path):
    with open(path, encoding="utf-8") as file:
        for line in file:
            yield json.loads(line)


class Audit:
    """What the passes' logs say of planted phrases."""

    def __init__(self, folder, planted):
        self.words = 0
        self.gates = collections.Counter()  # the strictest of any pass
        self.pairs = {}                     # phrase: (n, documents) in pass 1
        self.yielded = collections.Counter()
        self.taken = collections.Counter()  # ends that merged with a neighbour
        self.heads, self.tails = collections.defaultdict(list), collections.defaultdict(list)
        for phrase in planted:
            words = phrase.split(" ")
            for size in range(1, len(words)):
                self.heads[" ".join(words[:size])].append(phrase)
                self.tails[" ".join(words[-size:])].append(phrase)
        for name in sorted(os.listdir(folder)):
            if name != "pass-00.jsonl":
                self.read(os.path.join(folder, name), planted)

    def read(self, path, planted):
        for line in read_lines(path):
            if line["kind"] == "pass":
                first = line["pass"] == 1
                if first:
                    self.words = line["tokens_in"]
                for gate in ("occurrences", "documents"):
                    self.gates[gate] = max(self.gates[gate], line["accept"].get(gate, 1))
            elif line["kind"] == "accepted":
                self.count_taken(line)
                if line["phrase"] not in planted:
                    continue
                if first and planted[line["phrase"]]["words"] == 2:
                    self.pairs[line["phrase"]] = (line["n"], line["documents"])
                self.yielded[line["phrase"]] += line["yielded"]

    def count_taken(self, line):
        for side, ends in ((line["right"], self.heads), (line["left"], self.tails)):
            for phrase in ends.get(side, ()):
                if f" {line['phrase']} " not in f" {phrase} ":
                    self.taken[phrase] += line["joined"]


def check(run, planted_path):
    """Prints what was found; returns the faults."""
    lines = read_lines(planted_path)
    totals = next(lines)
    planted = {line["phrase"]: line for line in lines}
    audit = Audit(os.path.join(run, "audit"), planted)
    made = {line["phrase"]: line for line in read_lines(os.path.join(run, "inventory.jsonl"))
            if line["phrase"] in planted}
    faults = []

    if audit.words != totals["words"]:
        faults.append(f"pass 1 begins with {audit.words} tokens; {totals['words']} words were made")
    print(f"words      {audit.words} of {totals['words']}")

    wrong = [(phrase, counted) for phrase, counted in audit.pairs.items()
             if counted != (planted[phrase]["times"], planted[phrase]["documents"])]
    for phrase, (slots, documents) in wrong:
        faults.append(f"\"{phrase}\" was planted {planted[phrase]['times']} times in "
                      f"{planted[phrase]['documents']} documents; "
                      f"pass 1 counted {slots} in {documents}")
    print(f"pairs      {len(audit.pairs) - len(wrong)} of {len(audit.pairs)} counted exactly")

    exact = 0
    for phrase, line in made.items():
        times = line["occurrences"] + line["inside_longer"]
        want = planted[phrase]
        if times == want["times"] and line["documents"] == want["documents"]:
            exact += 1
        elif times > want["times"] or (times + audit.yielded[phrase] + audit.taken[phrase]
                                          < want["times"]):
            faults.append(f"\"{phrase}\" was planted {want['times']} times in {want['documents']} "
                          f"documents; made {times} times in {line['documents']}, yielded "
                          f"{audit.yielded[phrase]} times, lost ends {audit.taken[phrase]} times")
    print(f"made       {exact} of {len(made)} exactly as often as planted")

    for kind in ("plain", "shared", "bridged"):
        asked = [phrase for phrase, line in planted.items() if line["kind"] == kind
                 and line["times"] >= audit.gates["occurrences"]
                 and line["documents"] >= audit.gates["documents"]]
        found = sum(phrase in made for phrase in asked)
        print(f"recall     {found} of {len(asked)} {kind} phrases that reach the gates")
        if found < LEAST_RECALL * len(asked):
            faults.append(f"of {len(asked)} {kind} phrases that reach the gates {found} were made: "
                          + ", ".join(f'"{p}"' for p in asked if p not in made)[:400])
    if not audit.pairs:
        faults.append("no planted phrase of two words was accepted in pass 1: nothing was checked")
    return faults


def main():
    if len(sys.argv) != 3:
        sys.exit(__doc__)
    faults = check(sys.argv[1], sys.argv[2])
    for fault in faults:
        print("wrong: " + fault)
    sys.exit(1 if faults else 0)


if __name__ == "__main__":
    main()
