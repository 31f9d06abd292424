#!/bin/sh
# Runs every study of studies/, outside/studies/, examples/ and open_data/ with the program, then again in plain numpy on the splits that the program
# used, and compares every number: one line per study with the largest relative disagreement.
#   live_check.sh PROGRAM [STUDY.yaml ...]
# Status 1 where a study fails or disagrees by more than 1e-9; the work folder is then kept and named.
set -u
[ $# -ge 1 ] || { echo "usage: live_check.sh PROGRAM [STUDY.yaml ...]" >&2; exit 2; }
here=$(cd "$(dirname "$0")" && pwd)
. "$here/find_python.sh"
program=$(command -v "$1") || { echo "live_check.sh: $1 is not a program" >&2; exit 2; }
case $program in /*) ;; *) program="$(pwd)/$program" ;; esac
shift
work=$(mktemp -d)
status=0

check() {  # STUDY.yaml, by its absolute path
  name="$(basename "$(dirname "$1")")/$(basename "$1" .yaml)"
  out="$work/$(echo "$name" | tr '/ ' '__')"
  if ! "$program" run "$1" -o "$out" >"$out.log" 2>&1; then
    echo "WRONG   $name: the program failed: $(grep -m1 error "$out.log" || tail -n 1 "$out.log")"; status=1; return
  fi
  if ! "$PYTHON" "$here/plain_contest.py" "$1" --folds "$out/folds.csv" -o "$out.json" --losses "$out.csv" --parted "$out.parted.csv" 2>"$out.log"; then
    echo "WRONG   $name: plain_contest.py failed: $(tail -n 1 "$out.log")"; status=1; return
  fi
  if line=$("$PYTHON" "$here/compare_results.py" "$out.json" "$out/results.json" --brief --losses "$out.csv" "$out/losses.csv" \
       --parted "$out.parted.csv" "$out/disagreements.csv"); then
    echo "ok      $name: $line"
  else
    echo "WRONG   $name:"; echo "$line" | sed 's/^/        /'; status=1
  fi
}

two_blocks() {  # STUDY.yaml: weights that are known without iterating
  name="$(basename "$1" .yaml)"
  out="$work/$name"
  if "$program" run "$1" -o "$out" >"$out.log" 2>&1 &&
     line=$("$PYTHON" "$here/compare_results.py" "$here/outside/$name.json" "$out/results.json" --brief --tolerance 1e-8); then
    echo "ok      known weights of $name: $line"
  else
    echo "WRONG   known weights of $name: ${line:-$(tail -n 1 "$out.log")}"; status=1
  fi
}

if [ $# -gt 0 ]; then
  for study in "$@"; do check "$(cd "$(dirname "$study")" && pwd)/$(basename "$study")"; done
else
  for study in "$here"/studies/*.yaml "$here"/outside/studies/*.yaml; do check "$study"; done
  for study in "$here"/outside/studies/*.yaml; do two_blocks "$study"; done
  for study in "$here"/../../examples/*/*.yaml; do check "$(realpath "$study")"; done
  for folder in attitude swiss judges longley; do
    for study in "$here/open_data/$folder"/study*.yaml; do check "$study"; done
  done
  if command -v Rscript >/dev/null 2>&1; then
    Rscript "$here/export_open_data.R" "$work/open" | grep skipped
    for study in "$work"/open/*/study.yaml "$work"/open/*/study_absolute.yaml "$work"/open/*/study_predicted.yaml; do
      if [ -f "$study" ]; then check "$study"; fi
    done
  else
    echo "skipped: bfi and lq2002 need R with psychTools and multilevel"
  fi
fi
if [ $status -eq 0 ]; then rm -rf "$work"; else echo "kept: $work"; fi
exit $status
