#!/usr/bin/env python3
"""Writes every segment of a study as a study of its own.   segment_alone.py STUDY.yaml OUTDIR

OUTDIR/1, OUTDIR/2 ... each hold study.yaml (without `segment`), data.csv (the segment's rows) and name.txt (the segment's
name). Run alone, such a study deals the same splits as the contest within the segment, and shows them in its folds.csv:
so plain_contest.py can recompute the segments too. The splits of a folds_file cannot be told apart like this.
"""
import csv
import os
import sys

import numpy as np
import yaml

import plain_contest


def main():
    study_path, out = sys.argv[1:]
    survey = plain_contest.read_study(study_path)[2]
    with open(study_path, encoding="utf-8") as f:
        study = yaml.safe_load(f)
    header, cells, delimiter = plain_contest.read_cells(os.path.join(os.path.dirname(study_path), study["data"]["file"]),
                                                        study["data"].get("delimiter", ""))
    del study["data"]["segment"]
    study["data"]["file"] = "data.csv"
    for number, (name, keep) in enumerate(survey.segments.items(), 1):
        folder = os.path.join(out, str(number))
        os.makedirs(folder)
        with open(os.path.join(folder, "data.csv"), "w", encoding="utf-8", newline="") as f:
            lines = csv.writer(f, delimiter=delimiter, lineterminator="\n")
            lines.writerow(header)
            lines.writerows([cells[column][row - 1] for column in header] for row in survey.rows[np.asarray(keep)])
        with open(os.path.join(folder, "study.yaml"), "w", encoding="utf-8") as f:
            yaml.safe_dump(study, f, allow_unicode=True, sort_keys=False)
        with open(os.path.join(folder, "name.txt"), "w", encoding="utf-8") as f:
            f.write(name)


if __name__ == "__main__":
    main()
