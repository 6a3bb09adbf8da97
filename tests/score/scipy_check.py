#!/usr/bin/env python3
"""Compares the measures with SciPy and with 100-digit arithmetic on some thousand tables.

Usage: scipy_check.py PRINT_SCORES

PRINT_SCORES is the program built from scipy/print_scores.cc. SciPy (Debian: python3-scipy) gives
g2 and chi2 (power_divergence), the Poisson limit (chi2.ppf), and NumPy the logarithms. SciPy works
in doubles and loses digits where counts are huge and close to independence, so every value is also
held against the formulas evaluated with Python's decimal module, with no such allowance.
"""

import random
import subprocess
import sys
from decimal import Decimal, getcontext

import numpy
import scipy.special
import scipy.stats

RELATIVE = 1e-9
ROUNDING = 0.5000001e-9  # scores are rounded to 9 decimals
MEASURES = ("pmi", "npmi", "g2", "chi2")
HUGE = 2**62


def log_uniform(rng, low, high):
    """A whole number of low..high, every order of magnitude as likely as every other."""
    return max(low, min(high, int(low * (high / low) ** rng.random())))


def tables(rng):
    """(kind, n, left, right, total); all but the kind "repeated word" have four cells >= 0."""
    for _ in range(1000):  # small, anything goes
        total = rng.randint(1, 60)
        left, right = rng.randint(1, total), rng.randint(1, total)
        low, high = max(1, left + right - total), min(left, right)
        yield "small", rng.randint(low, high), left, right, total
    for _ in range(1500):  # every order of magnitude
        total = log_uniform(rng, 10, HUGE)
        left, right = log_uniform(rng, 1, total), log_uniform(rng, 1, total)
        low, high = max(1, left + right - total), min(left, right)
        yield "log-uniform", log_uniform(rng, low, high), left, right, total
    for _ in range(1500):  # as close to independence as whole numbers come
        total = log_uniform(rng, 10, HUGE)
        left, right = log_uniform(rng, 1, total), log_uniform(rng, 1, total)
        low, high = max(1, left + right - total), min(left, right)
        n = left * right // total + rng.randint(-1, 1)
        yield "independent", max(low, min(high, n)), left, right, total
    for _ in range(500):  # empty cells
        total = log_uniform(rng, 2, HUGE)
        n = log_uniform(rng, 1, total)
        left = log_uniform(rng, n, total)
        yield "together", n, n, n, total
        yield "left only here", n, n, left, total
        yield "right only here", n, left, n, total
        yield "no other slot", n, left, total - left + n, total
        yield "all slots", left, left, total, total
    for _ in range(500):  # word margins of a repeated word: O22 < 0
        left = log_uniform(rng, 2, HUGE // 2)
        total = left + rng.randint(0, left - 2)
        n = rng.randint(1, min(left - 1, 2 * left - total - 1))
        yield "repeated word", n, left, left, total
    for n in range(1, 1101):  # both ways of the Poisson limit, and where they meet
        yield "poisson", n, n, n, 2 * n
    yield "one", 1, 1, 1, 1
    yield "one in many", 1, 1, 1, HUGE
    yield "all in many", HUGE, HUGE, HUGE, HUGE
    yield "all but one", HUGE - 1, HUGE - 1, HUGE - 1, HUGE
    yield "one aside", HUGE - 2, HUGE - 1, HUGE - 1, HUGE


def cells(n, left, right, total):
    observed = (n, left - n, right - n, total - left - right + n)
    products = (left * right, left * (total - right), (total - left) * right,
                (total - left) * (total - right))
    return observed, products


def exact(n, left, right, total):
    """pmi, npmi, g2, chi2 as the semantics define them, to about 60 digits."""
    observed, products = cells(n, left, right, total)
    expected = [Decimal(product) / total for product in products]
    log2 = Decimal(2).ln()
    pmi = (Decimal(n) * total / (Decimal(left) * right)).ln() / log2
    npmi = Decimal(1) if n == total else pmi / ((Decimal(total) / n).ln() / log2)
    g2 = 2 * sum((o * (o / e).ln() for o, e in zip(observed, expected) if o > 0 and e > 0),
                 Decimal(0))
    chi2 = sum(((o - e) ** 2 / e for o, e in zip(observed, expected) if e > 0), Decimal(0))
    if n < expected[0]:
        g2 = -abs(g2)
    return tuple(float(value) for value in (pmi, npmi, g2, chi2))


def by_scipy(all_tables):
    """Arrays of pmi, npmi, g2, chi2 of SciPy and NumPy, and of what each may be off by; NaN where
    SciPy has no value (an expected number of 0)."""
    n, left, right, total = (numpy.array(column, dtype=float) for column in zip(*all_tables))
    observed = numpy.array([cells(*table)[0] for table in all_tables], dtype=float).T
    expected = numpy.array(
        [[product / table[3] for product in cells(*table)[1]] for table in all_tables]).T
    usable = (expected > 0).all(axis=0)
    observed_usable, expected_usable = observed[:, usable], expected[:, usable]
    epsilon = numpy.finfo(float).eps

    def spread(values):
        result = numpy.full(len(all_tables), numpy.nan)
        result[usable] = values
        return result

    def statistic(name):
        return scipy.stats.power_divergence(
            observed_usable, expected_usable, axis=0, lambda_=name).statistic

    sign = numpy.where(n * total < left * right, -1.0, 1.0)
    g2 = spread(statistic("log-likelihood")) * sign
    chi2 = spread(statistic("pearson"))
    terms = numpy.abs(scipy.special.xlogy(observed_usable, observed_usable / expected_usable))
    lost_g2 = spread(8 * epsilon * (terms + observed_usable).sum(axis=0))
    lost_chi2 = spread(
        (4 * epsilon * numpy.maximum(observed_usable, expected_usable) / expected_usable *
         (numpy.abs(observed_usable - expected_usable) +
          epsilon * numpy.maximum(observed_usable, expected_usable))).sum(axis=0))
    pmi = numpy.log2(n / (left * right / total))
    with numpy.errstate(divide="ignore", invalid="ignore"):
        information = -numpy.log2(n / total)
        npmi = numpy.where(information > 1e-6, pmi / information, numpy.nan)
        lost_npmi = 8 * epsilon / information
    nothing = numpy.full(len(all_tables), 4 * epsilon)
    return (pmi, npmi, g2, chi2), (nothing, lost_npmi, lost_g2, lost_chi2)


def main():
    getcontext().prec = 100
    rng = random.Random(20240229)
    cases = list(tables(rng))
    numbers = [case[1:] for case in cases]
    answer = subprocess.run(
        [sys.argv[1]], input="".join("%d %d %d %d\n" % table for table in numbers),
        capture_output=True, text=True, check=True).stdout.split("\n")[:-1]
    ours = numpy.array([[float(value) for value in line.split()] for line in answer])
    if ours.shape != (len(cases), 5):
        sys.exit("print_scores answered %s values for %d tables" % (ours.shape, len(cases)))

    faults = 0
    compared = {}

    def compare(name, kind, table, value, reference, allowance):
        nonlocal faults
        compared[name] = compared.get(name, 0) + 1
        if not abs(value - reference) <= RELATIVE * abs(reference) + allowance:
            faults += 1
            if faults <= 20:
                print("%s: %s of n, left, right, total = %s: ours %.17g, reference %.17g"
                      % (name, kind, table, value, reference))

    references, lost = by_scipy(
        [table if case[0] != "repeated word" else (1, 1, 1, 2)
         for case, table in zip(cases, numbers)])
    limits = scipy.stats.chi2.ppf(0.025, 2.0 * numpy.array([table[0] for table in numbers])) / 2
    for i, (case, table) in enumerate(zip(cases, numbers)):
        for m, (name, reference) in enumerate(zip(MEASURES, exact(*table))):
            compare(name + " by decimal", case[0], table, ours[i, m], reference, ROUNDING)
            if case[0] != "repeated word" and not numpy.isnan(references[m][i]):
                compare(name + " by scipy", case[0], table, ours[i, m], references[m][i],
                        ROUNDING + lost[m][i])
        compare("poisson lower by scipy", case[0], table, ours[i, 4], limits[i], 0)
    for name, count in compared.items():
        print("%6d x %s" % (count, name))
    if faults:
        sys.exit("%d values differ" % faults)


if __name__ == "__main__":
    main()
