#!/usr/bin/env python3
"""Writes the invented data of this folder. No survey stands behind them; the numbers come from a fixed start of
Python's generator. Run in any folder: the files are written beside this script. They are committed, so that a test
never depends on a generator; rerunning it changes nothing (checked on Python 3.11 and 3.12).
"""
import math
import os
import random

HERE = os.path.dirname(os.path.abspath(__file__))


def item(rng, latent, loading, low=1, high=7):
    value = loading * latent + math.sqrt(1 - loading ** 2) * rng.gauss(0, 1)
    return min(high, max(low, round((low + high) / 2 + 1.3 * value)))


def people(rng, n, crews):
    """Rows of latent variables and their answers; pln4 and dlv3 are worded the other way round."""
    crew_effect = [rng.gauss(0, 0.5) for _ in range(crews)]
    for i in range(n):
        crew = i % crews
        supply = rng.gauss(0, 1)
        planning = 0.4 * supply + rng.gauss(0, 0.9)
        skill = 0.5 * supply + rng.gauss(0, 0.85)
        climate = 0.3 * skill + rng.gauss(0, 0.95)
        sector = 1 if i == 17 else 4 if i in (5, 71) else rng.choice([2, 3])
        region = rng.choice(["north", "south, inner", "east"])
        hours = round(30 + 8 * rng.gauss(0, 1), 2)
        delivery = (0.4 * planning + 0.35 * skill + 0.3 * planning * skill + 0.2 * climate + 0.3 * (sector == 3)
                    + (0.4 * planning if region == "north" else 0) + crew_effect[crew] + rng.gauss(0, 0.7)) / 1.4
        row = {f"pln{j}": item(rng, planning, (.8, .75, .7, -.7)[j - 1]) for j in range(1, 5)}
        row |= {f"skl{j}": item(rng, skill, (.85, .75, .7)[j - 1]) for j in range(1, 4)}
        row |= {f"sup{j}": item(rng, supply, (.8, .75, .7)[j - 1]) for j in range(1, 4)}
        row |= {f"clm{j}": item(rng, climate, (.8, .75)[j - 1]) for j in range(1, 3)}
        row |= {f"dlv{j}": item(rng, delivery, (.85, .8, -.75)[j - 1]) for j in range(1, 4)}
        row |= {"hours": hours, "sector": sector, "region": region, "crew": f"c{crew:02d}",
                "phase": "open" if rng.random() < 0.2 else "closed"}
        yield row


def write(name, rows, delimiter=",", comma=False, end="\n", bom=False):
    def cell(value):
        text = str(value)
        if comma and isinstance(value, float):
            text = text.replace(".", ",")
        return '"' + text.replace('"', '""') + '"' if any(c in text for c in (delimiter, '"', "\n")) else text
    lines = [delimiter.join(rows[0])] + [delimiter.join(cell(v) for v in row.values()) for row in rows]
    with open(os.path.join(HERE, name), "w", encoding="utf-8-sig" if bom else "utf-8", newline="") as f:
        f.write(end.join(lines) + end)


def main():
    rng = random.Random(20240511)
    answers = list(people(rng, 120, 24))
    write("answers.csv", answers)

    # The same people with answers left out: empty, a code, a word; and one without a region, one without a target item.
    holes = [dict(row) for row in answers]
    for row in holes:
        for name in row:
            if name[:3] in ("pln", "skl", "sup", "clm") and rng.random() < 0.06:
                row[name] = rng.choice(["", -9, "NA"])
    holes[40]["region"] = ""
    holes[77]["dlv2"] = "NA"
    write("answers_with_holes.csv", holes)

    # Splits of the rows of given_splits.yaml, into folds of unequal sizes.
    needed = ("pln1", "pln2", "skl1", "skl2", "clm1", "clm2", "dlv1", "dlv2")
    rows = [i for i, row in enumerate(holes, 1) if not {"", -9, "NA"} & {row[name] for name in needed}]
    write("splits.csv", [{"row": i, "repeat": r, "fold": rng.choice([1, 1, 2, 3, 3, 3, 4, 5])}
                         for r in (1, 2, 3) for i in rows])

    # Measured quantities, all positive, written with a decimal comma.
    measured = []
    for i in range(90):
        base = rng.gauss(0, 1)
        flow, heat = 0.5 * base + rng.gauss(0, 0.8), 0.4 * base + rng.gauss(0, 0.9)
        strength = 0.5 * flow + 0.4 * heat + 0.25 * flow * heat + rng.gauss(0, 0.6)
        row = {f"flow {j}": round(math.exp(2 + 0.3 * flow + 0.12 * rng.gauss(0, 1)), 3) for j in (1, 2)}
        row |= {f"heat {j}": round(20 + 3 * heat + 1.5 * rng.gauss(0, 1), 2) for j in (1, 2, 3)}
        row |= {"base": round(5 + base, 4)}
        row |= {f"strength {j}": round(50 + 9 * strength + 4 * rng.gauss(0, 1), 1) for j in (1, 2)}
        row |= {"plant": rng.choice(["A", "B", "C"])}
        measured.append(row)
    write("measured.txt", measured, delimiter=";", comma=True)

    # A small file as some programs write it: tabs, byte order mark, CRLF, a quoted remark that runs over two lines.
    small = []
    for i, row in enumerate(people(rng, 60, 12)):
        kept = {name: value for name, value in row.items() if name not in ("clm1", "clm2", "hours")}
        small.append({**kept, "remark": 'said "later"\nand left' if i % 7 == 0 else "none"})
    write("small.tsv", small, delimiter="\t", end="\r\n", bom=True)


if __name__ == "__main__":
    main()
