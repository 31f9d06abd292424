#!/usr/bin/env python3
"""A whole contest of rival theories in plain numpy: the second, independent way to every number of results.json.

    plain_contest.py STUDY.yaml --folds folds.csv -o numbers.json [--losses losses.csv] [--parted disagreements.csv]

Reads the study and its raw data, takes the splits as given, fits every training set from its raw rows with
ordinary least squares on [1, X], and writes the numbers under the names of results.json. Shares no code with the
program. Slow and plain on purpose of being readable; numpy where an analyst would use numpy. With `segment` the splits
within the segments are not in folds.csv: "segments" then holds what does not depend on them.
Needs Python 3.9 or newer with numpy, PyYAML and scipy (tails and quantiles, non-negative least squares).
"""
import argparse
import csv
import fnmatch
import io
import itertools
import json
import math
import os
from dataclasses import dataclass, field, replace

import numpy as np
import yaml
from scipy import stats

import plain_verdict
from model_confidence_set import confidence_set
from plain_verdict import holm

# ---------------------------------------------------------------------------------------------------- the study


@dataclass(frozen=True)
class Construct:
    name: str
    variables: tuple = ()  # (column, low + high if reversed else None), one per indicator
    weights: str = "mode_a"
    category: str = ""  # the column, for a categorical construct


@dataclass(frozen=True)
class Term:
    kind: str  # name, product, minimum, maximum, square, geometric_mean
    members: tuple

    def identity(self):
        return self.kind, tuple(sorted(self.members))


@dataclass
class Theory:
    name: str
    claim: str
    constructs: dict  # name -> Construct, every construct that its equations and the controls meet
    equations: dict  # outcome -> [Term]; controls included in the target's
    order: list = field(default_factory=list)  # construct names in order of first use


def as_list(value):
    return value if isinstance(value, list) else [value]


def expand(names, header):
    """Column names; a name with * stands for every column that matches, in file order."""
    found = []
    for name in names:
        matches = [c for c in header if fnmatch.fnmatchcase(c, name)] if "*" in name else [name]
        found += [c for c in matches if c not in found]
    return found


def read_construct(name, entry, header):
    if "category" in entry:
        return Construct(name, category=entry["category"])
    columns = expand(as_list(entry["indicators"]), header)
    turned = expand(as_list(entry.get("reversed", [])), header)
    reflect = sum(float(x) for x in entry["range"]) if turned else None
    variables = tuple((c, reflect if c in turned else None) for c in columns)
    return Construct(name, variables, entry.get("weights", "mode_a"))


def read_terms(entries):
    """Terms of one equation, crossed written out, each once."""
    terms = []
    for entry in entries:
        if isinstance(entry, str):
            new = [Term("name", (entry,))]
        else:
            (kind, members), = entry.items()
            members = tuple(as_list(members))
            if kind == "crossed":
                new = [Term("name" if size == 1 else "product", chosen)
                       for size in range(1, len(members) + 1)
                       for chosen in itertools.combinations(members, size)]
            elif kind in ("product", "minimum", "maximum", "geometric_mean") and len(members) == 1:
                new = [Term("name", members)]
            else:
                new = [Term(kind, members)]
        known = {t.identity() for t in terms}
        terms += [t for t in new if t.identity() not in known]
    return terms


def read_theory(entry, study, header):
    equations = {outcome: read_terms(as_list(terms)) for outcome, terms in entry["equations"].items()}
    in_target = equations[study["target"]]
    for control in as_list(study.get("controls", [])):
        if Term("name", (control,)) not in in_target:
            in_target.append(Term("name", (control,)))
    declared = {**study["constructs"], **entry.get("constructs", {})}
    met = []
    for outcome, terms in equations.items():
        met += [outcome] + [m for t in terms for m in t.members]
    order = list(dict.fromkeys(met))
    constructs = {name: read_construct(name, declared[name], header) for name in order}
    return Theory(entry["name"], entry.get("claim", ""), constructs, equations, order)


# ----------------------------------------------------------------------------------------------------- the data


def read_cells(path, delimiter):
    """The header and, per column, its cells as text without surrounding blanks."""
    with open(path, encoding="utf-8-sig", newline="") as f:
        text = f.read()
    if not delimiter:
        first = text.split("\n", 1)[0]
        delimiter = max(",;\t|", key=first.count)
    rows = [r for r in csv.reader(io.StringIO(text, newline=""), delimiter=delimiter) if r]
    header = [c.strip() for c in rows[0]]
    columns = {name: [r[j].strip() for r in rows[1:]] for j, name in enumerate(header)}
    return header, columns, delimiter


def number(text, delimiter=","):
    try:
        return float(text if delimiter == "," else text.replace(",", "."))
    except ValueError:
        return None


def is_code(cell, codes, delimiter):
    value = number(cell, delimiter)
    return cell in codes or (value is not None and any(value == number(c) for c in codes))


def numbers_of(cells, codes, delimiter):
    """The cells as numbers, NaN where there is no answer."""
    known = {c: math.nan if c == "" or is_code(c, codes, delimiter) else number(c, delimiter) for c in set(cells)}
    return np.array([known[c] for c in cells], dtype=float)


@dataclass
class Survey:
    rows_read: int
    rows: np.ndarray  # numbers of the rows used, from 1
    keys: list  # (column, reflect) of every variable
    values: np.ndarray  # rows x variables, reversed where declared; NaN only under rows: mean
    categories: dict  # column -> array of texts
    clusters: np.ndarray  # None without clusters
    segments: dict  # name -> True for its rows; None without segments


def read_survey(study, base, theories, header, cells, delimiter):
    data = study["data"]
    codes = [str(c) for c in as_list(data.get("missing_codes", []))]
    n = len(cells[header[0]])
    keep = np.ones(n, dtype=bool)
    for column, wanted in data.get("where", {}).items():
        wanted = as_list(wanted)
        keep &= np.array([c in wanted or is_code(c, wanted, delimiter) for c in cells[column]])

    used = [c for t in theories for c in t.constructs.values()]
    keys = list(dict.fromkeys(v for c in used for v in c.variables))
    raw = {column: numbers_of(cells[column], codes, delimiter) for column in {k[0] for k in keys}}
    filled_in = data.get("rows", "drop") == "mean"
    target = {v for v in theories[0].constructs[study["target"]].variables}
    target_columns = {column for column, _ in target}
    for column, values in raw.items():
        if not filled_in or column in target_columns:
            keep &= ~np.isnan(values)
    segment = data.get("segment")
    by, cuts = (segment["column"], as_list(segment.get("cuts", []))) if isinstance(segment, dict) else (segment, [])
    texts = {c.category for c in used if c.category} | {name for name in (data.get("cluster"), by) if name}
    for column in texts:
        keep &= np.array([c != "" and not is_code(c, codes, delimiter) for c in cells[column]])

    values = np.column_stack([raw[c] if reflect is None else reflect - raw[c] for c, reflect in keys])
    as_text = {c: np.array(cells[c], dtype=object)[keep] for c in texts}
    return Survey(n, np.flatnonzero(keep) + 1, keys, values[keep], as_text,
                  as_text[data["cluster"]] if "cluster" in data else None,
                  segments_of(by, cuts, as_text[by], delimiter) if by else None)


def sorted_levels(cells):
    """The distinct cells, by value if all are numbers, else as text."""
    levels = sorted(set(cells))
    return sorted(levels, key=float) if all(number(x) is not None for x in levels) else levels


def segments_of(column, cuts, cells, delimiter):
    """The segments, name -> its rows: one per value of the column, or one per span between cuts, its upper end included."""
    if not cuts:
        return {f"{column}: {level}": cells == level for level in sorted_levels(cells)}
    values, ends = np.array([number(cell, delimiter) for cell in cells]), [float(cut) for cut in cuts]
    names = [f"{column} <= {cuts[0]}"] + [f"{a} < {column} <= {b}" for a, b in zip(cuts, cuts[1:])] + [f"{column} > {cuts[-1]}"]
    return {name: (low < values) & (values <= high) for name, low, high in zip(names, [-math.inf] + ends, ends + [math.inf])}


def within(survey, keep):
    """The rows of one segment."""
    return replace(survey, rows=survey.rows[keep], values=survey.values[keep],
                   categories={c: cells[keep] for c, cells in survey.categories.items()},
                   clusters=None if survey.clusters is None else survey.clusters[keep], segments=None)


# ------------------------------------------------------------------------------------- one set of training rows


@dataclass
class Sample:
    """All rows, seen with the eyes of the training rows: filled, standardised, dummy-coded."""
    train: np.ndarray  # True for training rows
    mean: np.ndarray
    sd: np.ndarray
    raw: np.ndarray  # missing cells filled with the training mean
    z: np.ndarray
    dummies: dict  # column -> [(level, 0/1 column)]
    position: dict  # variable -> its column in the arrays above


def see(survey, train):
    v = survey.values
    mean = np.nanmean(v[train], axis=0) if np.isnan(v).any() else v[train].mean(axis=0)
    raw = np.where(np.isnan(v), mean, v)
    sd = raw[train].std(axis=0, ddof=1)
    if (sd == 0).any():
        raise SystemExit(f"constant in a training fold: {survey.keys[int(np.argmin(sd))][0]}")
    dummies = {}
    for column, cells in survey.categories.items():
        dummies[column] = [(level, (cells == level).astype(float)) for level in sorted_levels(cells[train])[1:]]
    position = {key: j for j, key in enumerate(survey.keys)}
    return Sample(train, mean, sd, raw, (raw - mean) / sd, dummies, position)


def block(sample, construct):
    return [sample.position[v] for v in construct.variables]


def scaled(z, w):
    """Weights such that the score has standard deviation 1 and loadings that add up to a positive number."""
    score = z @ w
    w = w / score.std(ddof=1)
    return -w if (z.T @ score).sum() < 0 else w


def composite_weights(theory, sample, rounds=3000, settled=1e-10):
    """Composite path weighting (Wold 1982; Lohmöller 1989, ch. 2), path scheme, all constructs at once per round."""
    measured = [c for c in theory.constructs.values() if c.variables]
    z = {c.name: sample.z[sample.train][:, block(sample, c)] for c in measured}
    weights = {}
    for c in measured:
        start = np.ones(len(c.variables))
        if c.weights == "principal":
            start = np.linalg.eigh(np.corrcoef(z[c.name].T))[1][:, -1] if len(start) > 1 else start
        weights[c.name] = scaled(z[c.name], start)
    moving = [c for c in measured if c.weights in ("mode_a", "mode_b") and len(c.variables) > 1]
    if not moving:
        return weights

    before = {o: list(dict.fromkeys(m for t in terms for m in t.members)) for o, terms in theory.equations.items()}
    after = {c.name: [o for o, members in before.items() if c.name in members] for c in measured}
    centred = {}
    for c in theory.constructs.values():
        if c.category:
            columns = [column[sample.train] for _, column in sample.dummies[c.category]]
            centred[c.name] = [column - column.mean() for column in columns]

    n = sample.train.sum()
    for _ in range(rounds):
        scores = {name: z[name] @ w for name, w in weights.items()}
        change, new = 0.0, dict(weights)
        for c in moving:
            own, proxy = scores[c.name], np.zeros(n)
            if c.name in before:
                x = np.column_stack([column for m in before[c.name]
                                     for column in (centred[m] if m in centred else [scores[m]])])
                proxy += x @ np.linalg.lstsq(x, own, rcond=None)[0]
            for outcome in after[c.name]:
                proxy += (own @ scores[outcome] / (n - 1)) * scores[outcome]
            w = z[c.name].T @ proxy / (n - 1)
            if c.weights == "mode_b":
                w = np.linalg.solve(z[c.name].T @ z[c.name] / (n - 1), w)
            new[c.name] = scaled(z[c.name], w)
            change = max(change, np.abs(new[c.name] - weights[c.name]).max())
        weights = new
        if change < settled:
            return weights
    raise SystemExit(f"theory {theory.name}: the weights did not settle in {rounds} rounds")


def parts_of(theory, sample, weights, metric):
    """Per construct its labelled columns over all rows: one score, or one 0/1 column per level."""
    parts = {}
    for c in theory.constructs.values():
        if c.category:
            parts[c.name] = [(f"{c.name}={level}", column) for level, column in sample.dummies[c.category]]
            continue
        columns = block(sample, c)
        if metric == "standard":
            score = sample.z[:, columns] @ weights[c.name]
        else:
            share = weights[c.name] / sample.sd[columns]
            if not ((share > 0).all() or (share < 0).all()):
                raise SystemExit(f"theory {theory.name}: weights of {c.name} are of mixed sign")
            score = sample.raw[:, columns] @ (share / share.sum())
        parts[c.name] = [(c.name, score)]
    return parts


def columns_of(term, parts):
    """The labelled columns of one term."""
    if term.kind in ("name", "product"):
        return [(" x ".join(label for label, _ in chosen), np.prod([column for _, column in chosen], axis=0))
                for chosen in itertools.product(*(parts[m] for m in term.members))]
    scores = np.array([parts[m][0][1] for m in term.members])
    if term.kind == "square":
        return [(f"square({term.members[0]})", scores[0] ** 2)]
    if term.kind == "geometric_mean":
        values = np.exp(np.log(scores).mean(axis=0))
    else:
        values = scores.min(axis=0) if term.kind == "minimum" else scores.max(axis=0)
    return [(f"{term.kind}({', '.join(term.members)})", values)]


def design(terms, parts):
    pairs = [pair for term in terms for pair in columns_of(term, parts)]
    n = len(next(iter(parts.values()))[0][1]) if not pairs else len(pairs[0][1])
    return ["1"] + [label for label, _ in pairs], np.column_stack([np.ones(n)] + [column for _, column in pairs])


def least_squares(x, y):
    """Ordinary least squares; the minimum-norm solution where x is rank-deficient. Coefficients and rank."""
    b, _, rank, _ = np.linalg.lstsq(x, y, rcond=None)
    return b, int(rank)


# ------------------------------------------------------------------------------------------ held-out prediction


def predict_theory(theory, sample, rules, test=None):
    """Predicted target indicators of the held-out rows, or of the rows `test`."""
    train, test = sample.train, ~sample.train if test is None else test
    weights = composite_weights(theory, sample)
    parts = parts_of(theory, sample, weights, rules.metric)
    trained = {name: [(label, column[train]) for label, column in p] for name, p in parts.items()}
    held_out = {name: [(label, column[test]) for label, column in p] for name, p in parts.items()}

    def predicted(outcome):
        terms = theory.equations[outcome]
        b, _ = least_squares(design(terms, trained)[1], trained[outcome][0][1])
        given = dict(held_out)
        if rules.mediators == "predicted":
            for m in {m for t in terms for m in t.members}:
                if m in theory.equations:
                    given[m] = [(m, predicted(m))]
        return design(terms, given)[1] @ b

    score = trained[rules.target][0][1]
    standard = predicted(rules.target)
    if rules.metric == "response":
        standard = (standard - score.mean()) / score.std(ddof=1)
    columns = block(sample, theory.constructs[rules.target])
    z = sample.z[train][:, columns]
    loadings = z.T @ (score - score.mean()) / ((len(score) - 1) * score.std(ddof=1))
    return sample.mean[columns] + np.outer(standard, sample.sd[columns] * loadings)


def predict_linear(sample, predictors, categories, target):
    """The linear benchmark: every target indicator on every predictor indicator and dummy."""
    x = np.column_stack([np.ones(len(sample.z)), sample.z[:, predictors]]
                        + [column for c in categories for _, column in sample.dummies[c]])
    b, _ = least_squares(x[sample.train], sample.raw[sample.train][:, target])
    return x[~sample.train] @ b


@dataclass
class Rules:
    target: str
    metric: str
    mediators: str
    loss: str
    level: float
    margin: float
    controls: list


def linear_predictors(theories, survey, target):
    """Columns for the linear benchmark, each once, in order of first use; and the categorical columns."""
    taken = {column for column, _ in theories[0].constructs[target].variables}
    predictors, categories = [], []
    for c in (t.constructs[name] for t in theories for name in t.order):
        if c.category and c.category not in categories:
            categories.append(c.category)
        for v in c.variables:
            if v[0] not in taken:
                taken.add(v[0])
                predictors.append(survey.keys.index(v))
    return predictors, categories


def hold_out(theories, survey, splits, rules):
    """errors[contestant]: repeats x rows x target indicators, actual minus predicted."""
    target = [survey.keys.index(v) for v in theories[0].constructs[rules.target].variables]
    actual = survey.values[:, target]
    predictors, categories = linear_predictors(theories, survey, rules.target)
    names = [t.name for t in theories] + ["training mean", "linear benchmark"]
    errors = {name: np.full((len(splits), *actual.shape), np.nan) for name in names}
    for r, fold in enumerate(splits):
        for k in np.unique(fold):
            sample = see(survey, fold != k)
            test = ~sample.train
            for theory in theories:
                errors[theory.name][r, test] = actual[test] - predict_theory(theory, sample, rules)
            errors["training mean"][r, test] = actual[test] - sample.mean[target]
            errors["linear benchmark"][r, test] = actual[test] - predict_linear(sample, predictors, categories, target)
    return errors, actual


def held_out_numbers(e, e_mean, actual, unit, indicators, row_loss):
    mean_of = lambda x: float(np.mean(x))
    table = []
    for j, name in enumerate(indicators):
        table.append({"name": name, "rmse": math.sqrt(mean_of(e[..., j] ** 2)), "mae": mean_of(abs(e[..., j])),
                      "mape": None if (actual[:, j] == 0).any() else 100 * mean_of(abs(e[..., j] / actual[:, j])),
                      "q2": 1 - float((e[..., j] ** 2).sum() / (e_mean[..., j] ** 2).sum())})
    return {"loss": mean_of(row_loss), "rmse": math.sqrt(mean_of((e / unit) ** 2)), "mae": mean_of(abs(e / unit)),
            "q2": 1 - float(((e / unit) ** 2).sum() / ((e_mean / unit) ** 2).sum()), "indicators": table}


# --------------------------------------------------------------------------- the same theories, fitted to all rows


def r_squared(x, y):
    b, rank = least_squares(x, y)
    sse = float(((y - x @ b) ** 2).sum())
    return 1 - sse / float(((y - y.mean()) ** 2).sum()), sse, b, rank


def equation_numbers(outcome, terms, parts):
    labels, x = design(terms, parts)
    y = parts[outcome][0][1]
    r2, sse, b, rank = r_squared(x, y)
    n, p = x.shape
    table = []
    full_rank = rank == p and n > p
    # The standard errors through a QR decomposition, so that near-collinear columns cost no digits.
    se = np.full(p, np.nan)
    if full_rank:
        inverse = np.linalg.inv(np.linalg.qr(x)[1])
        se = np.sqrt(sse / (n - p) * (inverse ** 2).sum(axis=1))
    for j, label in enumerate(labels):
        row = {"term": label, "coefficient": float(b[j]), "se": None, "t": None, "p": None, "f2": None}
        if full_rank and se[j] > 0:
            t = b[j] / se[j]
            row.update(se=float(se[j]), t=float(t), p=float(2 * stats.t.sf(abs(t), n - p)))
        if j > 0 and r2 < 1:
            row["f2"] = (r2 - r_squared(np.delete(x, j, axis=1), y)[0]) / (1 - r2)
        table.append(row)
    return {"outcome": outcome, "r2": r2, "terms": table}, sse, rank, p


def fitted_numbers(r2, sse, rank, p, n):
    a, b = rank - 1, n - rank
    f = r2 / a / ((1 - r2) / b) if a > 0 and b > 0 and r2 < 1 else None
    return {"r2": r2, "adjusted_r2": 1 - (1 - r2) * (n - 1) / b if b > 0 else None, "sse": sse,
            "coefficients_count": p, "f": f, "f_df": [a, b], "f_p": None if f is None else float(stats.f.sf(f, a, b))}


def explain(theories, survey, rules):
    """Fitted numbers, equations, weights and criteria of every theory, from all rows used; and per theory its scores."""
    sample = see(survey, np.ones(len(survey.rows), dtype=bool))
    n = len(survey.rows)
    weights = [composite_weights(t, sample) for t in theories]
    parts = [parts_of(t, sample, w, rules.metric) for t, w in zip(theories, weights)]

    # The full model: every distinct term of any target equation, with the values of the first theory that has it.
    distinct = {}
    for theory, p in zip(theories, parts):
        for term in theory.equations[rules.target]:
            key = term.kind, tuple(sorted((m, repr(theory.constructs[m])) for m in term.members))
            distinct.setdefault(key, columns_of(term, p))
    full = np.column_stack([np.ones(n)] + [column for columns in distinct.values() for _, column in columns])

    out = []
    for theory, w, p in zip(theories, weights, parts):
        entry = {"equations": [], "weights": []}
        score = p[rules.target][0][1]
        unit = score.var(ddof=1)  # 1 in the standard metric; brings response units to standard ones
        for outcome, terms in theory.equations.items():
            numbers, sse, rank, count = equation_numbers(outcome, terms, p)
            entry["equations"].append(numbers)
            if outcome == rules.target:
                entry["fitted"] = fitted_numbers(numbers["r2"], sse / unit, rank, count, n)
        entry["criteria"] = criteria(entry["fitted"]["sse"], entry["fitted"]["coefficients_count"], n, full,
                                     score / math.sqrt(unit))
        for c in theory.constructs.values():
            if c.variables:
                z = sample.z[:, block(sample, c)]
                loadings = z.T @ (z @ w[c.name]) / (n - 1)
                entry["weights"].append({"construct": c.name, "indicators": [
                    {"name": v[0], "weight": float(a), "loading": float(b)}
                    for v, a, b in zip(c.variables, w[c.name], loadings)]})
        entry["explained"] = explained(theory, sample, survey, rules)
        out.append(entry)
    best = min(e["criteria"]["bic"] for e in out)
    share = [math.exp(-(e["criteria"]["bic"] - best) / 2) for e in out]
    for entry, s in zip(out, share):
        entry["criteria"]["bic_weight"] = s / sum(share)
    scores = [{c.name: sample.z[:, block(sample, c)] @ w[c.name] for c in theory.constructs.values() if c.variables}
              for theory, w in zip(theories, weights)]
    return out, scores


def explained(theory, sample, survey, rules):
    """In-sample counterpart of q2: the same predictions for the rows that were fitted, pooled in units u_j."""
    actual = survey.values[:, block(sample, theory.constructs[rules.target])]
    e = (actual - predict_theory(theory, sample, rules, sample.train)) / actual.std(axis=0, ddof=1)
    around = (actual - actual.mean(axis=0)) / actual.std(axis=0, ddof=1)
    return 1 - float((e ** 2).sum() / (around ** 2).sum())


def criteria(sse, p, n, full, score):
    _, sse_full, _, rank_full = r_squared(full, score)
    base = n * math.log(sse / n)
    return {"aic": base + 2 * p,
            "aicc": base + 2 * p + 2 * p * (p + 1) / (n - p - 1) if n > p + 1 else None,
            "bic": base + p * math.log(n),
            "hq": base + 2 * p * math.log(math.log(n)),
            "gm": sse / (sse_full / (n - rank_full)) + p * math.log(n) if n > rank_full else None}


# -------------------------------------------------------------------------------------------- paired comparisons


def one_test(mean, se, df, d, level):
    quantile = plain_verdict.t_quantile(level, df)
    t = mean / se
    return {"se": float(se), "t": float(t), "df": int(df), "p": float(2 * stats.t.sf(abs(t), df)), "p_holm": None,
            "low": float(d - quantile * se), "high": float(d + quantile * se)}


UNDECIDED = {"se": None, "t": None, "df": None, "p": None, "p_holm": None, "low": None, "high": None}


def row_test(d, clusters, level):
    se, df = plain_verdict.standard_error(d, clusters)
    return one_test(d.mean(), se, df, d.mean(), level)


def corrected_test(s, folds, d, level):
    if len(s) < 2:
        return dict(UNDECIDED)
    se = s.std(ddof=1) * math.sqrt(1 / len(s) + 1 / (folds - 1))
    return one_test(s.mean(), se, len(s) - 1, d, level)


def split_means(loss, splits):
    """Mean loss of the held-out rows of each split, repeat by repeat. loss: repeats x rows."""
    return np.array([row[fold == k].mean() for row, fold in zip(loss, splits) for k in np.unique(fold)])


def two_tests(a, b, splits, clusters, level):
    """Loss a minus loss b, each repeats x rows, by the row test and the corrected test."""
    d = a.mean(axis=0) - b.mean(axis=0)
    loss = b.mean()
    pair = {"difference": float(d.mean()), "relative": float(d.mean() / loss) if loss > 0 else None}
    if np.ptp(d) <= plain_verdict.SAME * max(np.abs(a).max(), np.abs(b).max()):
        pair |= {"rows": dict(UNDECIDED), "corrected": dict(UNDECIDED)}
    else:
        pair["rows"] = row_test(d, clusters, level)
        pair["corrected"] = corrected_test(split_means(a, splits) - split_means(b, splits), len(np.unique(splits[0])), d.mean(), level)
    for test in (pair["rows"], pair["corrected"]):
        for end in ("low", "high"):
            test[f"relative_{end}"] = test[end] / loss if test[end] is not None and loss > 0 else None
    pair["both"] = plain_verdict.both_tests(pair["rows"], pair["corrected"])
    return pair


def compare_pairs(order, theories, losses, scaled, survey, splits, rules):
    """theories: name -> Theory; losses[name]: repeats x rows; scaled[name]: errors in units u_j."""
    out = []
    for a, b in itertools.combinations(order, 2):
        pair = {"a": a, "b": b, **two_tests(losses[a], losses[b], splits, survey.clusters, rules.level)}
        pair["monte_carlo_se"] = plain_verdict.monte_carlo_se(losses[a], losses[b])
        if a in theories and b in theories:
            pair["encompassing"] = {"a_knows_more": plain_verdict.knows_more(scaled[b], scaled[a], survey.clusters),
                                    "b_knows_more": plain_verdict.knows_more(scaled[a], scaled[b], survey.clusters)}
            for inner, outer in ((a, b), (b, a)):
                if plain_verdict.is_nested(theories[inner], theories[outer], rules.target, rules.mediators):
                    pair["nested"] = {"inner": inner, "extra_terms": plain_verdict.clark_west(scaled[inner], scaled[outer], survey.clusters)}
        out.append(pair)
    for test in ("rows", "corrected", "both"):
        own = [p[test] for p in out if p["a"] in theories and p["b"] in theories and p[test]["p"] is not None]
        for entry, adjusted in zip(own, holm([e["p"] for e in own])):
            entry["p_holm"] = adjusted
    for pair in out:
        both = pair["both"]
        p = both["p"] if both["p_holm"] is None else both["p_holm"]
        pair["verdict"] = plain_verdict.outcome(pair, p, losses[pair["a"]].mean(), losses[pair["b"]].mean(), rules.level, rules.margin)
    return out


# ------------------------------------------------------------------------------------------------- the contest


def read_splits(path, rows):
    """One array of fold numbers over the rows used, per repeat."""
    with open(path, encoding="utf-8-sig", newline="") as f:
        lines = list(csv.DictReader(f))
    place = {int(r): i for i, r in enumerate(rows)}
    repeats = sorted({int(x["repeat"]) for x in lines})
    splits = {r: np.zeros(len(rows), dtype=int) - 1 for r in repeats}
    for x in lines:
        if int(x["row"]) in place:
            splits[int(x["repeat"])][place[int(x["row"])]] = int(x["fold"])
    for r, fold in splits.items():
        if (fold < 0).any():
            raise SystemExit(f"{path}: repeat {r} leaves row {rows[np.argmin(fold)]} without a fold")
    return [splits[r] for r in repeats]


def read_study(study_path):
    with open(study_path, encoding="utf-8") as f:
        study = yaml.load(f, Loader=yaml.BaseLoader)  # every scalar as text: no guessing of types
    base = os.path.dirname(os.path.abspath(study_path))
    delimiter = {"tab": "\t", "\\t": "\t"}.get(study["data"].get("delimiter", ""), study["data"].get("delimiter", ""))
    header, cells, delimiter = read_cells(os.path.join(base, study["data"]["file"]), delimiter)
    theories = [read_theory(entry, study, header) for entry in study["theories"]]
    survey = read_survey(study, base, theories, header, cells, delimiter)
    trial, verdict = study.get("trial", {}), study.get("verdict", {})
    rules = Rules(study["target"], study.get("metric", "standard"), trial.get("mediators", "measured"),
                  trial.get("loss", "squared"), float(verdict.get("level", 0.05)), float(verdict.get("margin", 0.02)),
                  as_list(study.get("controls", [])))
    return study, theories, survey, rules


def row_losses(scaled, loss):
    """Repeats x rows, from errors in units u_j."""
    return (scaled ** 2 if loss == "squared" else abs(scaled)).mean(axis=2)


def stack_numbers(theories, scaled, losses, best, survey, splits, rules):
    combined, weights, determined = plain_verdict.stack(np.array([scaled[t.name] for t in theories]), splits)
    loss = row_losses(combined, rules.loss)
    tests = two_tests(loss, losses[best], splits, survey.clusters, rules.level)
    both, relative = tests.pop("both"), tests["relative"]
    return {"loss": float(loss.mean()), **tests,
            "weights": [{"name": t.name, "weight": float(w) if determined else None} for t, w in zip(theories, weights)],
            "complementary": both["p"] is not None and both["p"] < rules.level and relative < -rules.margin}


def parting(theories, order, scores, losses, predicted, survey, rules):
    """Where the two best-ranked theories part: the thirds, and a line per row."""
    first, second = (next(i for i, t in enumerate(theories) if t.name == name) for name in order[:2])
    along = plain_verdict.antecedents(theories[first], scores[first], rules.target, rules.controls)
    for name, score in plain_verdict.antecedents(theories[second], scores[second], rules.target, rules.controls).items():
        along.setdefault(name, score)
    a, b = (losses[name].mean(axis=0) for name in order[:2])
    numbers = {"first": order[0], "second": order[1], "thirds": plain_verdict.thirds(a - b, along, survey.clusters)}
    lines = {"row": survey.rows, "actual": predicted["actual"], f"predicted: {order[0]}": predicted[order[0]],
             f"predicted: {order[1]}": predicted[order[1]], f"loss: {order[0]}": a, f"loss: {order[1]}": b,
             "difference": a - b, **{f"score: {name}": score for name, score in along.items()}}
    return numbers, lines


def segment_numbers(theories, survey, rules):
    """Per segment what does not depend on its splits."""
    out = []
    for name, keep in survey.segments.items():
        rows = within(survey, keep)
        out.append({"segment": name, "data": {"rows_read": rows.rows_read, "rows_used": len(rows.rows)},
                    "theories": [{"name": t.name, **numbers} for t, numbers in zip(theories, explain(theories, rows, rules)[0])]})
    return out


def contest(study_path, folds_path):
    study, theories, survey, rules = read_study(study_path)
    splits = read_splits(folds_path, survey.rows)
    errors, actual = hold_out(theories, survey, splits, rules)
    unit = actual.std(axis=0, ddof=1)
    scaled = {name: e / unit for name, e in errors.items()}
    losses = {name: row_losses(e, rules.loss) for name, e in scaled.items()}
    indicators = [column for column, _ in theories[0].constructs[rules.target].variables]
    held_out = {name: held_out_numbers(e, errors["training mean"], actual, unit, indicators, losses[name])
                for name, e in errors.items()}

    in_sample, scores = explain(theories, survey, rules)
    own = np.array([losses[t.name] for t in theories])  # theories x repeats x rows
    ranked = sorted(range(len(theories)), key=lambda i: held_out[theories[i].name]["loss"])
    order = [theories[i].name for i in ranked] + ["training mean", "linear benchmark"]
    by_name = {t.name: t for t in theories}
    pairs = compare_pairs(order, by_name, losses, scaled, survey, splits, rules)
    shares = plain_verdict.first_shares(own.mean(axis=2))
    chosen = confidence_set(own.mean(axis=1).T, survey.clusters)
    for i, entry in enumerate(in_sample):
        entry["first_share"] = float(shares[i])
        entry["confidence_set"] = {"p_range": chosen["p_range"][i], "p_max": chosen["p_max"][i], "shortlisted": chosen["p_max"][i] > rules.level}
    predicted = {name: (actual - errors[name].mean(axis=0)).mean(axis=1) for name in order[:2]}
    parts, lines = parting(theories, order, scores, losses, predicted | {"actual": actual.mean(axis=1)}, survey, rules)

    results = {
        "schema": 1, "study": study["study"],
        "data": {"file": study["data"]["file"], "rows_read": survey.rows_read, "rows_used": len(survey.rows)},
        "trial": {"repeats": len(splits), "level": rules.level},
        "theories": [{"name": theories[i].name, "claim": theories[i].claim, "rank": rank + 1,
                      "heldout": held_out[theories[i].name], **in_sample[i]} for rank, i in enumerate(ranked)],
        "benchmarks": [{"name": name, "heldout": held_out[name]} for name in order[len(theories):]],
        "pairs": pairs,
        "winner": plain_verdict.winner(order[:len(theories)], pairs, rules.level),
        "stack": stack_numbers(theories, scaled, losses, order[0], survey, splits, rules),
        "disagreement": parts,
    }
    if study.get("trial", {}).get("repeats") == "auto":
        results["trial"]["repeats"] = plain_verdict.repeats_needed(own, survey.clusters) or -1
    if survey.segments is not None:
        results["segments"] = segment_numbers(theories, survey, rules)
    return results, survey.rows, {name: losses[name].mean(axis=0) for name in order}, lines


def write_columns(path, columns):
    """A .csv file from column name -> values."""
    with open(path, "w", encoding="utf-8", newline="") as f:
        out = csv.writer(f, lineterminator="\n")
        out.writerow(columns)
        out.writerows([int(row), *map(repr, map(float, values))] for row, *values in zip(*columns.values()))


def main():
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    parser.add_argument("study")
    parser.add_argument("--folds", required=True)
    parser.add_argument("-o", "--output", required=True)
    parser.add_argument("--losses")
    parser.add_argument("--parted")
    args = parser.parse_args()
    results, rows, losses, parted = contest(args.study, args.folds)
    with open(args.output, "w", encoding="utf-8") as f:
        json.dump(results, f, indent=1, ensure_ascii=False)
        f.write("\n")
    if args.losses:
        write_columns(args.losses, {"row": rows, **losses})
    if args.parted:
        write_columns(args.parted, parted)


if __name__ == "__main__":
    main()
