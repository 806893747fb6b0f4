#!/usr/bin/env bash
# Builds the benchmarks (Release) and runs them: bash bench/run.sh [arguments for system_bench, for example --largest 100000].
# The tables go to the screen and to build/bench/: system.txt (whole solves) and micro.txt (kernels).
# FARSUM_BENCH_MICRO=no leaves the kernels out. Works from any folder; missing packages are installed with apt-get.
set -euo pipefail
. "$(dirname "${BASH_SOURCE[0]}")/../.ci/setup.sh"

farsum_say "farsum benchmarks: build in $farsum_build_root/release, tables in $farsum_build_root/bench"
farsum_install build bench
farsum_configure "$farsum_build_root/release" -DCMAKE_BUILD_TYPE=Release -DFARSUM_BUILD_APPS=OFF -DFARSUM_BUILD_TESTS=OFF \
  -DFARSUM_BUILD_BENCH=ON
farsum_build "$farsum_build_root/release" farsum_benchmarks

tables=$farsum_build_root/bench
mkdir -p "$tables"
programs=$farsum_build_root/release/bench
farsum_say "Whole solves"
"$programs/system_bench" "$@" | tee "$tables/system.txt"
if [ "${FARSUM_BENCH_MICRO:-yes}" = yes ]; then
  farsum_say "Kernels"
  for program in "$programs"/*_bench; do
    if [ "$program" != "$programs/system_bench" ]; then
      "$program" --benchmark_min_time=0.1 --benchmark_repetitions=3 --benchmark_report_aggregates_only=true
    fi
  done | tee "$tables/micro.txt"
fi
farsum_say "Tables are in $tables"
