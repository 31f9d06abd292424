#!/usr/bin/env python3
"""Two constructs joined by one path: weights known without iterating.   two_blocks.py OUTDIR

Mode A settles at the first singular vectors of the cross-correlation matrix, mode B at the first canonical pair
(Wold 1982; Tenenhaus, Esposito Vinzi, Chatelin & Lauro 2005). Both come here from one singular value decomposition; where
scikit-learn is installed its PLSCanonical must agree on mode A. Writes two_blocks.csv and, per data set and mode, the
results.json-shaped expectation of the study of the same name in studies/ beside this script.
"""
import csv
import json
import os
import sys

import numpy as np

HERE = os.path.dirname(os.path.abspath(__file__))
BLOCKS = {
    "linnerud": ("linnerud.csv", ["Weight", "Waist", "Pulse"], ["Chins", "Situps", "Jumps"]),
    "swiss": ("../open_data/swiss/data.csv", ["Agriculture", "Examination", "Education"],
              ["Fertility", "Catholic", "Infant.Mortality"]),
}


def standardised(path, columns):
    with open(os.path.join(HERE, path), encoding="utf-8", newline="") as f:
        rows = list(csv.DictReader(f))
    x = np.array([[float(row[c]) for c in columns] for row in rows])
    return (x - x.mean(axis=0)) / x.std(axis=0, ddof=1)


def unit(z, w):
    """Scaled to a score of standard deviation 1, loadings that add up to a positive number; and the loadings."""
    w = w / (z @ w).std(ddof=1)
    loadings = z.T @ (z @ w) / (len(z) - 1)
    return (w, loadings) if loadings.sum() > 0 else (-w, -loadings)


def inverse_root(r):
    values, vectors = np.linalg.eigh(r)
    return vectors @ np.diag(values ** -0.5) @ vectors.T


def first_pair(x, y, mode):
    """Unnormalised weights of the two blocks, and the first singular value."""
    n = len(x) - 1
    cross = x.T @ y / n
    if mode == "mode_a":
        u, s, vt = np.linalg.svd(cross)
        return u[:, 0], vt[0], s[0]
    a, b = inverse_root(x.T @ x / n), inverse_root(y.T @ y / n)
    u, s, vt = np.linalg.svd(a @ cross @ b)
    return a @ u[:, 0], b @ vt[0], s[0]


def agree_with_sklearn(x, y, wx, wy):
    try:
        from sklearn.cross_decomposition import PLSCanonical
    except ImportError:
        print("skipped: the cross-check of two_blocks.py needs scikit-learn")
        return
    other = PLSCanonical(n_components=1, algorithm="svd").fit(x, y)
    for mine, theirs in ((wx, other.x_weights_[:, 0]), (wy, other.y_weights_[:, 0])):
        mine = mine / np.linalg.norm(mine)
        assert min(abs(mine - theirs).max(), abs(mine + theirs).max()) < 1e-10, "scikit-learn disagrees"


def main():
    out = sys.argv[1]
    lines = [["data", "weights", "quantity", "value"]]
    for name, (path, names_x, names_y) in BLOCKS.items():
        z = standardised(path, names_x + names_y)
        x, y = z[:, :3], z[:, 3:]
        for mode in ("mode_a", "mode_b"):
            raw_x, raw_y, singular = first_pair(x, y, mode)
            if mode == "mode_a":
                agree_with_sklearn(x, y, raw_x, raw_y)
            (wx, lx), (wy, ly) = unit(x, raw_x), unit(y, raw_y)
            r = float((x @ wx) @ (y @ wy) / (len(x) - 1))
            for column, value in zip(names_x + names_y, np.concatenate([wx, wy])):
                lines.append([name, mode, f"weight of {column}", repr(float(value))])
            lines.append([name, mode, "first singular value", repr(float(singular))])
            lines.append([name, mode, "correlation of the scores", repr(r)])
            expected = {"theories": [{
                "name": "linear", "fitted": {"r2": r * r},
                "equations": [{"outcome": "second", "r2": r * r, "terms": [{"term": "first", "coefficient": r}]}],
                "weights": [{"construct": construct, "indicators": [
                    {"name": c, "weight": float(w), "loading": float(load)} for c, w, load in zip(columns, ws, loads)]}
                    for construct, columns, ws, loads in (("first", names_x, wx, lx), ("second", names_y, wy, ly))]}]}
            with open(os.path.join(out, f"{name}_{mode}.json"), "w", encoding="utf-8") as f:
                json.dump(expected, f, indent=1)
                f.write("\n")
    with open(os.path.join(out, "two_blocks.csv"), "w", encoding="utf-8", newline="") as f:
        csv.writer(f, lineterminator="\n").writerows(lines)


if __name__ == "__main__":
    main()
