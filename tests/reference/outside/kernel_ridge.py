#!/usr/bin/env python3
"""Kernel ridge regression with a free intercept by scikit-learn.   kernel_ridge.py OUTDIR

KernelRidge itself has no intercept; on a kernel centred by KernelCenterer, with outcomes less their training mean, it is ridge
regression with a free one. Data: linnerud.csv (sources: ../README.md), Chins, Situps and Jumps predict Weight, Waist and Pulse.
- kernel_ridge.csv: rows 1-15 as training rows (predictors standardised by them, divisor n - 1), several length-scales and penalties:
  predictions of rows 16-20, and leave-one-out residuals of rows 1-15, each from a KernelRidge fitted to the other 14.
- flexible_linnerud.csv: the whole flexible benchmark on folds 1, 2, 3, 4, 1, 2 ...: per row its squared loss in units of the targets'
  standard deviations over all rows, and the length-scale and penalty of its fold, chosen by leave-one-out refits.
"""
import csv
import os
import sys

import numpy as np
from scipy.spatial.distance import pdist
from sklearn.kernel_ridge import KernelRidge
from sklearn.metrics.pairwise import rbf_kernel
from sklearn.preprocessing import KernelCenterer

HERE = os.path.dirname(os.path.abspath(__file__))
MULTIPLES = [8, 4, 2, 1, 0.5]
PENALTIES = [10.0 ** (4 - step / 2) for step in range(17)]


def predict(x, y, new, length, penalty):
    gamma = 1 / (2 * length ** 2)
    centerer = KernelCenterer()
    kernel = centerer.fit_transform(rbf_kernel(x, x, gamma=gamma))
    model = KernelRidge(alpha=penalty, kernel="precomputed").fit(kernel, y - y.mean(axis=0))
    return model.predict(centerer.transform(rbf_kernel(new, x, gamma=gamma))) + y.mean(axis=0)


def left_out(x, y, length, penalty):
    out = np.empty_like(y)
    for i in range(len(x)):
        rest = np.arange(len(x)) != i
        out[i] = y[i] - predict(x[rest], y[rest], x[i:i + 1], length, penalty)[0]
    return out


def write(name, lines):
    with open(os.path.join(sys.argv[1], name), "w", encoding="utf-8", newline="") as f:
        csv.writer(f, lineterminator="\n").writerows(lines)


def fixed_settings(predictors, targets):
    train = slice(0, 15)
    mean, sd = predictors[train].mean(axis=0), predictors[train].std(axis=0, ddof=1)
    z = (predictors - mean) / sd
    lines = [["length", "penalty", "what", "row", "Weight", "Waist", "Pulse"]]
    for length in (0.7, 2.0, 9.0):
        for penalty in (1e-3, 0.1, 30.0):
            for what, first, values in (("prediction", 16, predict(z[train], targets[train], z[15:], length, penalty)),
                                        ("left out", 1, left_out(z[train], targets[train], length, penalty))):
                lines += [[length, penalty, what, first + i] + [repr(float(v)) for v in row] for i, row in enumerate(values)]
    write("kernel_ridge.csv", lines)


def whole_benchmark(predictors, targets):
    fold = np.arange(len(targets)) % 4
    unit = targets.std(axis=0, ddof=1)
    loss, multiple, penalty = np.empty(len(targets)), np.empty(len(targets)), np.empty(len(targets))
    for k in range(4):
        inside, out = fold != k, fold == k
        y = targets[inside]
        z = (predictors - predictors[inside].mean(axis=0)) / predictors[inside].std(axis=0, ddof=1)
        distance = np.median(pdist(z[inside]))
        errors = {(m, p): ((left_out(z[inside], y, m * distance, p) / y.std(axis=0, ddof=1)) ** 2).sum() for m in MULTIPLES for p in PENALTIES}
        best = min(errors, key=errors.get)
        ordered = sorted(errors.values())
        assert ordered[1] > ordered[0] * (1 + 1e-8), "a tie decides"
        predicted = predict(z[inside], y, z[out], best[0] * distance, best[1])
        loss[out] = (((targets[out] - predicted) / unit) ** 2).mean(axis=1)
        multiple[out], penalty[out] = best
    write("flexible_linnerud.csv", [["row", "fold", "loss", "multiple", "penalty"]] +
          [[i + 1, int(fold[i]) + 1, repr(float(loss[i])), multiple[i], repr(float(penalty[i]))] for i in range(len(loss))])


def main():
    with open(os.path.join(HERE, "linnerud.csv"), encoding="utf-8", newline="") as f:
        rows = list(csv.DictReader(f))
    take = lambda names: np.array([[float(row[c]) for c in names] for row in rows])
    predictors, targets = take(["Chins", "Situps", "Jumps"]), take(["Weight", "Waist", "Pulse"])
    fixed_settings(predictors, targets)
    whole_benchmark(predictors, targets)


if __name__ == "__main__":
    main()
