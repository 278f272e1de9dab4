#!/usr/bin/env bash
# Installs what is missing (Debian 12), builds, and runs the tests through ctest.
#
#   tests/run.sh             every test, optimised build in build/
#   tests/run.sh one NAME    the tests whose name holds NAME
#   tests/run.sh asan        every test with address and undefined-behaviour sanitizers, in build-asan/
#   tests/run.sh tidy        clang-tidy over src
#   tests/run.sh format      clang-format over every C++ file: lists what differs, changes nothing
#   tests/run.sh renew       writes the expected text of the script tests anew; review it as a diff
#
# Warnings are errors; SCOURBOOK_WERROR=OFF lets them pass outside CI.
set -euo pipefail
cd "$(dirname "${BASH_SOURCE[0]}")/.."
source scenario/packages.sh

mode=${1:-all}
werror=${SCOURBOOK_WERROR:-ON}
if [ "${CI:-}" = true ]; then werror=ON; fi

usage() {
  sed -n '2,/^set /p' "${BASH_SOURCE[0]}" | sed -n 's/^# \{0,1\}//p' >&2
  exit 2
}

build_and_test() {
  local folder=$1 sanitize=$2
  shift 2
  install_missing "${build_packages[@]}"
  configure "$folder" -DSCOURBOOK_WERROR="$werror" -DSCOURBOOK_SANITIZE="$sanitize"
  cmake --build "$folder" -j "$build_jobs"
  ctest --test-dir "$folder" --output-on-failure --no-tests=error -j "$build_jobs" "$@"
}

cpp_files() { git ls-files --cached --others --exclude-standard -- '*.cpp' '*.hpp'; }

case $mode in
  all) build_and_test build OFF ;;
  one)
    [ $# -eq 2 ] || usage
    build_and_test build OFF -R "$2"
    ;;
  asan)
    export ASAN_OPTIONS=${ASAN_OPTIONS:-detect_stack_use_after_return=1}
    export UBSAN_OPTIONS=${UBSAN_OPTIONS:-print_stacktrace=1}
    build_and_test build-asan ON
    ;;
  renew)
    install_missing "${build_packages[@]}"
    configure build -DSCOURBOOK_WERROR="$werror" -DSCOURBOOK_SANITIZE=OFF
    cmake --build build -j "$build_jobs"
    SCOURBOOK_RENEW=1 ctest --test-dir build --output-on-failure --no-tests=error -R '^script_'
    git --no-pager diff --stat -- tests/scripts
    ;;
  tidy)
    install_missing "${build_packages[@]}" clang-tidy
    configure build -DSCOURBOOK_WERROR="$werror" -DSCOURBOOK_SANITIZE=OFF
    git ls-files --cached --others --exclude-standard -- 'src/*.cpp' |
      xargs -r -n 1 -P "$build_jobs" clang-tidy -p build --quiet
    ;;
  format)
    install_missing clang-format git
    cpp_files | xargs -r clang-format --dry-run --Werror
    ;;
  *) usage ;;
esac
