# SPDX-License-Identifier: GPL-3.0-or-later
# Sourced by tests/run.sh and sample_profiles/demo.sh: installs the Debian packages that .ci/packages names.
#
# install_missing TOP yes|ask
#   Installs what is missing without a question ("yes", or as root) or after one ("ask").  On a system without
#   apt it lists what is needed and goes on only if the tools and libraries are found.

missing_packages() {
    while read -r package; do
        case $package in '' | '#'*) continue ;; esac
        state=$(dpkg-query -W -f '${db:Status-Status}' "$package" 2>/dev/null) || state=absent
        [ "$state" = installed ] || printf '%s ' "$package"
    done <"$1/.ci/packages"
}

explain_other_system() {
    echo "This is not a Debian system (no apt-get here).  Please install:" >&2
    echo "  a C17 compiler, CMake 3.25 or later, Ninja, pkg-config," >&2
    echo "  NetCDF-C 4.9, HDF5, GSL 2.7, UDUNITS-2, Jansson, cmocka (each with its headers)," >&2
    echo "  and for the tests clang, ncdump, python3 with numpy and netCDF4." >&2
    for tool in cc cmake ninja pkg-config; do
        command -v "$tool" >/dev/null 2>&1 || return 1
    done
    pkg-config --exists netcdf gsl jansson cmocka || return 1
    echo "Compiler and libraries are there; going on." >&2
}

install_missing() {
    top=$1
    consent=$2
    if ! command -v apt-get >/dev/null 2>&1 || ! command -v dpkg-query >/dev/null 2>&1; then
        explain_other_system
        return
    fi
    missing=$(missing_packages "$top")
    [ -n "$missing" ] || return 0
    if [ "$(id -u)" = 0 ]; then
        as_root=
    elif command -v sudo >/dev/null 2>&1; then
        as_root=sudo
    else
        echo "Missing packages: $missing" >&2
        echo "Please have an administrator run: apt-get install --no-install-recommends $missing" >&2
        return 1
    fi
    if [ "$consent" = ask ] && [ "$(id -u)" != 0 ]; then
        printf 'These packages are missing: %s\nInstall them now? [y/N] ' "$missing" >&2
        read -r answer || answer=n
        case $answer in y | Y | yes) ;; *)
            echo "Nothing was installed.  Run again with -y, or install them yourself." >&2
            return 1
            ;;
        esac
    fi
    # A fresh image has no package lists; a list that cannot be renewed may still do.
    $as_root apt-get update -qq || echo "The package lists could not be renewed; trying with those at hand." >&2
    # shellcheck disable=SC2086 # the names are split on purpose
    $as_root env DEBIAN_FRONTEND=noninteractive apt-get install -y -qq --no-install-recommends $missing >/dev/null
}
