# Common steps of apps/demo.sh, tests/run.sh, bench/run.sh and .ci/run; sourced by them, never run by itself.
#   farsum_install <scope>...            installs the missing Debian packages of these scopes (.ci/debian-packages.txt)
#   farsum_configure <dir> <-D...>       configures a build in <dir>
#   farsum_build <dir> [target]...       builds it
# Settings from the environment: FARSUM_BUILD_DIR (default: build/ in the source tree), FARSUM_JOBS (default: cores and memory).

farsum_root=$(cd "$(dirname "${BASH_SOURCE[0]}")/.." && pwd -P)
farsum_build_root=${FARSUM_BUILD_DIR:-$farsum_root/build}
farsum_package_list=$farsum_root/.ci/debian-packages.txt
# The same messages and number formats everywhere.
export LC_ALL=C.UTF-8

farsum_say() { printf '\n== %s\n' "$*"; }

farsum_fail() {
  printf 'farsum: %s\n' "$*" >&2
  exit 1
}

# Compile jobs at a time: one a core, but at least 1.5 GiB of free memory for each.
farsum_jobs() {
  local cores free_kib jobs
  if [ -n "${FARSUM_JOBS:-}" ]; then
    echo "$FARSUM_JOBS"
    return
  fi
  cores=$(nproc)
  free_kib=$(awk '/^MemAvailable:/ { print $2 }' /proc/meminfo)
  jobs=$((${free_kib:-1572864} / 1572864))
  if [ "$jobs" -gt "$cores" ]; then jobs=$cores; fi
  if [ "$jobs" -lt 1 ]; then jobs=1; fi
  echo "$jobs"
}

# Packages of the given scopes that are not installed, one a line.
farsum_missing_packages() {
  local name scope wanted
  while read -r name scope _; do
    case $name in '' | '#'*) continue ;; esac
    for wanted in "$@"; do
      if [ "$scope" = "$wanted" ] && ! dpkg-query -W -f='${db:Status-Status}\n' "$name" 2>/dev/null | grep -qx installed; then
        echo "$name"
      fi
    done
  done <"$farsum_package_list" | sort -u
}

# Runs apt-get as root without asking anything. sudo may ask for its password only where a person sits at a terminal.
farsum_apt() {
  local prefix=()
  if [ "$(id -u)" -ne 0 ]; then
    prefix=(sudo)
    if [ ! -t 0 ]; then prefix+=(-n); fi
  fi
  "${prefix[@]}" env DEBIAN_FRONTEND=noninteractive apt-get -o DPkg::Lock::Timeout=600 -q "$@" </dev/null
}

farsum_install() {
  local missing name known=yes
  if ! command -v apt-get >/dev/null || ! command -v dpkg-query >/dev/null; then
    farsum_say "This is no Debian system: taking the tools as they are (needed: see .ci/debian-packages.txt)"
    return
  fi
  mapfile -t missing < <(farsum_missing_packages "$@")
  if [ "${#missing[@]}" -eq 0 ]; then
    farsum_say "All Debian packages that are needed are installed"
    return
  fi
  farsum_say "Installing with apt-get: ${missing[*]}"
  if [ "$(id -u)" -ne 0 ] && ! command -v sudo >/dev/null; then
    farsum_fail "neither root nor sudo; as root, run: apt-get install --no-install-recommends ${missing[*]}"
  fi
  for name in "${missing[@]}"; do
    apt-cache show "$name" >/dev/null 2>&1 || known=no
  done
  if [ "$known" = no ]; then
    farsum_apt update || farsum_fail "apt-get update failed (message above)"
  fi
  if ! farsum_apt install -y --no-install-recommends "${missing[@]}"; then
    farsum_say "Reading the package lists again"
    farsum_apt update || farsum_fail "apt-get update failed (message above)"
    farsum_apt install -y --no-install-recommends "${missing[@]}" || farsum_fail "apt-get install failed (message above)"
  fi
}

# A build folder of another source tree, or of another user, is the usual cause of a puzzling failure: both are handled here.
farsum_configure() {
  local dir=$1 fresh=() source_dir
  shift
  mkdir -p "$dir" 2>/dev/null && [ -w "$dir" ] ||
    farsum_fail "cannot write to $dir; set FARSUM_BUILD_DIR to a folder of your own"
  if [ -f "$dir/CMakeCache.txt" ]; then
    source_dir=$(sed -n 's/^CMAKE_HOME_DIRECTORY:INTERNAL=//p' "$dir/CMakeCache.txt")
    if [ "$source_dir" != "$farsum_root" ]; then fresh=(--fresh); fi
  fi
  cmake "${fresh[@]}" -S "$farsum_root" -B "$dir" "$@"
}

farsum_build() {
  local dir=$1 targets=()
  shift
  if [ "$#" -gt 0 ]; then targets=(--target "$@"); fi
  cmake --build "$dir" --parallel "$(farsum_jobs)" "${targets[@]}"
}
