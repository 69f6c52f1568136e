# shellcheck shell=bash disable=SC2034 # the lists are for those who source this
# The Debian packages that building and testing need, and how they get here. To be sourced:
#     . tests/packages.sh
#     packages_install "$packages_build"
# Quiet where nothing is missing; otherwise one line, and apt-get's own words only where it fails.

packages_build="gcc libc6-dev make cmake re2c scdoc libsuitesparse-dev"
packages_test="ninja-build g++ clang clang-tidy libclang-rt-14-dev llvm cppcheck shellcheck valgrind
    pkg-config mandoc binutils libcmocka-dev liblapacke-dev libopenblas-dev
    python3 python3-numpy python3-mpmath"

# Those of the given packages that are not installed, one to a line.
packages_missing() {
    for package in $1; do
        dpkg-query -W -f '${Status}' "$package" 2>/dev/null | grep -q ' installed$' || echo "$package"
    done
}

packages_install() {
    if ! command -v dpkg-query >/dev/null; then
        echo "This is not a Debian system; what is needed has to be there already: $(echo $1)" >&2
        return 0
    fi
    missing=$(packages_missing "$1")
    [ -n "$missing" ] || return 0
    missing=$(echo $missing)
    as_root=
    if [ "$(id -u)" != 0 ]; then
        as_root=sudo
        if ! command -v sudo >/dev/null; then
            echo "Please install as root: apt-get install $missing" >&2
            return 1
        fi
    fi
    echo "Installing $missing"
    log=$(mktemp)
    if $as_root apt-get update >"$log" 2>&1 && $as_root env DEBIAN_FRONTEND=noninteractive \
        apt-get install --yes --no-install-recommends $missing >"$log" 2>&1; then
        rm "$log"
    else
        cat "$log" >&2
        rm "$log"
        return 1
    fi
}
