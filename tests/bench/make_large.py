#!/usr/bin/env python3
"""Writes the large benchmark file: invented answers of many rows to 24 items, six constructs of four items each.

    make_large.py OUT.csv ROWS integers|decimals

integers: seven-point items. decimals: the same answers before rounding, six digits after the point. Fixed start of numpy's
generator; built as bytes, since writing 24 million numbers one by one would take longer than the benchmark.
"""
import sys

import numpy as np

NAMES = [f"{construct}{item}" for construct in "abcdey" for item in range(1, 5)]
PREDICTORS = 5


def latents(rng, n):
    common = rng.standard_normal(n)
    x = 0.5 * common[:, None] + np.sqrt(0.75) * rng.standard_normal((n, PREDICTORS))
    y = x[:, :3].sum(axis=1) * 0.3 + 0.25 * x[:, 0] * x[:, 1] + 0.15 * x[:, 3] + 0.7 * rng.standard_normal(n)
    return np.column_stack([x, y])


def answers(rng, n):
    items = np.repeat(latents(rng, n), 4, axis=1)
    items = 0.8 * items + 0.6 * rng.standard_normal(items.shape)
    return np.clip(4 + 1.3 * items, 1, 7)


def as_text(values, digits):
    """Rows of one-digit numbers with `digits` places after the point, as bytes of a CSV file."""
    whole = np.round(values * 10 ** digits).astype(np.int64)
    cells = np.empty((*values.shape, 2 + (digits + 1 if digits else 0)), dtype=np.uint8)
    cells[..., 0] = whole // 10 ** digits + ord("0")
    if digits:
        cells[..., 1] = ord(".")
        for place in range(digits):
            cells[..., 2 + place] = whole // 10 ** (digits - 1 - place) % 10 + ord("0")
    cells[..., -1] = ord(",")
    cells[:, -1, -1] = ord("\n")
    return cells.tobytes()


def main():
    path, rows, kind = sys.argv[1], int(sys.argv[2]), sys.argv[3]
    rng = np.random.default_rng(24)
    with open(path, "wb") as f:
        f.write((",".join(NAMES) + "\n").encode())
        for start in range(0, rows, 100_000):
            f.write(as_text(answers(rng, min(100_000, rows - start)), 6 if kind == "decimals" else 0))


if __name__ == "__main__":
    main()
