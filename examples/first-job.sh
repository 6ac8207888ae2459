#!/bin/bash
# From a fresh Debian 12 to a table of ranked designs: builds the daemon, starts it on a free port
# with a temporary data folder, sends it one job, shows the answer and stops it.
#
# bash examples/first-job.sh [REQUEST.json]     (default: examples/requests/whip.json)
set -euo pipefail
request=$(realpath "${1:-$(dirname "$0")/requests/whip.json}")
cd "$(dirname "$0")/.."

say() { printf '\n== %s\n' "$*"; }

say "Packages and build"
bash docker/install-packages.sh build example
if [ ! -e build/CMakeCache.txt ]; then
  cmake -S . -B build -G Ninja -DCMAKE_BUILD_TYPE=Release -DBANDWRIGHT_TESTS=OFF
fi
cmake --build build --target bandwrightd -j "$(nproc)"

work=$(mktemp -d)
daemon=""
finish() {
  local status=$?
  trap - EXIT
  if [ -n "$daemon" ]; then
    kill -TERM "$daemon" 2>/dev/null || true
    wait "$daemon" || true
    if [ "$status" != 0 ]; then cat "$work/log" >&2; fi
  fi
  rm -rf "$work"
  exit "$status"
}
trap finish EXIT
trap 'exit 130' INT
trap 'exit 143' TERM

say "Daemon"
build/bin/bandwrightd serve --listen 127.0.0.1:0 --data "$work/data" 2>"$work/log" &
daemon=$!
port=""
for _ in $(seq 300); do
  port=$(sed -n 's/.*"msg":"listening".*"port":\([0-9]*\).*/\1/p' "$work/log")
  [ -z "$port" ] || break
  kill -0 "$daemon" 2>/dev/null || { echo "the daemon ended before it listened" >&2; exit 1; }
  sleep 0.1
done
[ -n "$port" ] || { echo "the daemon does not listen" >&2; exit 1; }
service=http://127.0.0.1:$port
echo "listening at $service"

say "Job: $(basename "$request")"
echo "curl -H 'Content-Type: application/json' -H 'Prefer: wait=30' --data-binary @$(basename "$request") $service/v1/jobs"
begun=$(date +%s%N)
code=$(curl -sS --max-time 90 -D "$work/head" -o "$work/answer.json" -w '%{http_code}' \
  -H 'Content-Type: application/json' -H 'Prefer: wait=30' \
  --data-binary @"$request" "$service/v1/jobs")
# 202: not finished within the wait, and still at work.
while [ "$code" = 202 ]; do
  place=$(sed -n 's/^[Ll]ocation: *\([^[:space:]]*\).*/\1/p' "$work/head")
  curl -sS --max-time 90 -o "$work/answer.json" -H 'Prefer: wait=55' "$service$place"
  ! grep -q '"done":true' "$work/answer.json" || code=201
done
elapsed_ms=$((($(date +%s%N) - begun) / 1000000))
if [ "$code" != 201 ]; then
  echo "the service answered $code:" >&2
  cat "$work/answer.json" >&2
  exit 1
fi
python3 examples/show_designs.py "$work/answer.json"
printf '\nanswered in %d.%03d s\n' $((elapsed_ms / 1000)) $((elapsed_ms % 1000))
