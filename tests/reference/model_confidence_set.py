#!/usr/bin/env python3
"""The model confidence set of Hansen, Lunde & Nason (2011, Econometrica 79(2), 453-497), written from the paper.

    model_confidence_set.py LOSSES.csv RESULTS.json FROZEN.json KEY

Compares the p-values of three bootstraps on the same losses: this one, that of the program (confidence_set in
RESULTS.json) and frozen ones of a third program (FROZEN.json, results.KEY). Prints the largest gap of each two and
whether every gap is within `allowed`. Each bootstrap has its own random numbers, so p-values agree only up to Monte
Carlo error.
"""
import csv
import json
import math
import sys

import numpy as np

RESAMPLES = 10000


def bootstrap_means(losses, clusters, resamples, seed):
    """Mean losses (resamples x theories) of resampled rows, or of resampled whole clusters as a ratio of sums."""
    if clusters is None:
        sums, sizes = losses, np.ones(len(losses))
    else:
        names, member = np.unique(clusters.astype(str), return_inverse=True)
        sums = np.column_stack([np.bincount(member, weights=column) for column in losses.T])
        sizes = np.bincount(member).astype(float)
    rng = np.random.default_rng(seed)
    units = len(sums)
    means = np.empty((resamples, losses.shape[1]))
    for start in range(0, resamples, 500):  # in blocks, to spare memory
        block = slice(start, min(start + 500, resamples))
        times = rng.multinomial(units, np.full(units, 1 / units), size=block.stop - start)
        means[block] = times @ sums / (times @ sizes)[:, None]
    return means


def confidence_set(losses, clusters=None, resamples=RESAMPLES, seed=1):
    """losses: rows x theories. Per statistic the p of each theory: {"p_range": [...], "p_max": [...]}."""
    mean = losses.mean(axis=0)
    boot = bootstrap_means(losses, clusters, resamples, seed)
    # A variance that is only rounding: two theories that predict the same.
    floor = (1e-11 * mean.max()) ** 2
    return {"p_range": walk(mean, boot, range_statistic, floor), "p_max": walk(mean, boot, max_statistic, floor)}


def range_statistic(mean, boot, floor):
    """T_R = max |D_ab| / sqrt(v_ab); eliminates the theory with the largest D_ab / sqrt(v_ab)."""
    d = mean[:, None] - mean[None, :]
    shift = boot[:, :, None] - boot[:, None, :] - d
    v = (shift ** 2).mean(axis=0)
    use = v > floor
    if not use.any():
        return 1.0, int(np.argmax(mean))
    scale = np.sqrt(np.where(use, v, np.inf))
    t = d / scale
    null = (abs(shift) / scale).max(axis=(1, 2))
    return float((null >= abs(t).max()).mean()), int(np.argmax(t.max(axis=1)))


def max_statistic(mean, boot, floor):
    """T_max = max D_a. / sqrt(v_a.), D_a. = mean loss of a minus the mean loss of the set; eliminates the argmax."""
    d = mean - mean.mean()
    shift = boot - boot.mean(axis=1, keepdims=True) - d
    v = (shift ** 2).mean(axis=0)
    use = v > floor
    if not use.any():
        return 1.0, int(np.argmax(mean))
    t = np.where(use, d / np.sqrt(np.where(use, v, 1)), -np.inf)
    null = np.where(use, shift / np.sqrt(np.where(use, v, 1)), -np.inf).max(axis=1)
    return float((null >= t.max()).mean()), int(np.argmax(t))


def walk(mean, boot, statistic, floor):
    """Eliminates one theory after the other; a theory's p is the running maximum, that of the last one 1."""
    left, p, running = list(range(len(mean))), [1.0] * len(mean), 0.0
    while len(left) > 1:
        value, worst = statistic(mean[left], boot[:, left], floor)
        running = max(running, value)
        p[left[worst]] = running
        del left[worst]
    return p


def allowed(p, *resamples):
    """.02 and two Monte Carlo standard errors of the difference of two bootstrap p-values."""
    return 0.02 + 2 * math.sqrt(p * (1 - p) * sum(1 / b for b in resamples))


def main():
    losses_path, results_path, frozen_path, key = sys.argv[1:]
    with open(frozen_path, encoding="utf-8") as f:
        file = json.load(f)
    frozen = file["results"][key]
    with open(results_path, encoding="utf-8") as f:
        program = {t["name"]: t["confidence_set"] for t in json.load(f)["theories"]}
    with open(losses_path, encoding="utf-8", newline="") as f:
        rows = list(csv.DictReader(f))
    names = list(frozen["p_max"])
    own = confidence_set(np.array([[float(row[name]) for name in names] for row in rows]))
    gaps, wrong = {"own, frozen": 0.0, "program, frozen": 0.0, "program, own": 0.0}, []
    for statistic in ("p_range", "p_max"):
        for i, name in enumerate(names):
            p = {"own": own[statistic][i], "program": program[name][statistic], "frozen": frozen[statistic][name]}
            for pair in gaps:
                a, b = (p[who] for who in pair.split(", "))
                gaps[pair] = max(gaps[pair], abs(a - b))
                # The program's resamples are 2000 (help tests), here and in the frozen values 10000.
                if abs(a - b) > allowed(p["frozen"], 2000 if "program" in pair else RESAMPLES, file["B"]):
                    wrong.append(f"{statistic} of {name}: {pair}: {a} {b}")
    print("; ".join(f"{pair} within {gap:.4f}" for pair, gap in gaps.items()), *wrong, sep="\n")
    return 1 if wrong else 0


if __name__ == "__main__":
    sys.exit(main())
