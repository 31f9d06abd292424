#!/usr/bin/env python3
"""Welch's test of two means by scipy.   welch.py OUTDIR

Writes welch.csv: for pairs of samples (invented: numpy's generator) each one's mean, standard error of the mean and degrees
of freedom, then t, degrees of freedom and p of scipy.stats.ttest_ind(equal_var=False) (Welch 1947, Biometrika 34, 28-35).
scipy 1.10 does not tell its degrees of freedom: those written follow the formula and must give scipy's p to 1e-12.
"""
import csv
import math
import os
import sys

import numpy as np
from scipy import stats


def main():
    rng = np.random.default_rng(1947)
    lines = [["mean_1", "se_1", "df_1", "mean_2", "se_2", "df_2", "t", "df", "p"]]
    for n, m, shift, spread in ((12, 12, 0, 1), (40, 7, 1, 3), (5, 200, -0.5, 0.2), (90, 80, 2, 1), (300, 30, 0.02, 8), (3, 3, 1, 10)):
        x, y = rng.normal(0, 1, n), rng.normal(shift, spread, m)
        a, b = (v.std(ddof=1) / math.sqrt(len(v)) for v in (x, y))
        t, p = stats.ttest_ind(x, y, equal_var=False)
        df = (a ** 2 + b ** 2) ** 2 / (a ** 4 / (n - 1) + b ** 4 / (m - 1))
        assert abs(2 * stats.t.sf(abs(t), df) / p - 1) < 1e-12
        lines.append([repr(float(v)) if isinstance(v, float) else v for v in (x.mean(), a, n - 1, y.mean(), b, m - 1, float(t), df, float(p))])
    with open(os.path.join(sys.argv[1], "welch.csv"), "w", encoding="utf-8", newline="") as f:
        csv.writer(f, lineterminator="\n").writerows(lines)


if __name__ == "__main__":
    main()
