# Read by examples/start.sh and tests/run.sh, not run by itself: Debian packages, build steps, and stopping with a sentence.
# A script that reads this says `doing "what comes next"` before each step.

set -Eeuo pipefail
root=$(cd "$(dirname "${BASH_SOURCE[0]}")/.." && pwd)
step="starting"

doing() {
  step=$1
  printf '\n== %s\n' "$step"
}

stop() {  # stop SENTENCE...: the last thing a failing script says
  trap - ERR
  printf '\n%s stopped: %s\n' "$0" "$*" >&2
  exit 1
}

trap 'stop "this step failed: $step. The lines above say why; once that is put right, run the script again."' ERR
trap 'stop "interrupted. Run it again at any time: it goes on where it can."' INT TERM

is_installed() {
  local status
  status=$(dpkg-query -W -f='${db:Status-Status} ' "$1" 2>/dev/null) || return 1
  [ "${status%% *}" = installed ]
}

is_offered() {  # by the package sources that this machine knows
  local policy
  policy=$(LC_ALL=C apt-cache policy "$1" 2>/dev/null) || return 1
  [[ $policy == *"  Candidate: "[!\(]* ]]
}

as_root() {
  if [ "$(id -u)" -eq 0 ]; then "$@"; else sudo "$@"; fi
}

# install_missing PACKAGE...: installs what dpkg does not have, and nothing else. A name ending in ? is left out,
# with a word about it, where this release of Debian does not offer it.
install_missing() {
  local package missing=() wanted=()
  if ! command -v apt-get >/dev/null || ! command -v dpkg-query >/dev/null; then
    echo "This is no Debian system: nothing is installed, the build uses what is here. It needs the equivalents of: $*"
    return 0
  fi
  for package in "$@"; do
    is_installed "${package%\?}" || missing+=("$package")
  done
  if [ ${#missing[@]} -eq 0 ]; then
    echo "Every package is there already."
    return 0
  fi
  if [ "$(id -u)" -ne 0 ] && ! command -v sudo >/dev/null; then
    for package in "${missing[@]}"; do [ "$package" != "${package%\?}" ] || wanted+=("$package"); done
    [ ${#wanted[@]} -gt 0 ] || { echo "Left out, for want of root or sudo: ${missing[*]%\?}"; return 0; }
    stop "these packages are missing and installing them needs root or sudo: ${wanted[*]}." \
         "As root: apt-get install --no-install-recommends ${wanted[*]}"
  fi
  as_root apt-get -o DPkg::Lock::Timeout=300 update ||
    echo "Not every package source could be read; trying with those that could."
  for package in "${missing[@]}"; do
    if [ "$package" = "${package%\?}" ] || is_offered "${package%\?}"; then
      wanted+=("${package%\?}")
    else
      echo "Left out: ${package%\?}, which this system does not offer. The checks that need it are skipped."
    fi
  done
  [ ${#wanted[@]} -gt 0 ] || return 0
  echo "Installing: ${wanted[*]}"
  as_root env DEBIAN_FRONTEND=noninteractive apt-get -o DPkg::Lock::Timeout=300 install -y --no-install-recommends "${wanted[@]}" ||
    stop "apt-get could not install ${wanted[*]}. Is this machine online, and do its package sources hold Debian 12 or newer, section main?"
}

program_packages=(g++ cmake ninja-build libeigen3-dev libcli11-dev libfmt-dev libyaml-cpp-dev nlohmann-json3-dev
                  libboost-math-dev librandom123-dev nettle-dev)

# Compilers at once: one per core, but no more than memory holds (about 1.5 GB each for the largest files).
compilers_at_once() {
  local cores memory
  cores=$(nproc 2>/dev/null || echo 1)
  memory=$(awk '/^MemAvailable:/ {print int($2 / 1500000)}' /proc/meminfo 2>/dev/null || echo "$cores")
  [ "${memory:-0}" -ge 1 ] || memory=1
  echo $((cores < memory ? cores : memory))
}

build() {  # build PRESET, standing in the clone
  if command -v ccache >/dev/null; then export CMAKE_CXX_COMPILER_LAUNCHER=ccache; fi
  local folder=build-$1 fresh=()
  [ "$1" != release ] || folder=build
  # A clone that was moved or copied with its build folder: CMake refuses the old cache, so start that folder over.
  if [ -f "$folder/CMakeCache.txt" ] && ! grep -qxF "CMAKE_HOME_DIRECTORY:INTERNAL=$root" "$folder/CMakeCache.txt"; then
    fresh=(--fresh)
  fi
  cmake --preset "$1" "${fresh[@]}"
  cmake --build --preset "$1" --parallel "$(compilers_at_once)"
}
