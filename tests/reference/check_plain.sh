#!/bin/sh
# Compares plain_contest.py with the reference numbers of open_data/: one line per study, status 1 above 1e-9.
# The studies whose data come with R packages are exported first, or skipped with a sentence.
set -u
here=$(cd "$(dirname "$0")" && pwd)
. "$here/find_python.sh"
work=$(mktemp -d)
trap 'rm -rf "$work"' EXIT
status=0

check() {  # FOLDER
  for reference in "$1"/reference*.json; do
    name=$(basename "$reference" .json)
    study="$1/study${name#reference}.yaml"
    if "$PYTHON" "$here/plain_contest.py" "$study" --folds "$1/folds.csv" -o "$work/plain.json" &&
       line=$("$PYTHON" "$here/compare_results.py" "$reference" "$work/plain.json" --brief); then
      echo "ok      $(basename "$1")/$(basename "$study"): $line"
    else
      echo "WRONG   $(basename "$1")/$(basename "$study"): ${line:-did not run}"; status=1
    fi
  done
}

for folder in attitude swiss judges longley; do check "$here/open_data/$folder"; done
if command -v Rscript >/dev/null 2>&1; then
  Rscript "$here/export_open_data.R" "$work" || status=1
  for folder in bfi lq2002; do if [ -f "$work/$folder/data.csv" ]; then check "$work/$folder"; fi; done
else
  echo "skipped: bfi and lq2002 need R with psychTools and multilevel"
fi
exit $status
