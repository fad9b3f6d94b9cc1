#!/bin/sh
# SPDX-License-Identifier: GPL-3.0-or-later
# The demonstration runs, twice, and leaves what it says.  demo.sh TOP
set -eu
top=$1
die() {
    echo "demo: $*" >&2
    exit 1
}
if sh "$top/sample_profiles/demo.sh" --nothing 2>/dev/null; then die "it takes an option that does not exist"; fi
for round in first second; do
    rm -f "$top/build/demo/change.nc"
    printed=$(sh "$top/sample_profiles/demo.sh" </dev/null) || die "the $round run failed"
    echo "$printed" | grep -Eq '^Eastern_Basin +all +[0-9.]+ +[0-9.]+' || die "the $round run shows no totals: $printed"
    for wanted in change.nc scenario.nc column.txt; do
        [ -s "$top/build/demo/$wanted" ] || die "the $round run left no $wanted"
        echo "$printed" | grep -q "$wanted" || die "the $round run does not name $wanted"
    done
done
[ -z "$(find "$top/build/demo-build" -name 'test_*' -o -name '*cmocka*')" ] || die "it builds tests"
