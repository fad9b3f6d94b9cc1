#!/bin/sh
# SPDX-License-Identifier: GPL-3.0-or-later
# Fetches the open climatologies that some tests read: Debian data packages, downloaded and unpacked for their data
# files only (nothing is installed).  The packages are named in .ci/packages-data.
#
#   sh tests/fetch_data.sh FOLDER
set -eu
top=$(cd "$(dirname "$0")/.." && pwd)
folder=$1
[ ! -e "$folder/complete" ] || exit 0
command -v apt-get >/dev/null 2>&1 || {
    echo "tests/fetch_data.sh: no apt-get here; unpack the packages of .ci/packages-data yourself and set STERICOL_TEST_DATA to their data files" >&2
    exit 1
}
rm -rf "$folder"
mkdir -p "$folder/download"
while read -r package; do
    case $package in '' | '#'*) continue ;; esac
    (cd "$folder/download" && { apt-get download -qq "$package" 2>/dev/null || { apt-get update -qq && apt-get download -qq "$package"; }; })
done <"$top/.ci/packages-data"
for archive in "$folder"/download/*.deb; do
    dpkg-deb -x "$archive" "$folder/unpacked"
done
find "$folder/unpacked" -type f \( -name '*.cdf' -o -name '*.nc' \) -exec mv {} "$folder/" \;
rm -rf "$folder/unpacked" "$folder/download"
touch "$folder/complete"
