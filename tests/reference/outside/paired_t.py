#!/usr/bin/env python3
"""scipy's paired t-test.   paired_t.py OUTDIR

Writes paired_t_scipy.csv for R's `sleep` (Student 1908), and for two losses per row as a contest has them: squared and
absolute errors of the mean of `rating` and of a line on `complaints` (attitude, fitted to all rows). No interval: the t quantile of scipy 1.10 is good to 2.5e-11 only (t on 9 df, .975), R's to 1e-16.
"""
import csv
import os
import sys

import numpy as np
from scipy import stats

HERE = os.path.dirname(os.path.abspath(__file__))


def columns(path, *names):
    with open(os.path.join(HERE, path), encoding="utf-8", newline="") as f:
        rows = list(csv.DictReader(f))
    return [np.array([float(row[name]) for row in rows]) for name in names]


def main():
    first, second = columns("sleep.csv", "first", "second")
    y, x = columns("../open_data/attitude/data.csv", "rating", "complaints")
    line = np.polynomial.Polynomial.fit(x, y, 1)(x)
    cases = {"sleep": (first, second), "attitude squared": ((y - y.mean()) ** 2, (y - line) ** 2),
             "attitude absolute": (abs(y - y.mean()), abs(y - line))}
    lines = [["data", "mean", "se", "t", "df", "p"]]
    for name, (a, b) in cases.items():
        test, d = stats.ttest_rel(a, b), a - b
        lines.append([name, *(repr(float(v)) for v in (d.mean(), stats.sem(d), test.statistic, len(d) - 1, test.pvalue))])
    with open(os.path.join(sys.argv[1], "paired_t_scipy.csv"), "w", encoding="utf-8", newline="") as f:
        csv.writer(f, lineterminator="\n").writerows(lines)


if __name__ == "__main__":
    main()
