#!/usr/bin/env bash
# The one list of Debian packages that Phraseweld needs, and how they come onto the machine. Sourced
# by demo-corpus/run.sh (which needs what the program needs) and tests/run.sh (which needs it all).

program_packages=(
  g++ cmake ninja-build pkg-config
  libabsl-dev libtbb-dev libyaml-cpp-dev libzstd-dev zlib1g-dev libxxhash-dev libsimdjson-dev
  libcli11-dev libicu-dev
)
test_packages=(
  libgtest-dev libgmock-dev unicode-data python3 python3-scipy zstd gzip
  nodejs npm chromium binutils git
)

# install_missing PACKAGE...: installs those that are not installed; says what it does.
install_missing() {
  local missing=() package
  for package in "$@"; do
    # A Node.js or npm that did not come from a package will do as well.
    case "$package" in
      nodejs) command -v node >/dev/null && continue ;;
      npm) command -v npm >/dev/null && continue ;;
    esac
    dpkg-query -W -f='${db:Status-Status}' "$package" 2>/dev/null | grep -qx installed || missing+=("$package")
  done
  [ ${#missing[@]} -eq 0 ] && return 0
  echo "Installing: ${missing[*]}"
  local as_root=()
  [ "$(id -u)" -eq 0 ] || as_root=(sudo)
  local log
  log=$(mktemp)
  if ! { "${as_root[@]}" apt-get update -q &&
         DEBIAN_FRONTEND=noninteractive "${as_root[@]}" apt-get install -y -q --no-install-recommends "${missing[@]}"; } >"$log" 2>&1; then
    tail -n 20 "$log" >&2
    echo "Could not install: ${missing[*]}" >&2
    return 1
  fi
  rm -f "$log"
}

# build_program FOLDER CMAKE-OPTION...: configures and builds; quiet unless something fails.
build_program() {
  local folder=$1 log
  shift
  log=$(mktemp)
  if ! { cmake -S "$top" -B "$folder" -G Ninja "$@" &&
         ninja -C "$folder" "${build_targets[@]}"; } >"$log" 2>&1; then
    grep -E 'error|FAILED|Error' "$log" | head -n 40 >&2
    tail -n 15 "$log" >&2
    echo "The build in $folder failed." >&2
    return 1
  fi
  rm -f "$log"
}
