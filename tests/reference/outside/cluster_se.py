#!/usr/bin/env python3
"""Cluster-robust standard error of a mean by statsmodels.   cluster_se.py OUTDIR

statsmodels multiplies the sandwich (Liang & Zeger 1986) by G/(G-1) x (n-1)/(n-k). For a mean k = 1, so its default
correction is the factor G/(G-1) alone: exactly the formula of the row test with clusters,
    sqrt(G/(G-1) sum over clusters of (sum over its rows of (d_i - D))^2) / n.
With use_correction=False it is smaller by sqrt((G-1)/G). Both are written to cluster_se.csv, with t on G-1 degrees of freedom.
Data: invented, studies/answers.csv (column hours less its nominal 30, by crew), whole and without the open jobs (crews of
unequal size).
"""
import csv
import os
import sys

import numpy as np
import statsmodels.api as sm
from scipy import stats

HERE = os.path.dirname(os.path.abspath(__file__))


def main():
    with open(os.path.join(HERE, "..", "studies", "answers.csv"), encoding="utf-8", newline="") as f:
        rows = list(csv.DictReader(f))
    lines = [["rows", "n", "clusters", "mean", "se", "se_without_correction", "t", "df", "p"]]
    for label, chosen in (("all", rows), ("closed", [r for r in rows if r["phase"] == "closed"])):
        d = np.array([float(r["hours"]) - 30 for r in chosen])
        names, crew = np.unique([r["crew"] for r in chosen], return_inverse=True)
        model = sm.OLS(d, np.ones((len(d), 1)))
        se = {c: float(model.fit(cov_type="cluster", cov_kwds={"groups": crew, "use_correction": c}).bse[0])
              for c in (True, False)}
        g, t = len(names), float(d.mean() / se[True])
        sums = np.bincount(crew, weights=d - d.mean())
        formula = float(np.sqrt(g / (g - 1) * (sums ** 2).sum()) / len(d))
        assert abs(formula / se[True] - 1) < 1e-12, "the formula and statsmodels disagree"
        lines.append([label, len(d), g, repr(float(d.mean())), repr(se[True]), repr(se[False]), repr(t), g - 1,
                      repr(float(2 * stats.t.sf(abs(t), g - 1)))])
    with open(os.path.join(sys.argv[1], "cluster_se.csv"), "w", encoding="utf-8", newline="") as f:
        csv.writer(f, lineterminator="\n").writerows(lines)


if __name__ == "__main__":
    main()
