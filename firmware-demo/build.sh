#!/usr/bin/env bash
# Builds what runs on the logger's processor (Arm Cortex-M4F) and prints the image size.
#
#   bash firmware-demo/build.sh              everything below, in this order
#   bash firmware-demo/build.sh core         the core alone, as proof that it needs no standard library
#   bash firmware-demo/build.sh image        the logger image for the emulated board
#   bash firmware-demo/build.sh no-panic     a link that fails while the core can still panic
#
# Brings its own toolchain when the machine lacks one. LOGGER_TOOLCHAIN=debian uses Debian's
# packaged compiler even where rustup could serve.
set -euo pipefail
cd "$(dirname "$0")/.."
. tests/setup.sh

TARGET=thumbv7em-none-eabihf
OUT=target/logger
std=()

has_rustup_target() {
  [ -d "$(rustc --print target-libdir --target "$TARGET")" ]
}

# Debian's rustup and rustc packages exclude each other; a rustup in the user's home does not mind.
use_debian_compiler() {
  local sources
  sources=/usr/lib/rustlib/src/rust/library/core
  if [ ! -x /usr/bin/rustc ] || [ ! -d "$sources" ]; then
    packages "the Rust target $TARGET cannot be downloaded here, so the compiler's own sources build it" \
      rustc-web rust-web-src
  fi
  need arm-none-eabi-ld "Debian's compiler has no linker for $TARGET" binutils-arm-none-eabi
  echo "set-up: building with $(/usr/bin/rustc --version) and its library sources"
  # Only for this script: the desktop stays with its own stable compiler.
  export RUSTC=/usr/bin/rustc RUSTC_BOOTSTRAP=1
  export CARGO_TARGET_THUMBV7EM_NONE_EABIHF_LINKER=arm-none-eabi-ld
  std=(-Zbuild-std=core)
}

set_up() {
  need_cargo
  if [ "${LOGGER_TOOLCHAIN:-}" = debian ]; then
    use_debian_compiler
  elif ! has_rustup_target; then
    echo "set-up: adding the Rust target $TARGET: the logger's processor"
    if ! { command -v rustup >/dev/null && rustup target add "$TARGET"; }; then
      use_debian_compiler
    fi
  fi
}

build() { # MANIFEST-FOLDER ARGUMENTS...
  cargo rustc --locked --target "$TARGET" --target-dir "$OUT" "${std[@]}" \
    --manifest-path "$1/Cargo.toml" "${@:2}"
}

core() {
  build core-nostd --release
}

image() {
  build firmware-demo/image --release --bin logger
  sizes "$OUT/$TARGET/release/logger"
}

no_panic() {
  local arguments=(firmware-demo/image --profile no-panic --bin no-panic --features no-panic)
  if build "${arguments[@]}"; then
    echo "no panic is reachable from what this image links of the core"
    return
  fi
  # Linked once more with the missing function made up, the image shows who would call it.
  build "${arguments[@]}" -- -Clink-arg=--defsym=a_panic_is_reachable_from_the_core=0
  need arm-none-eabi-objdump "shows where a panic is reachable" binutils-arm-none-eabi
  echo "a panic is reachable; it is called from:"
  arm-none-eabi-objdump --disassemble --demangle "$OUT/$TARGET/no-panic/no-panic" | awk '
    /^[0-9a-f]+ <.*>:$/ { caller = $0; sub(/^[0-9a-f]+ /, "", caller) }
    /\tb[l.w]*\t.*<.*(panic|_failed|_fail)/ && !/no_panic::/ { print "  " caller, $NF }' | sort -u
  return 1
}

# The budget itself is memory.x: a program that outgrows it does not link.
sizes() {
  need arm-none-eabi-size "prints the size of the image" binutils-arm-none-eabi
  arm-none-eabi-size "$1" | awk 'NR == 2 {
    printf "image size: flash %d bytes of 524288 (code and constants %d, initial data %d), RAM %d bytes of 131072 before the stack\n",
      $1 + $2, $1, $2, $2 + $3 }'
}

set_up
case "${1:-all}" in
  core) core ;;
  image) image ;;
  no-panic) no_panic ;;
  all) core; image; no_panic ;;
  *) sed -n '2,11s/^# \{0,1\}//p' "$0"; exit 2 ;;
esac
