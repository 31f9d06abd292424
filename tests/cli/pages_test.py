"""What is printed: help pages and tables within 80 columns, colour on terminals alone, and names that try to break a format."""
import csv
import io
import json
import os
import pty
import re
import subprocess
import sys
import unicodedata
import unittest

from running import ROOT, Place

PROGRAM = sys.argv.pop(1)
TOPICS = ["study", "terms", "losses", "criteria", "tests", "outputs"]

# Every key that a study file may hold.
STUDY_KEYS = """study data constructs target controls metric theories trial verdict
file delimiter missing_codes rows where cluster segment holdout order
indicators reversed range weights category name claim equations
product crossed minimum maximum square geometric_mean
folds repeats seed folds_file loss mediators level margin completeness
drop mean regression mode_a mode_b equal principal standard response squared absolute measured predicted""".split()


def width(line):
    """Columns on a terminal: East Asian wide characters take two (Unicode Standard Annex 11), combining marks none."""
    return sum(0 if unicodedata.combining(c) else 2 if unicodedata.east_asian_width(c) in "WF" else 1 for c in line)


def words(text):
    return set(re.findall(r"[a-z_0-9]+(?:\.[a-z]+)?", text)) | set(re.findall(r"[a-z_0-9]+", text))


def on_terminal(place, *arguments, **environment):
    """What the program writes to a terminal of 80 columns."""
    main, side = pty.openpty()
    settings = place.environment(COLUMNS="80", **environment)
    with subprocess.Popen([place.program, *arguments], cwd=place.folder, env=settings, stdin=side, stdout=side, stderr=side) as program:
        os.close(side)
        said = b""
        while True:
            try:
                piece = os.read(main, 65536)
            except OSError:  # how Linux tells the end
                break
            if not piece:
                break
            said += piece
    os.close(main)
    return program.returncode, said.decode()


class Pages(unittest.TestCase):
    def fits(self, text, what):
        for line in text.splitlines():
            self.assertLessEqual(width(line), 80, f"{what} is wider than 80 columns: {line}")

    def test_every_topic_prints_within_80_columns(self):
        with Place(PROGRAM) as place:
            for topic in TOPICS:
                said = place.run("help", topic)
                self.assertEqual((said.status, said.err), (0, ""), topic)
                self.assertGreater(len(said.out.splitlines()), 40, topic)
                self.fits(said.out, f"help {topic}")
            for arguments in ([], ["--help"], ["check", "--help"], ["run", "--help"], ["help", "--help"], ["help"]):
                self.fits(place.run(*arguments).out, " ".join(arguments))

    def test_the_list_of_topics_is_the_list_of_pages(self):
        with Place(PROGRAM) as place:
            listed = re.findall(r"^  (\w+) ", place.run("help").out, re.M)
        self.assertEqual(listed, TOPICS)

    def test_help_study_names_every_key(self):
        with Place(PROGRAM) as place:
            page = words(place.run("help", "study").out)
        self.assertEqual([key for key in STUDY_KEYS if key not in page], [])

    def test_help_outputs_names_every_file_field_and_column(self):
        with Place(PROGRAM) as place:
            place.write("splits.csv", "row,repeat,fold\n" + "".join(f"{i},1,{i % 3 + 1}\n" for i in range(1, 25)))
            self.assertEqual(place.run("run", "study.yaml", "-o", "out").status, 0)
            place.change("study.yaml", "folds: 4, repeats: 3, seed: 1", "folds_file: splits.csv")
            self.assertEqual(place.run("run", "study.yaml", "-o", "given").status, 0)
            page = words(place.run("help", "outputs").out)
            missing = set()
            for folder in ("out", "given"):
                for file in (place.folder / folder).iterdir():
                    missing |= {file.name} - page
                    if file.suffix == ".csv" and file.name != "losses.csv":  # which has a column per contestant
                        for column in next(csv.reader(io.StringIO(file.read_text()))):
                            missing |= {re.sub("^(rows|corrected)_|: .*", "", column)} - page
                json.loads(place.read(f"{folder}/results.json"), object_pairs_hook=lambda pairs: missing.update({k for k, _ in pairs} - page))
        self.assertEqual(sorted(missing), [])

    def test_runs_and_checks_fit_80_columns(self):
        for source in ("examples/refits", "examples/regions"):
            with Place(PROGRAM, ROOT / source) as place:
                for arguments in (["check", "study.yaml"], ["run", "study.yaml", "-o", "out"]):
                    said = place.run(*arguments)
                    self.assertEqual(said.status, 0)
                    self.fits(said.out + said.err, f"{source}: {arguments[0]}")


class Colour(unittest.TestCase):
    def test_no_escape_codes_unless_on_a_terminal(self):
        with Place(PROGRAM) as place:
            for arguments in (["run", "study.yaml", "-o", "out"], ["check", "study.yaml"], ["help", "tests"], ["chekc"]):
                said = place.run(*arguments)
                self.assertNotIn("\x1b", said.out + said.err)

    def test_a_terminal_gets_bold_headings_and_no_color_takes_them_away(self):
        with Place(PROGRAM) as place:
            status, shown = on_terminal(place, "check", "study.yaml")
            self.assertEqual(status, 0)
            self.assertIn("\x1b[1mTheories\x1b[0m", shown)
            for setting in ({"NO_COLOR": "1"}, {"TERM": "dumb"}):
                status, plain = on_terminal(place, "check", "study.yaml", **setting)
                self.assertEqual(status, 0)
                self.assertNotIn("\x1b", plain, setting)
                self.assertEqual(plain, re.sub("\x1b\\[[01]m", "", shown))
            # no-color.org: an empty NO_COLOR counts as absent.
            self.assertIn("\x1b", on_terminal(place, "check", "study.yaml", NO_COLOR="")[1])


# Names that are formulas, table breaks, markup, wide or endless. All are allowed in a study.
NAMES = ["=cmd|' /C calc'!A0", "@SUM(1+9)*cmd", "-2+3", "+1", "a|b | c", 'said "yes", twice', "*bold* <b>_x_</b> `code` # [l](u)",
         "back\\slash", "überaus größere Θεωρία", "理論一二三四五六七八九十" * 6, "x" * 130, "e\u0301" * 50]


class HostileNames(unittest.TestCase):
    @classmethod
    def setUpClass(cls):
        cls.place = place = Place(PROGRAM)
        place.change("study.yaml", "pln1, pln2]", '"pln,1", "=pln|2"]')
        rows = place.read("answers.csv").splitlines()
        # A category whose levels move the cursor, ring the bell and turn the reading direction.
        levels = ['"a\x1b[31mb"', '"\x07bell"', '"\u202eright"', '"two\nlines"']
        table = [f"{row.rsplit(',', 1)[0]},{levels[i % 4]}" for i, row in enumerate(rows[1:])]
        place.write("answers.csv", "\n".join(['"pln,1",=pln|2,skl1,skl2,dlv1,dlv2,yard,"pha,se"', *table]) + "\n")
        place.change("study.yaml", "target: delivery", "  phase: {category: \"pha,se\"}\ntarget: delivery\ncontrols: [phase]")
        theories = "".join("  - name: '" + name.replace("'", "''") + "'\n    claim: '" + ("long " * 60 + "|").strip() +
                           "'\n    equations: {delivery: [" + ("planning" if i % 2 else "skill") + "]}\n" for i, name in enumerate(NAMES))
        text = place.read("study.yaml")
        start, end = text.index("  - name: additive"), text.index("trial:")
        place.write("study.yaml", text[:start] + theories + text[end:])
        cls.run_said, cls.check_said = place.run("run", "study.yaml", "-o", "out"), place.run("check", "study.yaml")

    @classmethod
    def tearDownClass(cls):
        cls.place.__exit__()

    def test_terminal(self):
        for said in (self.run_said, self.check_said):
            self.assertEqual(said.status, 0, said.err)
            for line in (said.out + said.err).split("\n"):
                self.assertLessEqual(width(line), 80, line)
                self.assertEqual([c for c in line if unicodedata.category(c) in ("Cc", "Cf", "Zl", "Zp")], [], repr(line))

    def test_csv(self):
        guarded = [("'" if name[0] in "=+-@" else "") + name for name in NAMES]
        ranking = list(csv.DictReader(io.StringIO(self.place.read("out/ranking.csv"))))
        self.assertEqual(sorted(row["name"] for row in ranking if row["kind"] == "theory"), sorted(guarded))
        losses = list(csv.reader(io.StringIO(self.place.read("out/losses.csv"))))
        self.assertEqual(set(losses[0][1:]), {*guarded, "training mean", "linear benchmark"})
        self.assertEqual({len(row) for row in losses}, {len(NAMES) + 3})
        pairs = list(csv.reader(io.StringIO(self.place.read("out/pairs.csv"))))
        self.assertEqual({len(row) for row in pairs}, {len(pairs[0])})

    def test_json(self):
        results = json.loads(self.place.read("out/results.json"))
        self.assertEqual([theory["name"] for theory in results["theories"]], NAMES)
        items = {item["name"] for theory in results["theories"] for block in theory["weights"] for item in block["indicators"]}
        self.assertTrue({"pln,1", "=pln|2"} <= items, items)

    def test_markdown(self):
        table = [line for line in self.place.read("out/table.md").splitlines() if line.startswith("|")]
        self.assertEqual(len(table), len(NAMES) + 4)
        self.assertEqual({len(re.findall(r"(?<!\\)(?:\\\\)*\|", line)) for line in table}, {table[0].count("|")})
        self.assertNotIn("<b>", "".join(re.sub(r"\\.", "", line) for line in table))


if __name__ == "__main__":
    unittest.main(verbosity=1)
