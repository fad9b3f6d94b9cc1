#!/bin/sh
# SPDX-License-Identifier: GPL-3.0-or-later
# Installs into a folder, moves it, and uses what is there as a stranger would: the program, its manual page, and the
# library by CMake's find_package and by pkg-config, shared and static.
#
#   test_install.sh TOP BUILD FOLDER C_COMPILER [compiler option...]
set -eu
top=$1
build=$2
folder=$3
compiler=$4
shift 4
options=$* # what the library itself was built with (sanitizers)

die() {
    echo "test_install: $*" >&2
    exit 1
}

rm -rf "$folder"
mkdir -p "$folder"
cmake --install "$build" --prefix "$folder/first" >"$folder/install.log"
# Nothing may remember where it was installed.
mv "$folder/first" "$folder/moved"
prefix=$folder/moved

# ---- what is there ----

libraries=$(dirname "$(find "$prefix" -name 'libstericol.a')")
for wanted in "$libraries/libstericol.so" "$libraries/pkgconfig/stericol.pc" \
    "$libraries/cmake/stericol/stericol-config.cmake" "$prefix/include/stericol/water.h"; do
    [ -e "$wanted" ] || die "$wanted was not installed"
done
for header in "$top"/include/stericol/*.h; do
    cmp "$header" "$prefix/include/stericol/$(basename "$header")"
done
[ -z "$(find "$prefix" -name '*make_sea*' -o -name '*test_*' -o -name '*cmocka*')" ] || die "parts of the tests were installed"

if [ -e "$build/stericol" ]; then
    version=$("$prefix/bin/stericol" --version | sed -n '1s/^stericol //p')
    grep -q "^Version: $version\$" "$libraries/pkgconfig/stericol.pc" || die "the program and stericol.pc differ in version"
    page=$(find "$prefix" -name stericol.1)
    groff -ww -man -Tutf8 "$page" >"$folder/page.txt" 2>"$folder/page.log"
    [ ! -s "$folder/page.log" ] || die "the manual page has faults: $(cat "$folder/page.log")"
    for command in change inspect column scenario; do
        grep -q "$command" "$folder/page.txt" || die "the manual page does not know $command"
    done
    [ -e "$prefix/share/bash-completion/completions/stericol" ] || die "the completion was not installed"
fi

# ---- a program of a stranger: the example of docs/library.md ----

mkdir "$folder/consumer"
awk '/^```c$/ {on = 1; next} /^```$/ {on = 0} on' "$top/docs/library.md" >"$folder/consumer/warm.c"
awk '/^```cmake$/ {on = 1; next} /^```$/ {on = 0} on' "$top/docs/library.md" >"$folder/consumer/CMakeLists.txt"
# What the document says that it prints.
awk '/^```text$/ {on = 1; next} /^```$/ {on = 0} on' "$top/docs/library.md" >"$folder/expected.txt"
[ -s "$folder/consumer/warm.c" ] && [ -s "$folder/expected.txt" ] || die "docs/library.md has no example"

ran() {
    LD_LIBRARY_PATH=$libraries "$2" >"$folder/printed.txt" || die "$1: the program failed"
    cmp "$folder/printed.txt" "$folder/expected.txt" || die "$1: the program printed something else"
    echo "$1: as the document says"
}

cmake -S "$folder/consumer" -B "$folder/consumer/build" -DCMAKE_PREFIX_PATH="$prefix" -DCMAKE_C_COMPILER="$compiler" \
    -DCMAKE_C_FLAGS="$options" >"$folder/consumer.log" 2>&1 || { cat "$folder/consumer.log" >&2; die "find_package failed"; }
cmake --build "$folder/consumer/build" >>"$folder/consumer.log" 2>&1 || { cat "$folder/consumer.log" >&2; die "the consumer does not build"; }
ran "CMake, shared" "$folder/consumer/build/warm"
ran "CMake, static" "$folder/consumer/build/warm_static"

export PKG_CONFIG_PATH="$libraries/pkgconfig"
# shellcheck disable=SC2046,SC2086 # options are split on purpose
$compiler -std=c17 $options $(pkg-config --cflags stericol) -o "$folder/warm_shared" "$folder/consumer/warm.c" \
    $(pkg-config --libs stericol) -lm
ran "pkg-config, shared" "$folder/warm_shared"
# shellcheck disable=SC2046,SC2086
$compiler -std=c17 $options $(pkg-config --cflags stericol) -o "$folder/warm_static" "$folder/consumer/warm.c" \
    $(pkg-config --static --libs stericol | sed 's/-lstericol/-l:libstericol.a/')
ran "pkg-config, static" "$folder/warm_static"
if ldd "$folder/warm_static" | grep -q stericol; then
    die "the static program asks for the shared library"
fi
