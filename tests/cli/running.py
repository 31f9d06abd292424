"""Runs the program in a folder of its own and keeps what it said. Knows the small study beside it; Python's own library only."""
import os
import pathlib
import shutil
import subprocess
import tempfile
from dataclasses import dataclass

HERE = pathlib.Path(__file__).resolve().parent
ROOT = HERE.parent.parent

# Every file of a results folder; `help outputs` names them all.
FILES = ["disagreements.csv", "folds.csv", "indicators.csv", "losses.csv", "manifest.json", "pairs.csv", "ranking.csv", "results.json",
         "study.yaml", "table.md"]


@dataclass
class Said:
    status: int
    out: str
    err: str


class Place:
    """A temporary folder that holds a study; programs run inside it."""

    def __init__(self, program, source=HERE / "small"):
        self.program = str(pathlib.Path(program).resolve())
        self.folder = pathlib.Path(tempfile.mkdtemp(prefix="rivalfold "))
        if source:
            shutil.copytree(source, self.folder, dirs_exist_ok=True, ignore=shutil.ignore_patterns("*.results"))

    def __enter__(self):
        return self

    def __exit__(self, *_):
        shutil.rmtree(self.folder, ignore_errors=True)

    def write(self, name, text):
        (self.folder / name).write_bytes(text if isinstance(text, bytes) else text.encode())

    def read(self, name):
        return (self.folder / name).read_text(encoding="utf-8")

    def change(self, name, old, new):
        text = self.read(name)
        assert text.count(old) >= 1, f"{name} does not hold {old!r}"
        self.write(name, text.replace(old, new, 1))

    def environment(self, **more):
        kept = {key: os.environ[key] for key in os.environ if key not in ("NO_COLOR", "LC_ALL", "LANG", "TERM")}
        return {**kept, "TERM": "xterm", "LC_ALL": "C", **more}

    def start(self, *arguments, **settings):
        return subprocess.Popen([self.program, *arguments], cwd=self.folder, env=self.environment(), **settings)

    def run(self, *arguments, **more):
        done = subprocess.run([self.program, *arguments], cwd=self.folder, env=self.environment(**more), capture_output=True,
                              stdin=subprocess.DEVNULL, timeout=120, check=False)
        return Said(done.returncode, done.stdout.decode(), done.stderr.decode())

    def contents(self):
        """Every path below the folder, with the bytes of files."""
        return {str(path.relative_to(self.folder)): path.read_bytes() if path.is_file() and not path.is_symlink() else None
                for path in sorted(self.folder.rglob("*"))}
