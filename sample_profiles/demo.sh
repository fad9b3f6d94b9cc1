#!/bin/sh
# SPDX-License-Identifier: GPL-3.0-or-later
# Shows what stericol does: builds it, makes two epochs of a sea that does not exist, and works out how much the sea
# rose because it warmed and freshened.  Results go to build/demo/; run it again as often as you like.
#
#   sh sample_profiles/demo.sh        asks before it installs missing packages
#   sh sample_profiles/demo.sh -y     installs them without asking
set -eu
top=$(cd "$(dirname "$0")/.." && pwd)
consent=ask
for argument in "$@"; do
    case $argument in
    -y) consent=yes ;;
    *)
        echo "sample_profiles/demo.sh: unknown option $argument; known is -y" >&2
        exit 2
        ;;
    esac
done

. "$top/.ci/install.sh"
install_missing "$top" "$consent"

built=$top/build/demo-build
results=$top/build/demo
log=$top/build/demo.log
mkdir -p "$results"

# Runs a command whose output only matters when it fails.
quietly() {
    "$@" >>"$log" 2>&1 || {
        tail -n 60 "$log" >&2
        echo "demo: this failed: $*" >&2
        echo "demo: the whole log is $log" >&2
        exit 1
    }
}

echo "Building stericol (a minute or two at first) ..."
: >"$log"
quietly cmake -S "$top" -B "$built" -G Ninja -DCMAKE_BUILD_TYPE=Release -DSTERICOL_TESTS=OFF
quietly cmake --build "$built" --target stericol make_sea

stericol=$built/stericol
cd "$results"
echo "Making two epochs of the Velmar Sea, which does not exist ..."
quietly "$built/make_sea" .
cp "$top/sample_profiles/station_1998.txt" "$top/sample_profiles/station_2018.txt" \
    "$top/sample_profiles/warming_by_depth.txt" .

echo "Change between the 1990s and the 2010s ..."
"$stericol" change --earlier velmar_1990s.nc --later velmar_2010s.nc --bathymetry velmar_depth.nc \
    --layers 0..700,700..2000,2000..bottom \
    --region Western_Basin=-169,30,-157,44.25 --region Eastern_Basin=-157,30,-147,44.25 \
    --output change.nc --replace --log change.log >change.txt

echo "What a warming that fades with depth would do to the sea of the 1990s ..."
"$stericol" scenario --field velmar_1990s.nc --profile warming_by_depth.txt --bathymetry velmar_depth.nc \
    --region Velmar_Sea=-169,30,-147,44.25 --output scenario.nc --replace --quiet >scenario.txt

echo "One station, level by level ..."
"$stericol" column --earlier station_1998.txt --later station_2018.txt --latitude 38.4 --sea-floor 2100 \
    --quiet >column.txt

cat <<END

Change, 1990s to 2010s (heights in mm, heat in ZJ):

$(cat change.txt)

covered is the share of the sea area whose columns count; the rows "all" count those in which every layer is complete.
In 16 columns of the eastern basin the 2010s lack data below 600 m: that is what the warnings above tell.

Scenario:

$(cat scenario.txt)

Results are in $results:
  change.nc      maps and totals; look inside with: ncdump -h change.nc
  scenario.nc    the same for the scenario
  column.txt     the working of one column
END
