#!/usr/bin/env python3
"""Makes refits.csv: invented survey answers about 420 ship refits in 40 yards.

Nobody was asked and no yard exists. The rules by which the answers come about are
the constants below, put into words in TRUTH.md, so that a reader can hold what the
contest finds against what is true. Needs nothing but Python 3.8 or newer:

    python3 make_refits.py > refits.csv

The same seed writes the same file: only random() of the standard library is drawn
from, whose sequence is fixed for a seed, and every written number is rounded.
"""
import math
import random
import statistics
import sys

SEED = 20
YARDS = 40
REFITS = 420

# What each item takes from its factor; the rest of its variance is its own.
LOADINGS = {
    "pln": (0.85, 0.80, 0.75),
    "skl": (0.85, 0.80, 0.80, 0.70),
    "sup": (0.85, 0.80, 0.75),
    "dlv": (0.88, 0.84, 0.80),
}
REVERSED = "pln3"
ITEM_MEAN, ITEM_SD = 4.3, 1.25  # before rounding to whole answers 1 .. 7

COMMON = 0.45  # loading of planning, skill and supply on the way a yard is run
SUPPLY_TO_SKILL = 0.25  # crews that get their parts keep working, and learn

# Delivery in a simple refit: the scarcest factor, and nothing else of the three.
SCARCEST = 0.75
# Delivery in a complex refit: each factor, and more where the others are high too.
ALONE = 0.28
PAIRS = 0.16
ALL_THREE = 0.06

CREW = -0.10  # per standard deviation of log crew size
SECTOR = {"cargo": 0.0, "ferry": 0.15, "navy": -0.20, "research": 0.10}
SECTOR_SHARES = (("cargo", 0.40), ("ferry", 0.30), ("navy", 0.20), ("research", 0.10))
COMPLEX_FROM = 5  # a complexity rating of 5, 6 or 7 is a complex refit

YARD_DELIVERY = 0.20  # standard deviation between yards, of delivery
YARD_FACTOR = 0.30  # and of each of the three factors
NOISE = 0.52  # standard deviation of what nobody asked about

SKIPPING = 0.06  # share of refits whose respondent left one to three items open

draw = random.Random(SEED)
normal_quantile = statistics.NormalDist().inv_cdf


def normal():
    return normal_quantile(max(draw.random(), 1e-12))


def pick(shares):
    point = draw.random()
    for name, share in shares:
        point -= share
        if point < 0:
            return name
    return shares[-1][0]


def answer(factor, loading):
    """A whole answer from 1 to 7."""
    item = loading * factor + math.sqrt(1 - loading**2) * normal()
    return min(7, max(1, math.floor(ITEM_MEAN + ITEM_SD * item + 0.5)))


def delivery_of(planning, skill, supply, is_complex):
    if not is_complex:
        return SCARCEST * (min(planning, skill, supply) + 0.7)  # its mean is about -0.7
    pairs = planning * skill + planning * supply + skill * supply
    return (ALONE * (planning + skill + supply) + PAIRS * (pairs - 0.9)  # their mean is about 0.9
            + ALL_THREE * planning * skill * supply)


def yard_at(number):
    return {
        "name": f"Y{number:02d}",
        "delivery": YARD_DELIVERY * normal(),
        "factors": [YARD_FACTOR * normal() for _ in range(3)],
        "weight": 0.5 + draw.random(),  # some yards take on more refits than others
    }


def refit_in(yard):
    within = math.sqrt(1 - YARD_FACTOR**2)
    common = normal()
    own = math.sqrt(1 - COMMON**2)
    planning = yard["factors"][0] + within * (COMMON * common + own * normal())
    supply = yard["factors"][1] + within * (COMMON * common + own * normal())
    skill = yard["factors"][2] + within * (COMMON * common + own * normal())
    skill = SUPPLY_TO_SKILL * supply + math.sqrt(1 - SUPPLY_TO_SKILL**2) * skill

    complexity = min(7, max(1, math.floor(4.2 + 1.5 * normal() + 0.5)))
    is_complex = complexity >= COMPLEX_FROM
    sector = pick(SECTOR_SHARES)
    crew_deviation = normal()
    crew = max(4, round(math.exp(3.4 + 0.5 * crew_deviation)))
    delivery = (delivery_of(planning, skill, supply, is_complex) + SECTOR[sector]
                + CREW * crew_deviation + yard["delivery"] + NOISE * normal())

    row = {"yard": yard["name"], "sector": sector,
           "kind": "complex" if is_complex else "simple", "complexity": complexity,
           "crew": crew, "log_crew": f"{math.log(crew):.4f}"}
    for prefix, factor in (("pln", planning), ("skl", skill), ("sup", supply), ("dlv", delivery)):
        for number, loading in enumerate(LOADINGS[prefix], start=1):
            name = f"{prefix}{number}"
            value = answer(factor, loading)
            row[name] = 8 - value if name == REVERSED else value
    leave_open(row)
    return row


def leave_open(row):
    """Some respondents skip items: an empty cell on paper, -9 on screen."""
    if draw.random() >= SKIPPING:
        return
    mark = "" if draw.random() < 0.5 else -9
    items = [name for name in row if name[:3] in LOADINGS]
    for _ in range(1 + math.floor(3 * draw.random())):
        row[items[math.floor(len(items) * draw.random())]] = mark


def main():
    yards = [yard_at(number) for number in range(1, YARDS + 1)]
    # Two refits for every yard, the others by the yards' weights.
    homes = [yard for yard in yards for _ in range(2)]
    shares = [(yard["name"], yard["weight"] / sum(y["weight"] for y in yards)) for yard in yards]
    by_name = {yard["name"]: yard for yard in yards}
    while len(homes) < REFITS:
        homes.append(by_name[pick(shares)])
    homes.sort(key=lambda yard: yard["name"])

    rows = [refit_in(yard) for yard in homes]
    names = ["refit"] + list(rows[0])
    sys.stdout.write(",".join(names) + "\n")
    for number, row in enumerate(rows, start=1):
        row["refit"] = number
        sys.stdout.write(",".join(str(row[name]) for name in names) + "\n")


if __name__ == "__main__":
    main()
