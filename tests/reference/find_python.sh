# Sourced by the scripts of this folder: sets PYTHON to a Python that has numpy, scipy and PyYAML, or skips with a sentence.
# Skipping is status 77 (ctest: SKIP_RETURN_CODE).
for candidate in ${PYTHON:-} python3 /usr/bin/python3; do
  if "$candidate" -c 'import numpy, scipy, yaml' >/dev/null 2>&1; then PYTHON=$candidate; break; fi
  PYTHON=
done
if [ -z "${PYTHON:-}" ]; then
  echo "skipped: needs a Python with numpy, scipy and PyYAML (Debian: python3-numpy python3-scipy python3-yaml)"
  exit 77
fi
