#!/usr/bin/env bash
# The whole test suite: installs the Debian packages that are missing (as root, or through sudo), builds the program and its tests
# with warnings as errors (build-dev/), runs them, recomputes the reference numbers with the other programs in
# tests/reference/, and runs the suite once more under the address and undefined-behaviour sanitizers (build-sanitize/).
# May be run again at any time. Ends with the summary of ctest.
source "$(dirname "${BASH_SOURCE[0]}")/../examples/install.sh"
cd "$root"

doing "1 of 4: the packages that build and tests need"
install_missing "${program_packages[@]}" catch2 libcsv-dev python3-numpy python3-scipy python3-yaml python3-sklearn \
  python3-statsmodels r-base-core 'r-cran-psychtools?' r-cran-multilevel r-cran-mass

doing "2 of 4: building and testing, warnings are errors (build-dev/)"
build dev
ctest --preset dev --no-label-summary

doing "3 of 4: the same numbers from other programs (tests/reference/)"
# Debian's own Python has the packages above; another one earlier on the path may not.
if [ -x /usr/bin/python3 ]; then export PYTHON=/usr/bin/python3; fi
for check in tests/reference/check_*.sh tests/reference/rerun_*.sh; do "$check"; done
tests/reference/live_check.sh build-dev/rivalfold

doing "4 of 4: once more under the sanitizers (build-sanitize/)"
build sanitize
ctest --preset sanitize --no-label-summary
