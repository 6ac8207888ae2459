#!/bin/bash
# Runs every test, from nothing: packages, a build with warnings as errors, ctest.
#
# Arguments go to ctest: bash tests/run.sh -R touchstone
set -euo pipefail
cd "$(dirname "$0")/.."

bash docker/install-packages.sh build test

generator=()
[ -e build/CMakeCache.txt ] || generator=(-G Ninja)
cmake -S . -B build "${generator[@]}" -DCMAKE_BUILD_TYPE=Release -DBANDWRIGHT_TESTS=ON \
  -DBANDWRIGHT_WERROR=ON -DBANDWRIGHT_SANITIZE=
cmake --build build -j "$(nproc)"
exec ctest --test-dir build --output-on-failure --no-tests=error -j "$(nproc)" "$@"
