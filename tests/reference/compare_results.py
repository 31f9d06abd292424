#!/usr/bin/env python3
"""Compares two files of the shape of results.json, number by number.

    compare_results.py EXPECTED.json OTHER.json [--tolerance 1e-9] [--brief] [--segment NAME]
                       [--losses EXPECTED.csv OTHER.csv] [--parted EXPECTED.csv OTHER.csv]

Every number of EXPECTED must be in OTHER: theories are matched by name, equations by outcome, terms by label,
constructs and indicators by name, pairs by their two names in either order, segments by name. A null in EXPECTED is not
compared. Verdicts of pairs and the winner must be the same words. --segment NAME takes that segment of OTHER as the whole.
Reversals of OTHER are recomputed from the pairs of its own segments.
Prints, per quantity, how many numbers were compared, the largest disagreement and where it is.
Exit status 1 above the tolerance or where a number is absent.

Disagreement is |x - y| / max(|x|, |y|, floor). The floors keep a number that is 0 up to rounding from counting:
  loss differences and interval limits     a thousandth of the larger loss of the pair
  intercepts and their t                   1
  other coefficients                       a thousandth of the largest of the equation
  t, f, q2, R2, f2, weights, loadings      0.001
  AIC, AICc, BIC, HQ, GM                   1
  p-values and BIC weights                 1e-12
  ends of the thirds                       0.001
  differences of reversals, thirds, stack  a thousandth of a loss
  weights of the stack                     1
Everything else is relative. The p-values of the model confidence set come from two bootstraps: within .02 and two Monte
Carlo standard errors. Where EXPECTED finds the predictions of a pair equal, so that there is no test, the other file must
have none; without such a finding the tests of a pair whose standard error is below 1e-10 of the losses (the same
predictions up to rounding) are not compared. Ranks must be equal unless the losses agree to 1e-9. With --losses the losses
of every row are compared too (columns by name), with a floor of a thousandth of the contestant's mean loss; --parted does
the same for disagreements.csv, whose rows must stand with the largest difference first.
"""
import argparse
import csv
import json
import sys

from model_confidence_set import RESAMPLES, allowed
from plain_verdict import reversals

ABSENT = object()
RATIOS = {"t", "f", "q2", "r2", "adjusted_r2", "f2", "weight", "loading", "relative", "relative_low", "relative_high", "explained", "from", "to"}
CRITERIA = {"aic", "aicc", "bic", "hq", "gm"}
PROBABILITIES = {"p", "p_holm", "f_p", "bic_weight"}


class Comparison:
    def __init__(self, tolerance):
        self.tolerance = tolerance
        self.worst = {}  # quantity -> [count, disagreement, where, x, y]
        self.absent = []

    def same(self, where, what, x, y):
        """Words, names and truth values: equal or not."""
        if x != y:
            self.absent.append(f"{where}, {what}: expected {x!r}, the other file has {'nothing' if y is ABSENT else repr(y)}")

    def number(self, quantity, where, x, y, floor=None, slack=1.0):  # slack: how many tolerances are allowed
        if x is None or x is ABSENT or isinstance(x, (str, dict, list)):
            return
        if not isinstance(y, (int, float)) or isinstance(y, bool):
            self.absent.append(f"{where} {quantity}: expected {x!r}, the other file has "
                               f"{'nothing' if y is ABSENT else repr(y)}")
            return
        if floor is None:
            last = quantity.split(".")[-1]
            floor = 1e-3 if last in RATIOS else 1.0 if last in CRITERIA else 1e-12 if last in PROBABILITIES else 0.0
        size = max(abs(x), abs(y), floor)
        disagreement = abs(x - y) / size / slack if size > 0 else 0.0
        if disagreement != disagreement:
            disagreement = float("inf")
        entry = self.worst.setdefault(quantity, [0, -1.0, where, x, y])
        entry[0] += 1
        if disagreement > entry[1]:
            entry[1:] = [disagreement, where, x, y]

    def mapping(self, prefix, where, x, y, floors=None):
        """All numbers of a flat object."""
        for key, value in x.items():
            if isinstance(value, (dict, str, bool)):
                continue
            other = y.get(key, ABSENT) if isinstance(y, dict) else ABSENT
            if isinstance(value, list):
                if value and all(isinstance(v, (int, float)) for v in value):
                    for i, v in enumerate(value):
                        got = other[i] if isinstance(other, list) and i < len(other) else ABSENT
                        self.number(f"{prefix}.{key}", f"{where} [{i}]", v, got)
                continue
            self.number(f"{prefix}.{key}", where, value, other, (floors or {}).get(key))

    def matched(self, what, key, where, xs, ys):
        """Pairs of entries with the same name; an entry that the other file lacks is reported."""
        known = {y[key]: y for y in ys or []}
        for x in xs or []:
            if x[key] in known:
                yield x, known[x[key]]
            else:
                self.absent.append(f"{where}: the other file has no {what} \"{x[key]}\" (it has: "
                                   f"{', '.join(map(str, known)) or 'none'})")


def compare_held_out(c, where, x, y):
    c.mapping("heldout", where, x, y)
    for a, b in c.matched("indicator", "name", where, x.get("indicators"), y.get("indicators")):
        c.mapping("heldout.indicators", f"{where}, {a['name']}", a, b)


def compare_equations(c, where, xs, ys):
    for x, y in c.matched("equation for", "outcome", where, xs, ys):
        at = f"{where}, equation for {x['outcome']}"
        c.number("equations.r2", at, x.get("r2"), y.get("r2", ABSENT))
        largest = max((abs(t["coefficient"]) for t in x["terms"]), default=0.0)
        for a, b in c.matched("term", "term", at, x["terms"], y.get("terms")):
            intercept = a["term"] == "1"
            floors = {"coefficient": 1.0 if intercept else 1e-3 * largest, "t": 1.0 if intercept else 1e-3}
            c.mapping("equations.terms", f"{at}, term {a['term']}", a, b, floors)


def compare_theories(c, xs, ys):
    losses = [x["heldout"].get("loss") for x in xs or [] if "heldout" in x]
    for x, y in c.matched("theory", "name", "theories", xs, ys):
        where = f"theory {x['name']}"
        held_out = x.get("heldout", {})
        compare_held_out(c, where, held_out, y.get("heldout", {}))
        loss = held_out.get("loss")
        tied = loss is not None and sum(abs(loss - v) <= 1e-9 * loss for v in losses if v is not None) > 1
        if not tied:
            c.number("rank", where, x.get("rank"), y.get("rank", ABSENT))
        for key in ("explained", "first_share"):
            c.number(key, where, x.get(key), y.get(key, ABSENT))
        compare_set(c, where, x.get("confidence_set"), y.get("confidence_set", {}))
        for part in ("fitted", "criteria"):
            c.mapping(part, where, x.get(part, {}), y.get(part, {}))
        compare_equations(c, where, x.get("equations"), y.get("equations"))
        for a, b in c.matched("weights of", "construct", where, x.get("weights"), y.get("weights")):
            for i, j in c.matched("indicator", "name", f"{where}, {a['construct']}", a["indicators"], b["indicators"]):
                c.mapping("weights", f"{where}, {a['construct']}, {i['name']}", i, j)


def compare_set(c, where, x, y):
    """p in the model confidence set, from two bootstraps; the program's has 2000 resamples."""
    for key in ("p_range", "p_max") if x else ():
        p, other = x[key], y.get(key, ABSENT)
        # As a share of what is allowed, scaled so that the whole of it is at the tolerance.
        c.number(f"confidence_set.{key}", where, p, other, floor=1.0, slack=allowed(p, 2000, RESAMPLES) / c.tolerance / max(p, 1.0))


TURNED_WORDS = {"first predicts better": "second predicts better", "second predicts better": "first predicts better"}


def turned(pair, losses):
    """The pair seen from its other side."""
    out = dict(pair, a=pair["b"], b=pair["a"], difference=-pair["difference"])
    loss = losses.get(pair["a"])
    if loss:
        out["relative"] = -pair["difference"] / loss
    for test in ("rows", "corrected", "both"):
        old = pair.get(test) or {}
        new = dict(old)
        if isinstance(old.get("t"), (int, float)):
            new["t"] = -old["t"]
        for mine, theirs in (("low", "high"), ("high", "low")):
            if isinstance(old.get(theirs), (int, float)):
                new[mine] = -old[theirs]
                if loss and f"relative_{mine}" in old:
                    new[f"relative_{mine}"] = new[mine] / loss
        out[test] = new
    if "encompassing" in pair:
        out["encompassing"] = {"a_knows_more": pair["encompassing"]["b_knows_more"],
                               "b_knows_more": pair["encompassing"]["a_knows_more"]}
    if "verdict" in pair:
        out["verdict"] = TURNED_WORDS.get(pair["verdict"], pair["verdict"])
    return out


def compare_tests(c, where, x, y, size):
    """Difference and tests of a pair of contestants whose larger loss is `size`. Says whether there was anything to test."""
    floor = 1e-3 * size
    c.number("pairs.difference", where, x.get("difference"), y.get("difference", ABSENT), floor)
    c.number("pairs.relative", where, x.get("relative"), y.get("relative", ABSENT))
    for test in ("rows", "corrected", "both"):
        mine = x.get(test) or {}
        if mine.get("se") is not None and mine["se"] < 1e-10 * size:
            return False
        c.mapping(f"pairs.{test}", where, mine, y.get(test), {"low": floor, "high": floor})
        if "both" in x and mine.get("p") is None:
            c.same(where, f"{test}.p of equal predictions", None, (y.get(test) or {}).get("p"))
    return x.get("rows", {}).get("p") is not None


def compare_pairs(c, xs, ys, losses):
    known = {(y["a"], y["b"]): y for y in ys or []}
    for x in xs or []:
        a, b = x["a"], x["b"]
        where = f"{a} against {b}"
        y = known.get((a, b)) or (turned(known[b, a], losses) if (b, a) in known else None)
        if y is None:
            c.absent.append(f"{where}: the other file has no such pair")
            continue
        size = max(losses.get(a) or 0.0, losses.get(b) or 0.0)
        c.number("pairs.monte_carlo_se", where, x.get("monte_carlo_se"), y.get("monte_carlo_se", ABSENT), 1e-6 * size)
        if "verdict" in x:
            c.same(where, "verdict", x["verdict"], y.get("verdict", ABSENT))
        if not compare_tests(c, where, x, y, size):
            continue
        for side, test in x.get("encompassing", {}).items():
            c.mapping("pairs.encompassing", f"{where}, {side}", test, y.get("encompassing", {}).get(side))
        if "both" in x:  # a file with verdicts says of every pair whether it is nested
            c.same(where, "nested", x.get("nested", {}).get("inner"), y.get("nested", {}).get("inner"))
            c.mapping("pairs.extra_terms", where, x.get("nested", {}).get("extra_terms", {}), y.get("nested", {}).get("extra_terms"))


def compare_stack(c, x, y):
    loss = x["loss"]
    floors = dict.fromkeys(("difference", "low", "high"), 1e-3 * loss)
    c.mapping("stack", "stack", x, y, floors)
    for test in ("rows", "corrected"):
        c.mapping(f"stack.{test}", "stack", x[test], y.get(test), floors)
    for i, j in c.matched("weight of", "name", "stack", x["weights"], y.get("weights")):
        c.number("stack.weights", i["name"], i["weight"], j["weight"], floor=1.0)
    c.same("stack", "complementary", x["complementary"], y.get("complementary", ABSENT))


def compare_thirds(c, x, y, size):
    c.same("disagreement", "first", x["first"], y.get("first", ABSENT))
    c.same("disagreement", "second", x["second"], y.get("second", ABSENT))
    known = {(t["along"], t["third"]): t for t in y.get("thirds", [])}
    c.same("disagreement", "thirds along", sorted({t["along"] for t in x["thirds"]}), sorted({t["along"] for t in y.get("thirds", [])}))
    for third in x["thirds"]:
        where = f"third {third['third']} of {third['along']}"
        c.mapping("thirds", where, third, known.get((third["along"], third["third"])), {"difference": 1e-3 * size, "se": 1e-3 * size})


def compare_reversals(c, y):
    known = {(r["a"], r["b"], r["first"], r["second"]): r for r in y.get("reversals", [])}
    size = min(t["heldout"]["loss"] for t in y["theories"])
    expected = reversals(y, c.level)
    c.same("reversals", "count", len(expected), sum(r.get("t") is not None for r in known.values()))
    for x in expected:
        where = f"{x['a']} against {x['b']}, {x['first']} against {x['second']}"
        floors = dict.fromkeys(("difference", "difference_first", "difference_second", "low", "high"), 1e-3 * size)
        c.mapping("reversals", where, x, known.get((x["a"], x["b"], x["first"], x["second"])), floors)


def read_losses(path):
    with open(path, encoding="utf-8-sig", newline="") as f:
        return {int(line.pop("row")): {name: float(v) for name, v in line.items()} for line in csv.DictReader(f)}


def compare_losses(c, path_x, path_y):
    xs, ys = read_losses(path_x), read_losses(path_y)
    names = next(iter(xs.values()))
    floor = {name: 1e-3 * sum(x[name] for x in xs.values()) / len(xs) for name in names}
    for row, x in xs.items():
        for name, value in x.items():
            c.number("losses.csv", f"row {row}, {name}", value, ys.get(row, {}).get(name, ABSENT), floor[name])


def compare_parted(c, path_x, path_y):
    """disagreements.csv: every row of the other file, which may show fewer; the largest difference first."""
    with open(path_x, encoding="utf-8", newline="") as f, open(path_y, encoding="utf-8-sig", newline="") as g:
        xs, ys = {line["row"]: line for line in csv.DictReader(f)}, list(csv.DictReader(g))
    if not ys:
        c.absent.append(f"{path_y}: no rows")
    size = sum(abs(float(x["difference"])) for x in xs.values()) / len(xs)
    last = float("inf")
    for y in ys:
        for name, value in xs.get(y["row"], {"row": -1}).items():
            c.number("disagreements.csv", f"row {y['row']}, {name}", float(value), float(y[name]) if name in y else ABSENT, max(size, 1e-3))
        now = abs(float(y["difference"]))
        if now > last * (1 + 1e-9) + 1e-12:
            c.absent.append(f"{path_y}: row {y['row']} stands below a row with a smaller difference")
        last = now


def compare(x, y, tolerance):
    c = Comparison(tolerance)
    c.level = x.get("trial", {}).get("level", 0.05)
    c.mapping("data", "data", {k: v for k, v in x.get("data", {}).items() if k.startswith("rows_")}, y.get("data", {}))
    compare_theories(c, x.get("theories"), y.get("theories"))
    for a, b in c.matched("benchmark", "name", "benchmarks", x.get("benchmarks"), y.get("benchmarks")):
        compare_held_out(c, a["name"], a.get("heldout", {}), b.get("heldout", {}))
    losses = {}
    for file in (y, x):
        for entry in file.get("theories", []) + file.get("benchmarks", []):
            if entry.get("heldout", {}).get("loss") is not None:
                losses[entry["name"]] = entry["heldout"]["loss"]
    compare_pairs(c, x.get("pairs"), y.get("pairs"), losses)
    c.number("trial.repeats", "trial", x.get("trial", {}).get("repeats"), y.get("trial", {}).get("repeats", ABSENT))
    if "winner" in x:
        c.same("the contest", "winner", x["winner"], y.get("winner", ABSENT))
    if "stack" in x:
        compare_stack(c, x["stack"], y.get("stack", {}))
    if "disagreement" in x:
        compare_thirds(c, x["disagreement"], y.get("disagreement", {}), max(losses.values()))
    for a, b in c.matched("segment", "segment", "segments", x.get("segments"), y.get("segments")):
        c.mapping("segments.data", a["segment"], a["data"], b.get("data", {}))
        compare_theories(c, a["theories"], b.get("theories"))
    if "segments" in x:
        c.same("segments", "order", [s["segment"] for s in x["segments"]], [s["segment"] for s in y.get("segments", [])])
        compare_reversals(c, y)
    return c


def main():
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    parser.add_argument("expected")
    parser.add_argument("other")
    parser.add_argument("--tolerance", type=float, default=1e-9)
    parser.add_argument("--brief", action="store_true", help="one line, and only what disagrees")
    parser.add_argument("--segment")
    parser.add_argument("--losses", nargs=2, metavar=("EXPECTED.csv", "OTHER.csv"))
    parser.add_argument("--parted", nargs=2, metavar=("EXPECTED.csv", "OTHER.csv"))
    args = parser.parse_args()
    with open(args.expected, encoding="utf-8") as f, open(args.other, encoding="utf-8") as g:
        expected, other = json.load(f), json.load(g)
    if args.segment:
        other = next(s for s in other["segments"] if s["segment"] == args.segment)
        expected["data"].pop("rows_read")  # of the segment's own file
    c = compare(expected, other, args.tolerance)
    if args.losses:
        compare_losses(c, *args.losses)
    if args.parted:
        compare_parted(c, *args.parted)

    if not c.worst:
        print("nothing to compare")
        return 1
    bad = {q: e for q, e in c.worst.items() if e[1] > args.tolerance}
    for quantity, (count, worst, where, x, y) in c.worst.items():
        if not args.brief or quantity in bad:
            mark = "  <-- above the tolerance" if quantity in bad else ""
            print(f"{quantity:28} {count:6} numbers  {worst:9.2e}  {where}: {x!r} {y!r}{mark}")
    for line in c.absent[:20]:
        print(f"absent: {line}")
    if len(c.absent) > 20:
        print(f"absent: and {len(c.absent) - 20} more")
    drawn = {q for q in c.worst if q.startswith("confidence_set")}  # Monte Carlo error says nothing of the others
    quantity, entry = max(c.worst.items(), key=lambda item: (item[0] not in drawn, item[1][1]))
    print(f"{sum(e[0] for e in c.worst.values())} numbers compared, largest disagreement {entry[1]:.2e} "
          f"({quantity}, {entry[2]}), {len(c.absent)} absent")
    return 1 if bad or c.absent else 0


if __name__ == "__main__":
    sys.exit(main())
