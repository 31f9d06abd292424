"""Compares whole runs with expected files: exit status, standard output, standard error, and that a failed run wrote nothing.

    golden.py PROGRAM EXPECTED.txt             shows every difference
    golden.py PROGRAM EXPECTED.txt --rewrite   writes what the program says now; read the change before committing it

An expected file is a list of cases:

    == name of the case
    from examples/refits                 the folder that is copied (default: tests/cli/small)
    study: OLD => NEW                    one change of study.yaml; \\n is a line break
    data: OLD => NEW                     the same for answers.csv
    file NAME: TEXT                      a further file; folder NAME: a further folder
    $ rivalfold ARGUMENTS
    -- status N
    -- stdout
    -- stderr
"""
import difflib
import pathlib
import re
import shlex
import sys

from running import HERE, ROOT, Place


def unescaped(text):
    return text.encode("latin-1", "backslashreplace").decode("unicode_escape").encode("utf-8", "surrogatepass")


def read_cases(path):
    cases = []
    for line in path.read_text(encoding="utf-8").splitlines():
        if line.startswith("== "):
            cases.append({"name": line[3:], "setup": [], "expected": []})
        elif not cases:
            continue  # the head of the file
        elif line.startswith("-- ") or cases[-1]["expected"]:
            cases[-1]["expected"].append(line)
        elif line:
            cases[-1]["setup"].append(line)
    return cases


def prepare(place, line):
    kind, _, rest = line.partition(": ")
    if kind in ("study", "data"):
        old, new = rest.split(" => ")
        place.change("study.yaml" if kind == "study" else "answers.csv", unescaped(old).decode(), unescaped(new).decode())
    elif kind.startswith("file "):
        place.write(kind[5:], unescaped(rest))
    elif kind.startswith("folder "):
        (place.folder / kind[7:].rstrip(":")).mkdir()
    else:
        raise SystemExit(f"golden.py does not know: {line}")


def said_by(program, case):
    setup = list(case["setup"])
    source = ROOT / setup.pop(0)[5:] if setup[0].startswith("from ") else HERE / "small"
    command = next(line for line in setup if line.startswith("$ rivalfold"))
    with Place(program, source) as place:
        for line in setup:
            if line != command:
                prepare(place, line)
        before = place.contents()
        arguments = shlex.split(command)[2:]
        said = place.run(*arguments)
        lines = [f"-- status {said.status}", "-- stdout", *said.out.splitlines(), "-- stderr", *said.err.splitlines()]
        if said.status != 0 and place.contents() != before:
            lines.append("-- a failed run changed files: " + ", ".join(sorted(place.contents().keys() ^ before.keys())))
    return lines


def compared(case, lines):
    """Lines as they are compared. The layout of --help belongs to the command-line library and differs between its releases."""
    lines = [line.rstrip() for line in lines]
    while lines and not lines[-1]:
        lines.pop()
    if not any(line.endswith("--help") or line == "$ rivalfold" for line in case["setup"]):
        return lines
    return [re.sub(r"\s+", " ", line).strip().lower() for line in lines if line]


def main():
    program, path = sys.argv[1], pathlib.Path(sys.argv[2])
    cases = read_cases(path)
    head = path.read_text(encoding="utf-8").partition("== ")[0]
    wrong, text = 0, head
    for case in cases:
        found = said_by(program, case)
        text += "\n".join(["== " + case["name"], *case["setup"], *found]) + "\n\n"
        difference = list(difflib.unified_diff(compared(case, case["expected"]), compared(case, found), "expected", "found", lineterm="", n=2))
        if difference:
            wrong += 1
            print(f"\n== {case['name']}", *case["setup"], *difference, sep="\n")
    if "--rewrite" in sys.argv:
        path.write_text(text, encoding="utf-8")
        print(f"{len(cases)} cases written, {wrong} changed")
        return 0
    print(f"{len(cases)} cases, {wrong} differ")
    return 1 if wrong or not cases else 0


if __name__ == "__main__":
    sys.exit(main())
