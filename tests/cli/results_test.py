"""The results folder: its files agree with results.json number by number, and its splits give the same numbers back."""
import csv
import hashlib
import io
import json
import math
import re
import sys
import unittest

from running import FILES, ROOT, Place

PROGRAM = sys.argv.pop(1)


def strict(text):
    def refuse(word):
        raise ValueError(f"{word} is no JSON")
    return json.loads(text, parse_constant=refuse)


def table(text):
    return list(csv.DictReader(io.StringIO(text)))


def cell(value):
    """A field of results.json as a csv file shows it, compared as a number."""
    return None if value is None else float(value)


def number(text):
    return None if text == "" else float(text)


def nulls_without_reason(node, path=""):
    if isinstance(node, list):
        return [found for i, item in enumerate(node) for found in nulls_without_reason(item, f"{path}[{i}]")]
    if not isinstance(node, dict):
        return []
    found = []
    for key, value in node.items():
        explained = (node.get("reason") or key == "p_holm" or (key == "f2" and node.get("term") == "1") or
                     (key == "seed" and "folds_file" in node) or (key in ("rank", "heldout", "explained", "first_share", "confidence_set") and node.get("failed")) or
                     key == "winner" or (key in ("stack", "disagreement") and sum(not theory.get("failed") for theory in node["theories"]) < 2))
        if (value is None or (isinstance(value, list) and None in value)) and not explained:
            found.append(f"{path}.{key}")
        found += nulls_without_reason(value, f"{path}.{key}")
    return found


class Agreement:
    """For one study; a subclass says which."""
    source = None
    study = "study.yaml"

    def prepare(self, place):
        pass

    def setUp(self):
        self.place = Place(PROGRAM, ROOT / self.source)
        self.addCleanup(self.place.__exit__)
        self.prepare(self.place)
        said = self.place.run("run", self.study, "-o", "out")
        self.assertEqual(said.status, 0, said.err)
        self.text = self.place.read("out/results.json")
        self.results = strict(self.text)
        self.contestants = {one["name"]: one for one in self.results["theories"] + self.results["benchmarks"]}

    further_files = []

    def rounding(self):
        """Losses that differ by less are equal: file order decides."""
        return 1e-12 * self.contestants["training mean"]["heldout"]["loss"]

    def test_every_file_is_there_and_no_other(self):
        self.assertEqual(sorted(path.name for path in (self.place.folder / "out").iterdir()), sorted(FILES + self.further_files))

    def test_no_number_is_infinite_or_missing_without_a_reason(self):
        for name in FILES + self.further_files:
            for word in ("nan", "inf", "infinity"):
                cells = self.place.read(f"out/{name}").lower().replace(",", " ").replace("|", " ").split()
                self.assertNotIn(word, [each.lstrip("-+") for each in cells], name)
        self.assertEqual(nulls_without_reason(self.results), [])
        for pair in self.results["pairs"]:
            theories = {one["name"] for one in self.results["theories"]}
            for test in ("rows", "corrected"):
                if pair[test]["p"] is not None:
                    self.assertEqual(pair[test]["p_holm"] is None, not {pair["a"], pair["b"]} <= theories)

    def test_ranking_csv(self):
        rows = table(self.place.read("out/ranking.csv"))
        self.assertEqual({row["name"] for row in rows}, set(self.contestants))
        losses = [float(row["loss"]) for row in rows if row["loss"]]
        for better, worse in zip(losses, losses[1:]):
            self.assertLessEqual(better, worse + self.rounding())
        for row in rows:
            one = self.contestants[row["name"]]
            parts = [one["heldout"] or {}, one.get("fitted", {}), one.get("criteria", {}), {key: one.get(key) for key in ("rank", "explained", "first_share")},
                     {f"p_set_{which}": (one.get("confidence_set") or {}).get(f"p_{which}") for which in ("range", "max")}]
            fields = {key: value for part in parts for key, value in part.items()}
            for key in set(row) - {"name", "kind", "verdict"}:
                self.assertEqual(number(row[key]), cell(fields.get(key)), f"{row['name']}: {key}")
            self.assertEqual(row["verdict"], one.get("verdict", ""))
            self.assertEqual(row["kind"], "theory" if "fitted" in one else "benchmark")

    def test_pairs_csv(self):
        rows = table(self.place.read("out/pairs.csv"))
        self.assertEqual([(row["a"], row["b"]) for row in rows], [(pair["a"], pair["b"]) for pair in self.results["pairs"]])
        finished = [name for name, one in self.contestants.items() if one["heldout"]]
        self.assertEqual(len(rows), len(finished) * (len(finished) - 1) // 2)
        for row, pair in zip(rows, self.results["pairs"]):
            for key in ("difference", "relative"):
                self.assertEqual(number(row[key]), pair[key])
            for test in ("rows", "corrected"):
                for key in ("se", "t", "df", "p", "p_holm", "low", "high"):
                    self.assertEqual(number(row[f"{test}_{key}"]), cell(pair[test][key]), f"{row['a']} - {row['b']}: {test} {key}")
            for key in ("p", "p_holm", "low", "high"):
                self.assertEqual(number(row[key]), cell(pair["both"][key]), f"{row['a']} - {row['b']}: {key}")
            self.assertEqual(number(row["monte_carlo_se"]), cell(pair["monte_carlo_se"]))
            for key in ("a_knows_more", "b_knows_more"):
                self.assertEqual(number(row[f"{key}_p"]), cell(pair.get("encompassing", {key: {"p": None}})[key]["p"]))
            nested = pair.get("nested", {"inner": "", "extra_terms": {"p": None}})
            self.assertEqual((row["inner"], number(row["extra_terms_p"])), (nested["inner"], cell(nested["extra_terms"]["p"])))
            self.assertEqual(row["verdict"], pair["verdict"])
            loss = {end: self.contestants[pair[end]]["heldout"]["loss"] for end in "ab"}
            self.assertLessEqual(loss["a"], loss["b"] + self.rounding())
            self.assertAlmostEqual(pair["difference"], loss["a"] - loss["b"], delta=1e-12)

    def test_indicators_csv(self):
        found = {(row["contestant"], row["name"]): row for row in table(self.place.read("out/indicators.csv"))}
        expected = {(name, item["name"]): item for name, one in self.contestants.items() if one["heldout"] for item in one["heldout"]["indicators"]}
        self.assertEqual(set(found), set(expected))
        for key, item in expected.items():
            for field in ("rmse", "mae", "mape", "q2"):
                self.assertEqual(number(found[key][field]), cell(item[field]), f"{key}: {field}")

    def test_losses_csv_averages_to_the_losses(self):
        rows = table(self.place.read("out/losses.csv"))
        self.assertEqual(len(rows), self.results["data"]["rows_used"])
        dropped = {row for drop in self.results["data"]["dropped"] for row in drop["rows"]}
        self.assertEqual([int(row["row"]) for row in rows], [i for i in range(1, self.results["data"]["rows_read"] + 1) if i not in dropped])
        for name, one in self.contestants.items():
            if one["heldout"]:
                mean = math.fsum(float(row[name]) for row in rows) / len(rows)
                self.assertAlmostEqual(mean, one["heldout"]["loss"], delta=1e-12 * abs(one["heldout"]["loss"]), msg=name)

    def test_disagreements_csv(self):
        rows = table(self.place.read("out/disagreements.csv"))
        if "reason" in self.results["disagreement"]:
            self.assertEqual(rows, [])
            return
        first, second = self.results["disagreement"]["first"], self.results["disagreement"]["second"]
        losses = {row["row"]: row for row in table(self.place.read("out/losses.csv"))}
        self.assertEqual({row["row"] for row in rows}, set(losses))
        sizes = [abs(float(row["difference"])) for row in rows]
        self.assertEqual(sizes, sorted(sizes, reverse=True))
        for row in rows:
            for name in (first, second):
                self.assertEqual(row[f"loss: {name}"], losses[row["row"]][name])
            self.assertAlmostEqual(float(row["difference"]), float(row[f"loss: {first}"]) - float(row[f"loss: {second}"]), delta=1e-12)

    def test_folds_csv_gives_the_same_results_back(self):
        splits = table(self.place.read("out/folds.csv"))
        trial = self.results["trial"]
        self.assertEqual(len(splits), self.results["data"]["rows_used"] * trial["repeats"])
        self.assertEqual({int(row["fold"]) for row in splits}, set(range(1, trial["folds"] + 1)))
        self.place.write("splits.csv", self.place.read("out/folds.csv"))
        text = re.sub(r"folds: \d+(,|\n) *repeats: (?:auto *#.*|\d+)(,|\n) *seed: \d+", "folds_file: splits.csv", self.place.read(self.study))
        self.assertIn("splits.csv", text)
        self.place.write("again.yaml", text)
        said = self.place.run("run", "again.yaml", "-o", "again")
        self.assertEqual(said.status, 0, said.err)
        again = strict(self.place.read("again/results.json"))
        self.assertIsNone(again["trial"].pop("seed"))
        self.assertEqual(again["trial"].pop("folds_file"), "splits.csv")
        expected = strict(self.text)
        del expected["trial"]["seed"]
        expected["trial"].pop("folds_file", None)
        for one in (expected, again):  # segments deal folds of their own where no file gives them
            if one.pop("segments", None):
                del one["reversals"], one["advice"]
            one["trial"].pop("auto_repeats", None)
            self.assertIn("splits from a file" if one is again else "seed", one.pop("methods"))
        self.assertEqual(again, expected)
        self.assertEqual(self.place.read("again/folds.csv"), self.place.read("out/folds.csv"))

    def test_threads_change_no_byte(self):
        for threads in ("1", "2", "7"):
            self.assertEqual(self.place.run("run", self.study, "-o", threads, "--threads", threads).status, 0)
            for name in set(FILES) - {"manifest.json"}:
                self.assertEqual(self.place.read(f"{threads}/{name}"), self.place.read(f"out/{name}"), f"{threads} threads: {name}")
            self.assertEqual(strict(self.place.read(f"{threads}/manifest.json"))["threads"], int(threads))

    def test_the_manifest_knows_what_was_read(self):
        manifest = strict(self.place.read("out/manifest.json"))
        study = (self.place.folder / self.study).read_bytes()
        self.assertEqual((self.place.folder / "out/study.yaml").read_bytes(), study)
        self.assertEqual(manifest["study"]["sha256"], hashlib.sha256(study).hexdigest())
        data = (self.place.folder / self.results["data"]["file"]).read_bytes()
        for record in (manifest["data"], self.results["data"]):
            self.assertEqual(record["sha256"], hashlib.sha256(data).hexdigest())
        self.assertRegex(manifest["started"], r"^\d{4}-\d\d-\d\dT\d\d:\d\d:\d\dZ$")


class Demo(Agreement, unittest.TestCase):
    source = "examples/refits"


class OpenData(Agreement, unittest.TestCase):
    source = "examples/regions"


class BySegment(Agreement, unittest.TestCase):
    source = "examples/refits"
    study = "by_complexity.yaml"
    further_files = ["segment_folds.csv", "segment_losses.csv"]

    def test_segment_files_hold_what_the_segments_used(self):
        for segment in self.results["segments"]:
            losses = [row for row in table(self.place.read("out/segment_losses.csv")) if row["segment"] == segment["segment"]]
            self.assertEqual(len(losses), segment["data"]["rows_used"])
            for one in segment["theories"] + segment["benchmarks"]:
                mean = math.fsum(float(row[one["name"]]) for row in losses) / len(losses)
                self.assertAlmostEqual(mean, one["heldout"]["loss"], delta=1e-12)
            splits = [row for row in table(self.place.read("out/segment_folds.csv")) if row["segment"] == segment["segment"]]
            self.assertEqual(len(splits), segment["data"]["rows_used"] * segment["trial"]["repeats"])
            self.assertEqual({row["row"] for row in splits}, {row["row"] for row in losses})


class WithCompleteness(Agreement, unittest.TestCase):
    source = "tests/cli/small"

    def prepare(self, place):
        place.change("study.yaml", "seed: 1}\n", "seed: 1}\nverdict: {completeness: true}\n")


class Absolute(Agreement, unittest.TestCase):
    source = "tests/cli/small"

    def prepare(self, place):
        place.change("study.yaml", "seed: 1}", "seed: 1, loss: absolute, mediators: predicted}")


class ZeroInTheTarget(Agreement, unittest.TestCase):
    """mape does not exist where an answer is 0."""
    source = "tests/cli/small"

    def prepare(self, place):
        place.change("study.yaml", "dlv2], range: [1, 7]}", "dlv2]}")
        place.change("answers.csv", "4,5,5,6,3,4,a", "4,5,5,6,0,4,a")


class FewRows(Agreement, unittest.TestCase):
    """Eight rows and one split each: criteria and tests run out of degrees of freedom."""
    source = "tests/cli/small"

    def prepare(self, place):
        place.write("answers.csv", "\n".join(place.read("answers.csv").splitlines()[:9]) + "\n")
        place.change("study.yaml", "[planning, skill]}", "[{crossed: [planning, skill]}, {square: planning}, {square: skill}, {minimum: [planning, skill]}]}")
        place.change("study.yaml", "folds: 4, repeats: 3, seed: 1", "folds: 8, repeats: 1, seed: 1")


class ACopyAmongTheTheories(Agreement, unittest.TestCase):
    """Two theories that are one: their difference is 0 in every row, so t does not exist."""
    source = "tests/cli/small"

    def prepare(self, place):
        place.change("study.yaml", "  - name: chain\n", "  - name: copy\n    equations: {delivery: [planning, skill]}\n  - name: chain\n")


class PerfectTarget(Agreement, unittest.TestCase):
    """A target that is an antecedent again: errors of rounding only."""
    source = "tests/cli/small"

    def prepare(self, place):
        rows = [row.split(",") for row in place.read("answers.csv").splitlines()]
        place.write("answers.csv", "\n".join(",".join([*row[:4], row[0] if i else "dlv1", row[0] if i else "dlv2", *row[6:]]) for i, row in enumerate(rows)) + "\n")
        place.change("study.yaml", "{indicators: [pln1, pln2]", "{indicators: [pln1]")


class AFailedTheory(Agreement, unittest.TestCase):
    """A geometric mean of scores that are not positive: the theory is shown as failed with its reason."""
    source = "tests/cli/small"

    def prepare(self, place):
        place.change("study.yaml", "target: delivery", "target: delivery\nmetric: response")
        place.change("study.yaml", "pln2], range: [1, 7]}", "pln2]}")
        for items in ("pln1, pln2]", "skl1, skl2]", "dlv1, dlv2]"):
            place.change("study.yaml", items, items + ", weights: equal")
        place.change("answers.csv", "4,5,5,6,3,4,a", "-4,-5,5,6,3,4,a")
        place.change("study.yaml", "  - name: chain\n", "  - name: balanced\n    equations: {delivery: [{geometric_mean: [planning, skill]}]}\n  - name: chain\n")

    def test_the_failure_is_told(self):
        failed = self.contestants["balanced"]
        self.assertEqual((failed["rank"], failed["heldout"]), (None, None))
        self.assertEqual(failed["failed"], "in repeat 1, fold 1: geometric_mean(planning, skill) has no value in some training row: a score there "
                                           "is zero or negative; use minimum or product, or items that start at 1")
        self.assertEqual(sorted(theory["rank"] for theory in self.results["theories"] if theory is not failed), [1, 2])


class EveryTheoryFails(Agreement, unittest.TestCase):
    """Weights of unlike sign under metric: response: only the benchmarks are left."""
    source = "tests/cli/small"

    def prepare(self, place):
        place.change("study.yaml", "target: delivery", "target: delivery\nmetric: response")

    def test_the_benchmarks_are_left(self):
        self.assertEqual([theory["rank"] for theory in self.results["theories"]], [None, None])
        self.assertEqual(len(self.results["pairs"]), 1)


if __name__ == "__main__":
    unittest.main(verbosity=1)
