# Sourced by the project's scripts: brings what a fresh Debian 12 with cargo lacks. Each thing is
# brought only when missing, with one line saying what and why; without root the exact command is
# printed and the script stops.

# packages WHY PACKAGE...
packages() {
  local why=$1 log
  shift
  echo "set-up: Debian packages are missing: $* ($why)"
  if [ "$(id -u)" -ne 0 ]; then
    echo "set-up: installing them needs root. Run the next line, then start again:"
    echo "  sudo apt-get update && sudo apt-get install --yes --no-install-recommends $*"
    exit 3
  fi
  echo "set-up: installing them with apt-get"
  log=$(mktemp)
  if ! { apt-get update && DEBIAN_FRONTEND=noninteractive \
    apt-get install --yes --no-install-recommends "$@"; } >"$log" 2>&1; then
    tail -n 20 "$log"
    echo "set-up: the installation failed. Check the network and the package sources, then start again."
    exit 3
  fi
  rm -f "$log"
}

# need COMMAND WHY PACKAGE...
need() {
  command -v "$1" >/dev/null || packages "${@:2}"
}

need_cargo() {
  if ! command -v cargo >/dev/null; then
    echo "set-up: cargo is missing. Install Rust 1.88 or newer (https://rustup.rs), then start again."
    exit 3
  fi
  need cc "rustc links with the C compiler driver" build-essential
}
