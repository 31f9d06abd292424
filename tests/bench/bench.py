#!/usr/bin/env python3
"""Measures one program in one run and prints ratios, which travel between machines better than seconds do.

    bench.py PROGRAM [--rows 1000000] [--runs 20] [--only demo|large]

demo: the whole process on examples/refits (420 rows, 4 theories, 10 x 10 folds) against plain_contest.py, which
      computes the same numbers on the same splits. Median of the runs (of 3 for plain_contest.py).
large: rows x 24 items, 4 theories of which 2 are nonlinear, 10 x 10 folds. `check` reads the file and fits nothing: it stands
      for the reading time (the smaller of two, file in the page cache). Memory is the peak resident set; the matrix is
      8 bytes x rows x 24. The CPU share is (user + system) / wall: 2.0 is two cores busy all the time.
Not a test: nothing here passes or fails.
"""
import argparse
import os
import shutil
import statistics
import subprocess
import sys
import tempfile
import time

HERE = os.path.dirname(os.path.abspath(__file__))
ROOT = os.path.dirname(os.path.dirname(HERE))


def measure(command):
    """(wall seconds, CPU seconds, peak bytes) of one process."""
    with open(os.devnull, "w") as nothing, tempfile.TemporaryFile("w+") as err:
        start = time.perf_counter()
        process = subprocess.Popen(command, stdout=nothing, stderr=err)
        _, status, usage = os.wait4(process.pid, 0)
        wall = time.perf_counter() - start
        process.returncode = os.waitstatus_to_exitcode(status)
        if process.returncode != 0:
            err.seek(0)
            sys.exit(f"{' '.join(command)} failed:\n{err.read()}")
    return wall, usage.ru_utime + usage.ru_stime, usage.ru_maxrss * 1024


def line(what, value, note=""):
    print(f"  {what:44} {value:>12}  {note}", flush=True)


def demo(program, runs, work):
    study, out = os.path.join(ROOT, "examples", "refits", "study.yaml"), os.path.join(work, "demo")
    run = [program, "run", study, "-o", out]
    measure(run)
    wall = statistics.median(measure(run)[0] for _ in range(runs))
    plain = [sys.executable, os.path.join(ROOT, "tests", "reference", "plain_contest.py"), study,
             "--folds", os.path.join(out, "folds.csv"), "-o", os.path.join(work, "plain.json")]
    slow = statistics.median(measure(plain)[0] for _ in range(3))
    start = statistics.median(measure([sys.executable, "-c", "import numpy, yaml, scipy.stats"])[0] for _ in range(3))
    print("demo study, whole process")
    line("program", f"{1000 * wall:.1f} ms", f"median of {runs}")
    line("plain numpy", f"{1000 * slow:.0f} ms", f"median of 3, of which {1000 * start:.0f} ms start and imports")
    line("plain numpy / program", f"{slow / wall:.0f}", f"without start and imports {(slow - start) / wall:.0f}")


def large(program, rows, kind, work):
    shutil.copy(os.path.join(HERE, "large.yaml"), work)
    data, study = os.path.join(work, "large.csv"), os.path.join(work, "large.yaml")
    subprocess.run([sys.executable, os.path.join(HERE, "make_large.py"), data, str(rows), kind], check=True)
    read = min((measure([program, "check", study]) for _ in range(2)), key=lambda m: m[0])
    wall, cpu, peak = measure([program, "run", study, "-o", os.path.join(work, "large")])
    matrix = 8 * rows * 24
    print(f"{rows} rows x 24 {kind}, file of {os.path.getsize(data) / 1e6:.0f} MB")
    line("reading (check)", f"{read[0]:.2f} s", f"CPU share {read[1] / read[0]:.2f}, peak / matrix {read[2] / matrix:.2f}")
    line("run", f"{wall:.2f} s")
    line("run / reading", f"{wall / read[0]:.2f}")
    line("peak memory", f"{peak / 1e6:.0f} MB", f"peak / matrix {peak / matrix:.2f}")
    line("CPU share of run", f"{cpu / wall:.2f}", f"of {os.cpu_count()} cores")
    os.remove(data)


def main():
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    parser.add_argument("program")
    parser.add_argument("--rows", type=int, default=1_000_000)
    parser.add_argument("--runs", type=int, default=20)
    parser.add_argument("--only", choices=["demo", "large"])
    args = parser.parse_args()
    program = shutil.which(args.program)
    if program is None:
        sys.exit(f"{args.program} is not a program")
    program = os.path.abspath(program)
    with tempfile.TemporaryDirectory() as work:
        if args.only != "large":
            demo(program, args.runs, work)
        if args.only != "demo":
            for kind in ("integers", "decimals"):
                large(program, args.rows, kind, work)


if __name__ == "__main__":
    main()
