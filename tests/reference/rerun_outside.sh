#!/bin/sh
# Runs every script of outside/ again and compares what it writes with the frozen values (1e-10 relative).
# Says what was skipped for a missing tool. Status 1 where a value differs.
set -u
here=$(cd "$(dirname "$0")" && pwd)
. "$here/find_python.sh"
work=$(mktemp -d)
trap 'rm -rf "$work"' EXIT
status=0

rerun() {  # COMMAND SCRIPT FROZEN...: runs the script, then compares each frozen file
  command=$1; script=$2; shift 2
  if ! "$command" "$here/outside/$script" "$work" >"$work/log" 2>&1; then
    echo "WRONG   $script: $(tail -n 1 "$work/log")"; status=1; return
  fi
  grep skipped "$work/log"
  for name in "$@"; do
    if said=$("$PYTHON" "$here/compare_frozen.py" "$here/outside/$name" "$work/$name"); then
      echo "ok      $script, $name: $said"
    else
      echo "WRONG   $script: $said"; status=1
    fi
  done
}

if command -v Rscript >/dev/null 2>&1; then
  rerun Rscript models.R models.csv step_swiss.csv hald_cp.csv
  rerun Rscript tests.R paired_t.csv holm.csv quantiles.csv
  rerun Rscript cancor.R cancor.csv
else
  echo "skipped: models.R tests.R cancor.R need R (Debian: r-base-core)"
fi
rerun "$PYTHON" paired_t.py paired_t_scipy.csv
rerun "$PYTHON" corrected_t.py corrected_t.csv
rerun "$PYTHON" simplex_weights.py simplex_weights.json
rerun "$PYTHON" welch.py welch.csv
rerun "$PYTHON" two_blocks.py two_blocks.csv linnerud_mode_a.json linnerud_mode_b.json swiss_mode_a.json swiss_mode_b.json
if "$PYTHON" -c 'import statsmodels.api' >/dev/null 2>&1; then
  rerun "$PYTHON" cluster_se.py cluster_se.csv
else
  echo "skipped: cluster_se.py needs statsmodels (Debian: python3-statsmodels)"
fi
if "$PYTHON" -c 'import sklearn' >/dev/null 2>&1; then
  rerun "$PYTHON" kernel_ridge.py kernel_ridge.csv flexible_linnerud.csv
else
  echo "skipped: kernel_ridge.py needs scikit-learn (Debian: python3-sklearn)"
fi
exit $status
