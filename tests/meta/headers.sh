#!/bin/sh
# SPDX-License-Identifier: GPL-3.0-or-later
# Each public header compiles alone, as C17 and as C++17, by both compilers.  headers.sh TOP FOLDER
set -eu
top=$1
folder=$2
mkdir -p "$folder"
count=0
for header in "$top"/include/stericol/*.h; do
    name=$(basename "$header")
    # Twice, so that a guard that is missing shows.
    printf '#include "stericol/%s"\n#include "stericol/%s"\nint one_thing_at_least;\n' "$name" "$name" >"$folder/alone.c"
    cp "$folder/alone.c" "$folder/alone.cpp"
    for compiler in gcc clang; do
        $compiler -std=c17 -pedantic -Wall -Wextra -Wstrict-prototypes -Werror -I"$top/include" -fsyntax-only "$folder/alone.c"
    done
    clang++ -std=c++17 -pedantic -Wall -Wextra -Werror -I"$top/include" -fsyntax-only "$folder/alone.cpp"
    count=$((count + 1))
done
[ "$count" -ge 4 ] || { echo "only $count headers were found" >&2; exit 1; }
echo "$count headers compile alone"
