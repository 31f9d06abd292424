#!/bin/sh
# Runs every study of studies/, outside/studies/, examples/ and open_data/ with the program, then again in plain numpy on the splits that the program
# used, and compares every number: one line per study with the largest relative disagreement. Segments are compared with the
# same contest on the segment's rows alone; the model confidence sets of bfi and lq2002 with those of a third program.
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
  if grep -q '"segments":' "$out/results.json"; then segments "$1"; fi
}

segments() {  # STUDY.yaml: each segment as a study of its own shows the splits that the contest within it used
  if ! "$PYTHON" "$here/segment_alone.py" "$1" "$out.segments" 2>"$out.log"; then
    echo "WRONG   $name: segment_alone.py failed: $(tail -n 1 "$out.log")"; status=1; return
  fi
  for alone in "$out.segments"/*; do
    segment=$(cat "$alone/name.txt")
    if "$program" run "$alone/study.yaml" -o "$alone/out" >"$out.log" 2>&1 &&
       "$PYTHON" "$here/plain_contest.py" "$alone/study.yaml" --folds "$alone/out/folds.csv" -o "$alone/plain.json" 2>"$out.log" &&
       line=$("$PYTHON" "$here/compare_results.py" "$alone/plain.json" "$out/results.json" --segment "$segment" --brief); then
      echo "ok      $name, segment $segment: $line"
    else
      echo "WRONG   $name, segment $segment: ${line:-$(tail -n 1 "$out.log")}"; status=1
    fi
    line=
  done
}

confidence_set() {  # STUDY.yaml FROZEN.json KEY, after check STUDY.yaml
  name="$(basename "$(dirname "$1")")/$(basename "$1" .yaml)"
  out="$work/$(echo "$name" | tr '/ ' '__')"
  if line=$("$PYTHON" "$here/model_confidence_set.py" "$out/losses.csv" "$out/results.json" "$2" "$3"); then
    echo "ok      confidence set of $name: $line"
  else
    echo "WRONG   confidence set of $name: ${line:-did not run}"; status=1
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
    for folder in "$work"/open/*; do
      [ -f "$folder/data.csv" ] || continue
      confidence_set "$folder/study.yaml" "$folder/confidence_set.json" direct.sq.rows
      confidence_set "$folder/study_absolute.yaml" "$folder/confidence_set.json" direct.abs.rows
      confidence_set "$folder/study_predicted.yaml" "$folder/confidence_set.json" exogenous.sq.rows
    done
  else
    echo "skipped: bfi and lq2002 need R with psychTools and multilevel"
  fi
fi
if [ $status -eq 0 ]; then rm -rf "$work"; else echo "kept: $work"; fi
exit $status
