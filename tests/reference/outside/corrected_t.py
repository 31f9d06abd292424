#!/usr/bin/env python3
"""Corrected repeated k-fold test by exact arithmetic.   corrected_t.py OUTDIR

Reads the classifier scores of ../open_data/corrected_t and evaluates the formula (Nadeau & Bengio 2003; Bouckaert & Frank
2004) in rational arithmetic up to the final root. Writes corrected_t.csv; the scikit-learn example prints .750 and 2.611.
The ratio corrected / uncorrected is sqrt(1/100 / (1/100 + 1/9)) whatever the data.
"""
import csv
import os
import sys
from decimal import Decimal, getcontext
from fractions import Fraction

from scipy import stats

HERE = os.path.dirname(os.path.abspath(__file__))
getcontext().prec = 40


def root(q):
    return (Decimal(q.numerator) / Decimal(q.denominator)).sqrt()


def main():
    with open(os.path.join(HERE, "..", "open_data", "corrected_t", "fold_scores.csv"), encoding="utf-8", newline="") as f:
        rows = list(csv.DictReader(f))
    s = [Fraction(float(r["model_1"])) - Fraction(float(r["model_2"])) for r in rows]
    n = len(s)
    mean = sum(s) / n
    variance = sum((x - mean) ** 2 for x in s) / (n - 1)
    d = Decimal(mean.numerator) / Decimal(mean.denominator)
    se, plain = root(variance * (Fraction(1, n) + Fraction(1, 9))), root(variance / n)
    t = float(d / se)
    lines = [["quantity", "value"], ["mean", repr(float(d))], ["se", repr(float(se))], ["t", repr(t)], ["df", n - 1],
             ["p", repr(float(2 * stats.t.sf(abs(t), n - 1)))], ["t_uncorrected", repr(float(d / plain))],
             ["ratio", repr(float(plain / se))]]
    with open(os.path.join(sys.argv[1], "corrected_t.csv"), "w", encoding="utf-8", newline="") as f:
        csv.writer(f, lineterminator="\n").writerows(lines)


if __name__ == "__main__":
    main()
