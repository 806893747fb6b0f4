#!/usr/bin/env bash
# Shows farsum at work: bash apps/demo.sh [folder for the files; default: build/demo in the source tree].
#   1 installs the Debian packages that are missing (with apt-get, as root or through sudo), and nothing else
#   2 builds the farsum command (Release) in build/release
#   3 generates a bunch of a million protons with a halo, solves it to an error of 1e-6, and checks the result independently
#   4 draws the result as a picture
# Works from any folder on a bare Debian 12, unattended. FARSUM_DEMO_COUNT=10000 makes it smaller.
set -euo pipefail
output=${1:-}
if [ -n "$output" ]; then
  mkdir -p -- "$output"
  output=$(cd -- "$output" && pwd -P)
fi
. "$(dirname "${BASH_SOURCE[0]}")/../.ci/setup.sh"
output=${output:-$farsum_build_root/demo}
count=${FARSUM_DEMO_COUNT:-1000000}

show() {
  printf '\n$ farsum %s\n' "$*"
  "$farsum_build_root/release/apps/farsum/farsum" "$@"
}

farsum_say "farsum demonstration: build in $farsum_build_root/release, files in $output"
farsum_install build demo

farsum_say "Building the command (Release, $(farsum_jobs) jobs)"
farsum_configure "$farsum_build_root/release" -DCMAKE_BUILD_TYPE=Release -DFARSUM_BUILD_APPS=ON -DFARSUM_BUILD_TESTS=OFF \
  -DFARSUM_BUILD_BENCH=OFF
farsum_build "$farsum_build_root/release" farsum_command

mkdir -p "$output"
cd "$output"
farsum_say "A bunch of $count protons: a dense core and a wide halo (one particle file)"
show generate proton_bunch bunch.h5 --count "$count" --seed 1 --overwrite
show info bunch.h5

farsum_say "Potential, field, force and energy of every proton, to an error of 1e-6"
show solve bunch.h5 -o result.h5 --tolerance 1e-6 --json report.json --overwrite

farsum_say "An independent check of the result file by exact sums"
show verify bunch.h5 result.h5

farsum_say "Drawing the result"
# Debian's own interpreter: another python3 in the path may lack the packages.
/usr/bin/python3 "$farsum_root/apps/plot_result.py" result.h5 report.json picture.png

farsum_say "Done. In $output:"
printf '  bunch.h5     the particles (openPMD)\n  result.h5    the same with potential, field, force and energy\n'
printf '  report.json  what was asked, done and measured\n  picture.png  the picture\n'
