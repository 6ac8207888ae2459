#!/bin/sh
# Builds the engine's benchmark and prints the report. Needs libbenchmark-dev and python3-numpy;
# SciPy is used from the system where it is installed, else unpacked from the distribution's
# packages into the build folder, because installing it would remove the Boost the project needs.
#
# Usage: tests/benchmark/run.sh [build folder]
set -eu
here=$(cd "$(dirname "$0")" && pwd)
root=$(cd "$here/../.." && pwd)
build=${1:-$root/build-benchmark}

cmake -S "$root" -B "$build" -DCMAKE_BUILD_TYPE=Release -DBANDWRIGHT_BENCHMARK=ON >/dev/null
cmake --build "$build" --target bandwright_benchmark -j2 >/dev/null

# One thread on each side, and no override of the machine's type for the linear algebra library.
unset OPENBLAS_CORETYPE NVPL_BLAS_DEBUG_CPU_TYPE || true
export OMP_NUM_THREADS=1 OPENBLAS_NUM_THREADS=1
export PYTHONDONTWRITEBYTECODE=1
python=/usr/bin/python3
if ! $python -c "import scipy.optimize" 2>/dev/null; then
  unpacked=$build/python-packages
  if [ ! -d "$unpacked/usr" ]; then
    mkdir -p "$unpacked"
    (cd "$unpacked" && apt-get download -qq python3-scipy python3-decorator liblbfgsb0 &&
      for package in ./*.deb; do dpkg -x "$package" .; done) 2>/dev/null
  fi
  export PYTHONPATH="$unpacked/usr/lib/python3/dist-packages"
  for folder in "$unpacked"/usr/lib/*-linux-gnu*; do
    export LD_LIBRARY_PATH="$folder${LD_LIBRARY_PATH:+:$LD_LIBRARY_PATH}"
  done
fi
exec $python "$here/report.py" "$build/bin/bandwright_benchmark"
