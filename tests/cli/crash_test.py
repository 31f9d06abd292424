"""A results folder is wholly the old one or wholly the new one: killed at any moment, interrupted, or out of space."""
import csv
import hashlib
import io
import json
import os
import random
import resource
import signal
import subprocess
import sys
import time
import unittest

from running import FILES, Place

PROGRAM = sys.argv.pop(1)
REPEATS = 400


class Crash(unittest.TestCase):
    def setUp(self):
        self.place = Place(PROGRAM)
        self.addCleanup(self.place.__exit__)
        for name, seed in (("a.yaml", 1), ("b.yaml", 2)):
            text = self.place.read("study.yaml").replace("repeats: 3, seed: 1", f"repeats: {REPEATS}, seed: {seed}")
            self.place.write(name, text.replace("range: [1, 7]", "weights: equal"))  # weights that settle in every fold
        self.random = random.Random(20240501)

    def left_overs(self):
        return [name for name in os.listdir(self.place.folder) if ".rivalfold-" in name]

    def whole(self):
        """The seed of the results in the folder, after making sure that they are whole and of one run."""
        folder = self.place.folder / "out"
        self.assertEqual({path.name for path in folder.iterdir()}, set(FILES))
        results = json.loads(self.place.read("out/results.json"))
        manifest = json.loads(self.place.read("out/manifest.json"))
        seed = results["trial"]["seed"]
        self.assertEqual(manifest["seed"], seed)
        self.assertEqual(manifest["study"]["sha256"], hashlib.sha256((folder / "study.yaml").read_bytes()).hexdigest())
        self.assertIn(f"seed: {seed}}}", self.place.read("out/study.yaml"))
        for name, lines in (("losses.csv", 25), ("folds.csv", 24 * REPEATS + 1), ("pairs.csv", 7), ("ranking.csv", 5), ("indicators.csv", 9), ("disagreements.csv", 25)):
            text = self.place.read(f"out/{name}")
            rows = list(csv.reader(io.StringIO(text)))
            self.assertEqual((len(rows), {len(row) for row in rows}, text[-1]), (lines, {len(rows[0])}, "\n"), name)
        self.assertIn("What this cannot show", self.place.read("out/table.md"))
        return seed

    def end_at_random_moments(self, how, times):
        began = time.monotonic()
        self.assertEqual(self.place.run("run", "a.yaml", "-o", "out").status, 0)
        lasts = time.monotonic() - began
        times = min(times, max(20, int(20 / lasts)))  # a build with sanitizers is slow
        seed, ended, left, changed = self.whole(), 0, 0, 0
        for moment in range(times):
            name = "b.yaml" if seed == 1 else "a.yaml"
            process = self.place.start("run", name, "-o", "out", stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL)
            if moment % 2 == 0:
                time.sleep(self.random.uniform(0, 1.1 * lasts))
            else:  # while it writes
                mine = f".out.rivalfold-{process.pid}"
                while process.poll() is None and mine not in os.listdir(self.place.folder):
                    pass
                time.sleep(self.random.uniform(0, 0.08 * lasts))
            process.send_signal(how)
            ended += process.wait() == -how
            left += bool(self.left_overs())
            before, seed = seed, self.whole()
            changed += seed != before
        self.assertEqual(self.place.run("run", "a.yaml", "-o", "out").status, 0)
        self.assertEqual(self.whole(), 1)
        self.assertEqual(self.left_overs(), [], "the next run removes what crashed runs left")
        print(f"{how.name}: {times} runs, {ended} ended early, {left} times left-overs beside, {changed} times the new results in place")
        # Or the moments would show nothing.
        self.assertGreater(ended, times // 10)
        self.assertGreater(left, 0)

    def test_killed(self):
        self.end_at_random_moments(signal.SIGKILL, 100)

    def test_interrupted(self):
        self.end_at_random_moments(signal.SIGINT, 30)

    def test_left_overs_of_living_processes_and_other_folders_stay(self):
        for name in (f".out.rivalfold-{os.getpid()}", ".out.rivalfold-", ".out.rivalfold-12x", ".other.rivalfold-999999999", "out.rivalfold-999999999"):
            (self.place.folder / name).mkdir()
        (self.place.folder / ".out.rivalfold-999999999").mkdir()
        self.assertEqual(self.place.run("run", "study.yaml", "-o", "out").status, 0)
        self.assertEqual(sorted(self.left_overs()), sorted([f".out.rivalfold-{os.getpid()}", ".out.rivalfold-", ".out.rivalfold-12x",
                                                            ".other.rivalfold-999999999", "out.rivalfold-999999999"]))

    def refused(self, said, sentence):
        self.assertEqual((said.status, said.out, said.err), (1, "", sentence))

    def test_no_space_left(self):
        """A limit on the size of files stands for a full disk: the write fails half way."""
        self.assertEqual(self.place.run("run", "a.yaml", "-o", "out").status, 0)
        before = self.place.contents()
        for limit in (50000, 1000, 0):
            process = self.place.start("run", "b.yaml", "-o", "out", stdout=subprocess.PIPE, stderr=subprocess.PIPE, restore_signals=False,
                                       preexec_fn=lambda: resource.setrlimit(resource.RLIMIT_FSIZE, (limit, limit)))
            out, err = process.communicate()
            self.assertEqual((process.returncode, out), (1, b""), err)
            self.assertRegex(err.decode(), r"^rivalfold: error: cannot write \./?\.out\.rivalfold-\d+/\w+\.\w+: File too large\n$")
            self.assertEqual(self.place.contents(), before)

    def test_links_and_files_in_the_way(self):
        self.assertEqual(self.place.run("run", "a.yaml", "-o", "out").status, 0)
        os.symlink("out", self.place.folder / "link")
        os.symlink("nowhere", self.place.folder / "dangling")
        os.mkfifo(self.place.folder / "pipe")
        before = self.place.contents()
        for name in ("link", "dangling"):
            self.refused(self.place.run("run", "b.yaml", "-o", name), f"rivalfold: error: {name} is a symbolic link; name the folder that it points to\n")
        self.refused(self.place.run("run", "b.yaml", "-o", "pipe"), "rivalfold: error: pipe is a file; name a folder with -o\n")
        self.assertEqual(self.place.contents(), before)

    def test_a_file_of_the_user_among_the_results(self):
        self.assertEqual(self.place.run("run", "a.yaml", "-o", "out").status, 0)
        self.place.write("out/my notes.txt", "read table.md again")
        before = self.place.contents()
        self.refused(self.place.run("run", "b.yaml", "-o", "out"),
                     'rivalfold: error: out holds "my notes.txt", which no earlier run wrote; the folder was left alone. Name another folder with -o\n')
        self.assertEqual(self.place.contents(), before)

    def test_a_parent_without_permission(self):
        os.chmod(self.place.folder, 0o755)
        (self.place.folder / "closed").mkdir()
        os.chmod(self.place.folder / "closed", 0o555)
        as_nobody = {"user": 65534} if os.geteuid() == 0 else {}
        before = self.place.contents()
        try:
            process = self.place.start("run", "study.yaml", "-o", "closed/out", stdout=subprocess.PIPE, stderr=subprocess.PIPE, **as_nobody)
        except PermissionError:
            self.skipTest("root may write anywhere, and another user may not run the program where it was built")
        out, err = process.communicate()
        self.assertEqual((process.returncode, out, err), (1, b"", b"rivalfold: error: cannot write closed/out: no permission to write in closed\n"))
        self.assertEqual(self.place.contents(), before)

    def test_names_with_spaces_and_a_final_slash(self):
        for given, made in (("two words", "two words"), ("with a slash/", "with a slash"), ("./-dash", "-dash"), ("über/", "über")):
            said = self.place.run("run", "study.yaml", "-o", given)
            self.assertEqual((said.status, said.err.splitlines()[-1]), (0, f"results: {given}"))
            self.assertEqual({path.name for path in (self.place.folder / made).iterdir()}, set(FILES))
        self.assertEqual(self.place.run("run", "study.yaml").status, 0)
        self.assertTrue((self.place.folder / "study.results" / "results.json").exists())
        self.assertEqual(self.left_overs(), [])

    def test_standard_output_that_is_full(self):
        with open("/dev/full", "wb") as full:
            process = self.place.start("run", "study.yaml", "-o", "out", stdout=full, stderr=subprocess.PIPE)
            err = process.communicate()[1].decode()
        self.assertEqual((process.returncode, err.splitlines()[-1]), (1, "rivalfold: error: standard output could not be written in full"))
        self.assertEqual({path.name for path in (self.place.folder / "out").iterdir()}, set(FILES))


if __name__ == "__main__":
    unittest.main(verbosity=1)
