#!/usr/bin/env python3
"""Compares the rank correlations with SciPy's spearmanr and kendalltau (tau-b) on random orders.

Usage: correlation_check.py PRINT_CORRELATIONS

PRINT_CORRELATIONS is the program built from scipy/print_correlations.cc. SciPy is Debian's
python3-scipy.
"""

import math
import random
import subprocess
import sys
import warnings

import scipy.stats

ALLOWED = 1e-12


def cases(rng):
    """Pairs of lists of one length; few different values make many ties."""
    for size in list(range(0, 12)) * 40 + [50, 200, 1000] * 20 + [20000]:
        for values in (2, 3, 10, 10**9):
            a = [rng.randrange(values) for _ in range(size)]
            kind = rng.randrange(4)
            if kind == 0:  # unrelated
                b = [rng.randrange(values) for _ in range(size)]
            elif kind == 1:  # nearly the same order
                b = [x + rng.gauss(0, 1) for x in a]
            elif kind == 2:  # backwards, with ties of its own
                b = [-(x // 2) for x in a]
            else:
                b = list(a)
            yield a, b


def main():
    if len(sys.argv) != 2:
        sys.exit(__doc__)
    rng = random.Random(1904)
    given = list(cases(rng))
    text = "".join("%d\n%s\n%s\n" % (len(a), " ".join(map(repr, a)), " ".join(map(repr, b)))
                   for a, b in given)
    answers = subprocess.run([sys.argv[1]], input=text, capture_output=True, text=True,
                             check=True).stdout.split("\n")[:-1]
    if len(answers) != len(given):
        sys.exit("%d cases, %d answers" % (len(given), len(answers)))
    warnings.simplefilter("ignore")  # SciPy warns where a value is not defined
    defined = 0
    for (a, b), answer in zip(given, answers):
        if len(a) < 2:
            wanted = (math.nan, math.nan)
        else:
            wanted = (scipy.stats.spearmanr(a, b)[0], scipy.stats.kendalltau(a, b)[0])
        for got, want in zip(map(float, answer.split()), wanted):
            if math.isnan(got) != math.isnan(want) or abs(got - want) > ALLOWED:
                sys.exit("%s for %r and %r, but SciPy has %r" % (answer, a[:20], b[:20], wanted))
            defined += not math.isnan(got)
    if defined < len(given):
        sys.exit("too few of the cases have a value: %d" % defined)
    print("%d cases, %d values agree with SciPy %s" % (len(given), defined, scipy.__version__))


if __name__ == "__main__":
    main()
