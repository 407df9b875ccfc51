#!/usr/bin/env bash
# Every check of the project, from nothing but a fresh Debian 12 with cargo. Goes on after a
# failure; the last line is "N passed, N failed" over all tests and steps; the status is non-zero
# when anything failed.
set -uo pipefail
cd "$(dirname "$0")/.."
. tests/setup.sh

export CARGO_TERM_COLOR=never CARGO_TERM_QUIET=true
# A changed snapshot fails; it is never rewritten by a run of the checks.
export INSTA_UPDATE=no
passed=0 failed=0 summary=() started=$SECONDS

# step NAME COMMAND...: runs it, shows its output, counts it and the tests it reports.
step() {
  local name=$1 log status before=$SECONDS verdict
  shift
  printf '\n== %s\n' "$name"
  log=$(mktemp)
  "$@" 2>&1 | tee "$log"
  status=${PIPESTATUS[0]}
  if [ "$status" -eq 0 ]; then
    verdict=passed passed=$((passed + 1))
  else
    verdict=FAILED failed=$((failed + 1))
  fi
  count_tests "$log"
  rm -f "$log"
  summary+=("$(printf '%-7s %5d s  %s' "$verdict" $((SECONDS - before)) "$name")")
}

# "test result: ok. 12 passed; 0 failed; ..." as cargo prints it for each test program.
count_tests() {
  local sums
  sums=$(awk '/^test result: / { passed += $4; failed += $6 } END { print passed + 0, failed + 0 }' "$1")
  passed=$((passed + ${sums% *})) failed=$((failed + ${sums#* }))
}

set_up() {
  need_cargo
  local tool
  for tool in fmt clippy; do
    cargo "$tool" --version >/dev/null 2>&1 && continue
    echo "set-up: adding cargo $tool: a check below runs it"
    rustup component add "${tool/fmt/rustfmt}" || return
  done
  need qemu-system-arm "emulates the logger's processor" qemu-system-arm
  need npm "builds and checks the front end of the window" nodejs npm
  # From here on nothing needs the network.
  cargo fetch --locked && cargo fetch --locked --manifest-path firmware-demo/image/Cargo.toml
}

documentation() {
  RUSTDOCFLAGS="-D warnings" cargo doc --locked --no-deps
}

# From the lock file; what the window ships is built, so that the shell can hold it.
front_end() {
  cd desktop/ui || return
  npm ci --no-audit --no-fund && npm run check && npm run lint && npm test && npm run build
}

set_up || { echo "set-up failed: nothing was checked"; exit 3; }
step "formatting" cargo fmt --all --check
step "formatting of the image" cargo fmt --manifest-path firmware-demo/image/Cargo.toml --check
step "lints" cargo clippy --locked --all-targets -- -D warnings
step "documentation" documentation
step "build" cargo build --locked
step "tests" cargo test --locked --no-fail-fast
step "front end of the window" front_end
step "core for the logger's processor" bash firmware-demo/build.sh core
step "no panic is reachable in the core" bash firmware-demo/build.sh no-panic
step "logger image" bash firmware-demo/build.sh image
step "emulated logger agrees with this machine" \
  cargo test --locked -p brimstead-tests --test emulated_logger -- --ignored --nocapture

printf '\n== summary (%d s)\n' $((SECONDS - started))
printf '%s\n' "${summary[@]}"
echo "$passed passed, $failed failed"
[ "$failed" -eq 0 ]
