#!/usr/bin/env python3
"""A whole contest of rival theories in plain numpy: the second, independent way to every number of results.json.

    plain_contest.py STUDY.yaml --folds folds.csv -o numbers.json [--losses losses.csv]

Reads the study and its raw data, takes the splits as given, fits every training set from its raw rows with
ordinary least squares on [1, X], and writes the numbers under the names of results.json. Shares no code with the
program. Slow and plain on purpose of being readable; numpy where an analyst would use numpy.
Needs Python 3.9 or newer with numpy, PyYAML and scipy (tails and quantiles of t and F only).
"""
import argparse
import csv
import fnmatch
import io
import itertools
import json
import math
import os
from dataclasses import dataclass, field

import numpy as np
import yaml
from scipy import stats

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
    texts = {c.category for c in used if c.category} | ({data["cluster"]} if "cluster" in data else set())
    for column in texts:
        keep &= np.array([c != "" and not is_code(c, codes, delimiter) for c in cells[column]])

    values = np.column_stack([raw[c] if reflect is None else reflect - raw[c] for c, reflect in keys])
    as_text = {c: np.array(cells[c], dtype=object)[keep] for c in texts}
    return Survey(n, np.flatnonzero(keep) + 1, keys, values[keep], as_text,
                  as_text[data["cluster"]] if "cluster" in data else None)


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
        levels = sorted(set(cells[train]))
        if all(number(x) is not None for x in levels):
            levels.sort(key=float)
        dummies[column] = [(level, (cells == level).astype(float)) for level in levels[1:]]
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


def predict_theory(theory, sample, rules):
    """Predicted target indicators of the held-out rows."""
    train, test = sample.train, ~sample.train
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
    """Fitted numbers, equations, weights and criteria of every theory, from all rows used."""
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
        out.append(entry)
    best = min(e["criteria"]["bic"] for e in out)
    share = [math.exp(-(e["criteria"]["bic"] - best) / 2) for e in out]
    for entry, s in zip(out, share):
        entry["criteria"]["bic_weight"] = s / sum(share)
    return out


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
    quantile = stats.t.ppf(1 - level / 2, df)
    quantile += (stats.t.sf(quantile, df) - level / 2) / stats.t.pdf(quantile, df)  # scipy 1.10 is good to 1e-11 only
    t = mean / se
    return {"se": float(se), "t": float(t), "df": int(df), "p": float(2 * stats.t.sf(abs(t), df)), "p_holm": None,
            "low": float(d - quantile * se), "high": float(d + quantile * se)}


UNDECIDED = {"se": None, "t": None, "df": None, "p": None, "p_holm": None, "low": None, "high": None}


def row_test(d, clusters, level):
    n, mean = len(d), d.mean()
    if clusters is None:
        return one_test(mean, d.std(ddof=1) / math.sqrt(n), n - 1, mean, level)
    names, member = np.unique(clusters.astype(str), return_inverse=True)
    sums = np.bincount(member, weights=d - mean)
    g = len(names)
    return one_test(mean, math.sqrt(g / (g - 1) * (sums ** 2).sum()) / n, g - 1, mean, level)


def corrected_test(s, folds, d, level):
    if len(s) < 2:
        return dict(UNDECIDED)
    se = s.std(ddof=1) * math.sqrt(1 / len(s) + 1 / (folds - 1))
    return one_test(s.mean(), se, len(s) - 1, d, level)


def holm(p):
    """Holm (1979) step-down adjusted p-values."""
    adjusted, running = [0.0] * len(p), 0.0
    for rank, j in enumerate(sorted(range(len(p)), key=lambda i: p[i])):
        running = max(running, min(1.0, (len(p) - rank) * p[j]))
        adjusted[j] = running
    return adjusted


def compare_pairs(order, theories, losses, splits, clusters, level):
    """losses[name]: repeats x rows."""
    out = []
    ids = [np.unique(fold, return_inverse=True) for fold in splits]
    folds = len(ids[0][0])
    split_means = {name: np.concatenate([np.bincount(k, weights=row) / np.bincount(k)
                                         for row, (_, k) in zip(loss, ids)]) for name, loss in losses.items()}
    for a, b in itertools.combinations(order, 2):
        d = losses[a].mean(axis=0) - losses[b].mean(axis=0)
        pair = {"a": a, "b": b, "difference": float(d.mean()),
                "relative": float(d.mean() / losses[b].mean()) if losses[b].mean() > 0 else None}
        same = np.ptp(d) <= 1e-13 * max(np.abs(losses[a]).max(), np.abs(losses[b]).max())
        pair["rows"] = dict(UNDECIDED) if same else row_test(d, clusters, level)
        s = split_means[a] - split_means[b]
        pair["corrected"] = dict(UNDECIDED) if same else corrected_test(s, folds, d.mean(), level)
        out.append(pair)
    for test in ("rows", "corrected"):
        own = [p[test] for p in out if p["a"] in theories and p["b"] in theories and p[test]["p"] is not None]
        for entry, adjusted in zip(own, holm([e["p"] for e in own])):
            entry["p_holm"] = adjusted
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


def contest(study_path, folds_path):
    with open(study_path, encoding="utf-8") as f:
        study = yaml.load(f, Loader=yaml.BaseLoader)  # every scalar as text: no guessing of types
    base = os.path.dirname(os.path.abspath(study_path))
    delimiter = {"tab": "\t", "\\t": "\t"}.get(study["data"].get("delimiter", ""), study["data"].get("delimiter", ""))
    header, cells, delimiter = read_cells(os.path.join(base, study["data"]["file"]), delimiter)
    theories = [read_theory(entry, study, header) for entry in study["theories"]]
    survey = read_survey(study, base, theories, header, cells, delimiter)
    trial = study.get("trial", {})
    rules = Rules(study["target"], study.get("metric", "standard"), trial.get("mediators", "measured"),
                  trial.get("loss", "squared"), float(study.get("verdict", {}).get("level", 0.05)))
    splits = read_splits(folds_path, survey.rows)

    errors, actual = hold_out(theories, survey, splits, rules)
    unit = actual.std(axis=0, ddof=1)
    power = 2 if rules.loss == "squared" else 1
    losses = {name: (abs(e / unit) ** power).mean(axis=2) for name, e in errors.items()}
    indicators = [column for column, _ in theories[0].constructs[rules.target].variables]
    held_out = {name: held_out_numbers(e, errors["training mean"], actual, unit, indicators, losses[name])
                for name, e in errors.items()}

    explained = explain(theories, survey, rules)
    ranked = sorted(range(len(theories)), key=lambda i: held_out[theories[i].name]["loss"])
    order = [theories[i].name for i in ranked] + ["training mean", "linear benchmark"]
    results = {
        "schema": 1, "study": study["study"],
        "data": {"file": study["data"]["file"], "rows_read": survey.rows_read, "rows_used": len(survey.rows)},
        "theories": [{"name": theories[i].name, "claim": theories[i].claim, "rank": rank + 1,
                      "heldout": held_out[theories[i].name], **explained[i]} for rank, i in enumerate(ranked)],
        "benchmarks": [{"name": name, "heldout": held_out[name]} for name in order[len(theories):]],
        "pairs": compare_pairs(order, set(order[:len(theories)]), losses, splits, survey.clusters, rules.level),
    }
    return results, survey.rows, {name: losses[name].mean(axis=0) for name in order}


def main():
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    parser.add_argument("study")
    parser.add_argument("--folds", required=True)
    parser.add_argument("-o", "--output", required=True)
    parser.add_argument("--losses")
    args = parser.parse_args()
    results, rows, losses = contest(args.study, args.folds)
    with open(args.output, "w", encoding="utf-8") as f:
        json.dump(results, f, indent=1, ensure_ascii=False)
        f.write("\n")
    if args.losses:
        with open(args.losses, "w", encoding="utf-8", newline="") as f:
            out = csv.writer(f, lineterminator="\n")
            out.writerow(["row", *losses])
            out.writerows([int(r), *map(repr, map(float, values))] for r, values in zip(rows, zip(*losses.values())))


if __name__ == "__main__":
    main()
