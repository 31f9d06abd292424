#!/usr/bin/env python3
"""Compares a fresh copy of a frozen .csv or .json file with the frozen one, cell by cell.   compare_frozen.py FROZEN FRESH

Numbers must agree to 1e-10 relative, all else exactly. Status 1 with the first difference.
"""
import csv
import json
import sys


def cells(path):
    """(place, value) of every cell or leaf."""
    with open(path, encoding="utf-8", newline="") as f:
        if path.endswith(".csv"):
            for i, row in enumerate(csv.reader(f), 1):
                for j, cell in enumerate(row, 1):
                    yield f"line {i}, cell {j}", cell
            return
        stack = [("", json.load(f))]
    while stack:
        place, value = stack.pop()
        if isinstance(value, dict):
            stack += [(f"{place}.{k}", v) for k, v in value.items()]
        elif isinstance(value, list):
            stack += [(f"{place}[{i}]", v) for i, v in enumerate(value)]
        else:
            yield place, str(value)


def same(a, b):
    try:
        x, y = float(a), float(b)
    except ValueError:
        return a == b
    return x == y or abs(x - y) <= 1e-10 * max(abs(x), abs(y))


def main():
    frozen, fresh = dict(cells(sys.argv[1])), dict(cells(sys.argv[2]))
    for place in sorted(frozen.keys() | fresh.keys()):
        a, b = frozen.get(place, "nothing"), fresh.get(place, "nothing")
        if not same(a, b):
            print(f"{sys.argv[1]}, {place}: frozen {a}, now {b}")
            return 1
    print(f"{len(frozen)} cells agree")
    return 0


if __name__ == "__main__":
    sys.exit(main())
