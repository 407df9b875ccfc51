#!/bin/bash
# Writes run-good and run-bad again from site.json and the seed, bit for bit.
set -euo pipefail
here=$(cd "$(dirname "${BASH_SOURCE[0]}")" && pwd)
cd "$here/.."
cargo run --quiet --package brimstead-demo -- "$here"
