#!/usr/bin/env bash
# Every test, from a fresh clone: installs what is missing, builds, runs ctest.
#
#   release   the whole suite (build/release, warnings are errors)
#   clang     the program built by a second compiler         } the end-to-end tests compare the
#   scalar    the program with Highway's scalar target only  } bytes these three write
#   asan      the unit tests under the address and undefined-behaviour sanitizers
#
# Usage: bash tests/run.sh [LEG...]    default: all four; clang and scalar need release to compare.
# The paths of the other programs reach the tests in STILLFIELD_OTHER_PROGRAMS, separated by ";".
set -euo pipefail

root="$(cd -- "$(dirname -- "${BASH_SOURCE[0]}")/.." && pwd)"
cd -- "$root"

legs=("$@")
[[ ${#legs[@]} -gt 0 ]] || legs=(release clang scalar asan)
for leg in "${legs[@]}"; do
  case "$leg" in
    release | clang | scalar | asan) ;;
    *)
      printf 'run.sh: unknown leg "%s"; the legs are release, clang, scalar and asan\n' "$leg" >&2
      exit 2
      ;;
  esac
done
wants() { [[ " ${legs[*]} " == *" $1 "* ]]; }

started=$SECONDS
done_legs=()
headline() { printf '\n== %s (at %d s)\n' "$1" "$((SECONDS - started))"; }
build() { # preset, then further arguments of cmake --build
  local preset="$1"
  shift
  cmake --build --preset "$preset" --parallel "$(nproc)" "$@"
}

headline "packages"
bash src/cmake/install-packages.sh

other_programs=""
for leg in clang scalar; do
  if wants "$leg"; then
    headline "$leg: the program only"
    cmake --preset "$leg"
    build "$leg" --target stillfield
    program="$root/build/$leg/src/cli/stillfield"
    [[ -x $program ]] || { printf 'run.sh: %s was not built\n' "$program" >&2; exit 1; }
    other_programs+="${other_programs:+;}$program"
    done_legs+=("$leg")
  fi
done
export STILLFIELD_OTHER_PROGRAMS="$other_programs"

if wants release; then
  headline "release: build"
  cmake --preset release -DSTILLFIELD_WERROR=ON
  build release
  headline "release: every test"
  ctest --preset release --parallel "$(nproc)" --no-tests=error </dev/null
  done_legs+=(release)
fi

if wants asan; then
  headline "asan: build"
  cmake --preset asan
  build asan --target unit_tests
  headline "asan: unit tests"
  ctest --preset asan --parallel "$(nproc)" --no-tests=error </dev/null
  done_legs+=(asan)
fi

printf '\nAll tests passed. Legs run: %s. Time: %d min %d s.\n' "${done_legs[*]}" \
  "$(((SECONDS - started) / 60))" "$(((SECONDS - started) % 60))"
