#!/usr/bin/env bash
# Builds farsum with all its tests in Release and runs them: bash tests/run.sh [arguments for ctest, for example -L unit].
# Works from any folder on a bare Debian 12: missing packages are installed with apt-get (as root or through sudo).
# Exit status 0 only if everything built and every test passed.
set -euo pipefail
. "$(dirname "${BASH_SOURCE[0]}")/../.ci/setup.sh"

farsum_say "farsum: build and test in $farsum_build_root/release (packages, configure, build, ctest)"
farsum_install build tests bench

farsum_say "Configuring (Release)"
farsum_configure "$farsum_build_root/release" -DCMAKE_BUILD_TYPE=Release -DFARSUM_BUILD_APPS=ON -DFARSUM_BUILD_TESTS=ON \
  -DFARSUM_BUILD_BENCH=ON

farsum_say "Building with $(farsum_jobs) jobs"
farsum_build "$farsum_build_root/release"

farsum_say "Testing"
ctest --test-dir "$farsum_build_root/release" --output-on-failure --no-tests=error --parallel "$(farsum_jobs)" "$@"
farsum_say "All tests passed"
