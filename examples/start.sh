#!/usr/bin/env bash
# From a fresh clone to a ranked table: installs the Debian packages that are missing (as root, or through sudo), builds the
# program in release mode (build/rivalfold), and runs the demo study. Writes only into build/ and
# examples/refits/study.results/. May be run again at any time.
source "$(dirname "${BASH_SOURCE[0]}")/install.sh"
cd "$root"

doing "1 of 3: the packages that the build needs"
install_missing "${program_packages[@]}"

doing "2 of 3: building build/rivalfold"
build release

doing "3 of 3: the demo study, on invented data (examples/refits/TRUTH.md)"
build/rivalfold run examples/refits/study.yaml

printf '\nThe program is %s/build/rivalfold. Next: build/rivalfold help study\n' "$root"
