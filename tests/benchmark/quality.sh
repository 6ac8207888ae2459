#!/bin/sh
# Builds and prints the quality table; fails if a target is missed. About 5 minutes on two cores.
#
# Usage: tests/benchmark/quality.sh [--quick] [build folder]
set -eu
root=$(cd "$(dirname "$0")/../.." && pwd)
quick=
if [ "${1:-}" = --quick ]; then
  quick=--quick
  shift
fi
build=${1:-$root/build-benchmark}

cmake -S "$root" -B "$build" -DCMAKE_BUILD_TYPE=Release -DBANDWRIGHT_BENCHMARK=ON >/dev/null
cmake --build "$build" --target bandwright_quality -j2 >/dev/null
exec "$build/bin/bandwright_quality" $quick
