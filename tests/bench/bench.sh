#!/bin/sh
# Ratios of one run, printed as a small table; never part of the tests.   bench.sh PROGRAM [--rows N] [--only demo|large]
here=$(cd "$(dirname "$0")" && pwd)
. "$here/../reference/find_python.sh"
exec "$PYTHON" "$here/bench.py" "$@"
