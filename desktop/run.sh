#!/usr/bin/env bash
# Builds the program and runs its main job on the demo site: two fills of the same tank, one that
# goes as expected and one that does not, each compared reading by reading with what the ground
# model expects. Arguments, if any, are passed to the program instead.
set -euo pipefail
cd "$(dirname "$0")/.."
. tests/setup.sh

need_cargo
cargo build --locked --release --bin brimstead
program=target/release/brimstead
if [ $# -gt 0 ]; then
  exec "$program" "$@"
fi

for run in run-good run-bad; do
  out=target/demo/$run
  # A report of an earlier run must not pass for one of this run.
  rm -rf "$out"
  mkdir -p "$out"
  printf '\n== data-demo/%s (an invented site)\n' "$run"
  # A status other than 0 may tell of the readings; whether a report came is what counts here.
  status=0
  "$program" compare data-demo/site.json --readings data-demo/"$run"/* --out "$out" || status=$?
  if [ ! -s "$out/report.html" ]; then
    echo "no report was written (exit status $status)" >&2
    exit 1
  fi
  echo "Exit status $status (what it tells: $program compare --help)"
done
