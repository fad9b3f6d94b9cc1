#!/bin/sh
# SPDX-License-Identifier: GPL-3.0-or-later
# Installs what is missing, builds stericol in two configurations and passes all tests in each.
#
#   sh tests/run.sh           everything that continuous integration runs
#   sh tests/run.sh --long    clang with both sanitizers and the thread sanitizer too
#   sh tests/run.sh -y        install missing packages without asking
set -eu
top=$(cd "$(dirname "$0")/.." && pwd)
long=no
consent=ask
for argument in "$@"; do
    case $argument in
    --long) long=yes ;;
    -y) consent=yes ;;
    *)
        echo "tests/run.sh: unknown option $argument; known are --long and -y" >&2
        exit 2
        ;;
    esac
done
[ -z "${CI:-}" ] || consent=yes

. "$top/.ci/install.sh"
install_missing "$top" "$consent"
if [ -z "${STERICOL_TEST_DATA:-}" ]; then
    sh "$top/tests/fetch_data.sh" "$top/build/data"
    STERICOL_TEST_DATA=$top/build/data
fi
export STERICOL_TEST_DATA

jobs=$(nproc 2>/dev/null || echo 2)

# build_and_test NAME [cmake options]
build_and_test() {
    name=$1
    shift
    echo "== $name: building"
    cmake -S "$top" -B "$top/build/$name" -G Ninja -DSTERICOL_WARNINGS_AS_ERRORS=ON "$@" >"$top/build/$name.log" 2>&1 ||
        { cat "$top/build/$name.log" >&2; return 1; }
    cmake --build "$top/build/$name" --parallel "$jobs" >>"$top/build/$name.log" 2>&1 ||
        { tail -n 60 "$top/build/$name.log" >&2; return 1; }
    echo "== $name: testing"
    ctest --test-dir "$top/build/$name" --output-on-failure --parallel "$jobs" --no-tests=error
}

mkdir -p "$top/build"
build_and_test release -DCMAKE_BUILD_TYPE=Release
build_and_test sanitized -DCMAKE_BUILD_TYPE=Debug -DSTERICOL_SANITIZE=address
if [ "$long" = yes ]; then
    build_and_test clang -DCMAKE_BUILD_TYPE=Debug -DSTERICOL_SANITIZE=address -DCMAKE_C_COMPILER=clang
    build_and_test threads -DCMAKE_BUILD_TYPE=RelWithDebInfo -DSTERICOL_SANITIZE=thread
fi
echo "All tests passed."
