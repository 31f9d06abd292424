#!/usr/bin/env python3
"""Non-negative least squares and weights on the simplex by scipy.   simplex_weights.py OUTDIR

Writes simplex_weights.json: cases of 2 to 6 columns of whole numbers A (drawn by numpy's generator, no survey behind them)
and a right-hand side y, as G = A'A and b = A'y, which are exact. Per case
  x        scipy.optimize.nnls(A, y): the x >= 0 with the smallest |Ax - y|; null where it is not unique
  weights  the w >= 0 with sum 1 and the smallest |Aw|: nnls of A with a row of M under it against (0, M), scaled to sum 1.
           At a given direction w the best length leaves M^2 q / (q + M^2), q = |Aw|^2, which grows with q: exact for any M > 0
  slsqp    the same weights by scipy.optimize.minimize(method="SLSQP"), to seven digits
  fit, spread   the smallest |Ax - y|^2 and |Aw|^2
"""
import json
import os
import sys

import numpy as np
from scipy import optimize


def on_simplex(a):
    m = a.shape[1]
    root = np.sqrt((a ** 2).sum() / m)
    x, _ = optimize.nnls(np.vstack([a, np.full(m, root)]), np.append(np.zeros(len(a)), root))
    return x / x.sum()


def by_slsqp(a):
    g = a.T @ a
    g = g / np.trace(g)
    m = len(g)
    found = optimize.minimize(lambda w: w @ g @ w, np.full(m, 1 / m), jac=lambda w: 2 * g @ w, bounds=[(0, None)] * m,
                              constraints={"type": "eq", "fun": lambda w: w.sum() - 1, "jac": lambda w: np.ones(m)},
                              method="SLSQP", options={"ftol": 1e-16, "maxiter": 1000})
    return found.x


def case(name, a, y, unique=True):
    a, y = np.asarray(a, dtype=float), np.asarray(y, dtype=float)
    x, distance = optimize.nnls(a, y)
    w, s = on_simplex(a), by_slsqp(a)
    if unique:
        assert abs(w - s).max() < 1e-6, f"{name}: {w} {s}"
    return {"name": name, "g": (a.T @ a).tolist(), "b": (a.T @ y).tolist(), "x": x.tolist() if unique else None,
            "weights": w.tolist() if unique else None, "slsqp": [round(v, 7) + 0.0 for v in s.tolist()] if unique else None,
            "fit": distance ** 2, "spread": float(((a @ w) ** 2).sum())}


def main():
    rng = np.random.default_rng(41)
    cases = []
    for m in (2, 3, 4, 5, 6):
        common = rng.integers(-9, 10, 30)
        a = common[:, None] + rng.integers(-6, 7, (30, m))  # errors of theories resemble each other
        cases.append(case(f"{m} columns alike", a, a @ rng.integers(0, 4, m) + rng.integers(-3, 4, 30)))
        a = rng.integers(-9, 10, (30, m)) * rng.integers(1, 6, m) + 4 * rng.integers(-9, 10, 30)[:, None]
        cases.append(case(f"{m} columns of unlike sizes, negative slopes among them", a, a @ rng.integers(-2, 3, m) + rng.integers(-9, 10, 30)))
    a = common[:, None] + rng.integers(-2, 3, (30, 3)) * [1, 4, 8]
    cases.append(case("a right-hand side that points away from every column", a, -a[:, 0]))
    a = rng.integers(-9, 10, (30, 3))
    cases.append(case("two columns are the same", a[:, [0, 1, 0, 2]], a @ [2, 1, 1], unique=False))
    with open(os.path.join(sys.argv[1], "simplex_weights.json"), "w", encoding="utf-8") as f:
        json.dump(cases, f, indent=1)
        f.write("\n")
    zeros = sum(v == 0 for c in cases for v in (c["x"] or []) + (c["weights"] or []))
    print(f"{len(cases)} cases, {zeros} zeros")


if __name__ == "__main__":
    main()
