"""What stands beside the paired tests, in plain numpy: both tests together, encompassing and nested-model tests, the
stacked combination, where two theories part, repeats: auto, and reversals between segments.

Called by plain_contest.py; shares no code with the program. Errors are arrays repeats x rows x indicators in units u_j.
"""
import math

import numpy as np
from scipy import optimize, stats

SAME = 1e-13  # differences that agree to this share of the largest loss are all equal


# --------------------------------------------------------------------------------------------------- of one pair


def both_tests(rows, corrected):
    """The larger p and the wider interval."""
    if rows["p"] is None or corrected["p"] is None:
        return {"p": None, "p_holm": None, "low": None, "high": None}
    return {"p": max(rows["p"], corrected["p"]), "p_holm": None,
            "low": min(rows["low"], corrected["low"]), "high": max(rows["high"], corrected["high"])}


def monte_carlo_se(a, b):
    """Of the mean difference, from the spread of the repeats. a, b: losses, repeats x rows."""
    d = (a - b).mean(axis=1)
    return float(d.std(ddof=1) / math.sqrt(len(d))) if len(d) > 1 else None


def standard_error(d, clusters):
    """Of the mean of d over rows, and its degrees of freedom; by cluster as in Liang & Zeger (1986)."""
    if clusters is None:
        return d.std(ddof=1) / math.sqrt(len(d)), len(d) - 1
    _, member = np.unique(clusters.astype(str), return_inverse=True)
    g = member.max() + 1
    if g < 2:
        return math.nan, 0
    sums = np.bincount(member, weights=d - d.mean())
    return math.sqrt(g / (g - 1) * (sums ** 2).sum()) / len(d), g - 1


def knows_more(own, other, clusters):
    """Does `other` hold something that `own` lacks? Harvey, Leybourne & Newbold (1998): d = e_own (e_own - e_other)."""
    d = (own * (own - other)).mean(axis=(0, 2))
    if np.ptp(d) <= SAME * (own ** 2).mean(axis=(0, 2)).max():
        return {"t": None, "df": None, "p": None}
    se, df = standard_error(d, clusters)
    return {"t": float(d.mean() / se), "df": int(df), "p": float(stats.t.sf(d.mean() / se, df))}


def clark_west(inner, outer, clusters):
    """Do the outer theory's extra terms carry information? Clark & West (2007): f = e1^2 - e2^2 + (p1 - p2)^2."""
    f = (inner ** 2 - outer ** 2 + (outer - inner) ** 2).mean(axis=(0, 2))  # p1 - p2 = e2 - e1
    if np.ptp(f) <= SAME * (inner ** 2).mean(axis=(0, 2)).max():
        return {"t": None, "p": None}
    t = float(f.mean() / standard_error(f, clusters)[0])
    return {"t": t, "p": float(stats.norm.sf(t))}


def is_nested(inner, outer, target, mediators):
    """Every term of the inner theory's target equation is one of the outer's, measured alike, and the outer has more.
    A mediator that is itself predicted by an equation breaks the nesting."""
    def terms(theory):
        return {(t.kind, tuple(sorted((m, repr(theory.constructs[m])) for m in t.members)))
                for t in theory.equations[target]}
    if mediators == "predicted":
        for theory in (inner, outer):
            if any(m in theory.equations for t in theory.equations[target] for m in t.members):
                return False
    return terms(inner) < terms(outer)


def t_quantile(level, df):
    """Two-sided quantile of Student's t at 1 - level."""
    q = stats.t.ppf(1 - level / 2, df)
    return q + (stats.t.sf(q, df) - level / 2) / stats.t.pdf(q, df)  # scipy 1.10 is good to 1e-11 only


def outcome(pair, p, loss_a, loss_b, level, margin):
    """The default rule for one pair; p is the larger of the two tests', Holm-adjusted between theories."""
    if pair["both"]["p"] is None:
        return "practically equal"
    reach = max(t_quantile(2 * level, pair[test]["df"]) * pair[test]["se"] for test in ("rows", "corrected"))
    if abs(pair["difference"]) + reach < margin * min(loss_a, loss_b):
        return "practically equal"
    if p < level:
        return "first predicts better" if pair["difference"] < 0 else "second predicts better"
    return "unresolved"


def winner(order, pairs, level):
    """The best-ranked theory, if it beats every rival by the larger unadjusted p and is equal to none."""
    for pair in pairs:
        if order[0] in (pair["a"], pair["b"]) and pair["a"] in order and pair["b"] in order:
            if pair["verdict"] == "practically equal" or not pair["both"]["p"] < level:
                return None
    return order[0]


# -------------------------------------------------------------------------------------------- over all theories


def first_shares(losses):
    """losses: theories x repeats. The share of repeats in which a theory had the smallest loss; ties share."""
    first = losses <= losses.min(axis=0) * (1 + 1e-12)
    return (first / first.sum(axis=0)).mean(axis=1)


def repeats_needed(losses, clusters, start=50, step=10, most=200):
    """repeats: auto stops at the first count at which no pair's Monte Carlo error exceeds a tenth of its standard error.
    losses: theories x repeats x rows. The count, or None if these repeats are too few."""
    for count in range(start, losses.shape[1] + 1, step):
        settled = True
        for a in range(len(losses)):
            for b in range(a):
                d = losses[a, :count] - losses[b, :count]
                error = d.mean(axis=1).std(ddof=1) / math.sqrt(count)
                settled = settled and error <= standard_error(d.mean(axis=0), clusters)[0] / 10
        if settled or count >= most:
            return count
    return None


def simplex_weights(errors):
    """Non-negative weights with sum 1 and the smallest squared error (Breiman 1996). errors: values x theories.

    For any M > 0 the x >= 0 that minimises |Ex|^2 + M (sum x - 1)^2 is a multiple of them: at a given direction w with
    sum 1 the best length leaves M q / (q + M), q = |Ew|^2, which grows with q. So no large penalty is needed.
    Also says whether the weights are determined: near-collinear errors leave them free to about their condition
    number x rounding, while the combined errors are fixed.
    """
    r = np.linalg.qr(errors, mode="r")
    root = math.sqrt((r ** 2).sum() / r.shape[1])
    x, _ = optimize.nnls(np.vstack([r, np.full(r.shape[1], root)]), np.append(np.zeros(len(r)), root))
    return x / x.sum(), np.linalg.cond(r) < 1e5


def stack(errors, splits):
    """errors: theories x repeats x rows x indicators. Each fold's weights come from the repeat's other folds."""
    combined = np.empty(errors.shape[1:])
    weights, determined = [], True
    for r, fold in enumerate(splits):
        for k in np.unique(fold):
            others = errors[:, r, fold != k].reshape(len(errors), -1).T
            w, sure = simplex_weights(others)
            combined[r, fold == k] = np.tensordot(w, errors[:, r, fold == k], axes=1)
            weights.append(w)
            determined = determined and sure
    return combined, np.mean(weights, axis=0), determined


# ---------------------------------------------------------------------------------------------- where two part


def antecedents(theory, scores, target, controls):
    """Name -> score of every construct that its target equation uses; no controls, no categories."""
    members = [m for t in theory.equations[target] for m in t.members]
    return {m: scores[m] for m in members if m in scores and m not in controls}


def thirds(d, along, clusters):
    """Loss differences d by thirds of each score and of the spread between the scores. along: name -> score."""
    along = dict(along)
    if len(along) > 1:
        table = np.array(list(along.values()))
        along["spread of the antecedents"] = table.max(axis=0) - table.min(axis=0)
    out = []
    n = len(d)
    for name, score in along.items():
        order = np.argsort(np.round(score, 9), kind="stable")  # equal up to rounding is equal
        for k in range(3):
            rows = order[n * k // 3:n * (k + 1) // 3]
            se = standard_error(d[rows], None if clusters is None else clusters[rows])[0]
            out.append({"along": name, "third": k + 1, "from": float(score[rows[0]]), "to": float(score[rows[-1]]),
                        "rows": len(rows), "difference": float(d[rows].mean()),
                        "se": None if math.isnan(se) else float(se)})
    return out


# ---------------------------------------------------------------------------------------------------- segments


def holm(p):
    """Holm (1979) step-down adjusted p-values."""
    adjusted, running = [0.0] * len(p), 0.0
    for rank, j in enumerate(sorted(range(len(p)), key=lambda i: p[i])):
        running = max(running, min(1.0, (len(p) - rank) * p[j]))
        adjusted[j] = running
    return adjusted


def reversals(results, level):
    """From the pairs of each segment: D_s - D_s', Welch's degrees of freedom, Holm over all pairs and segments."""
    found = []
    names = [t["name"] for t in results["theories"]]
    for i, first in enumerate(results["segments"]):
        for second in results["segments"][i + 1:]:
            for j, a in enumerate(names):
                for b in names[j + 1:]:
                    sides = [difference_in(segment, a, b) for segment in (first, second)]
                    if None in sides:
                        continue
                    (d1, se1, df1), (d2, se2, df2) = sides
                    se = math.sqrt(se1 ** 2 + se2 ** 2)
                    df = se ** 4 / (se1 ** 4 / df1 + se2 ** 4 / df2)
                    q = t_quantile(level, df)
                    found.append({"a": a, "b": b, "first": first["segment"], "second": second["segment"],
                                  "difference_first": d1, "difference_second": d2, "difference": d1 - d2, "se": se,
                                  "t": (d1 - d2) / se, "df": df, "p": float(2 * stats.t.sf(abs(d1 - d2) / se, df)),
                                  "low": d1 - d2 - q * se, "high": d1 - d2 + q * se})
    for entry, adjusted in zip(found, holm([e["p"] for e in found])):
        entry["p_holm"] = adjusted
    return found


def difference_in(segment, a, b):
    """D of a minus b in a segment, the larger of its two tests' standard errors, and that test's degrees of freedom."""
    for pair in segment["pairs"]:
        if {pair["a"], pair["b"]} == {a, b} and pair["rows"]["se"] is not None and pair["corrected"]["se"] is not None:
            test = max((pair["rows"], pair["corrected"]), key=lambda t: t["se"])
            return (pair["difference"] if pair["a"] == a else -pair["difference"]), test["se"], test["df"]
    return None
