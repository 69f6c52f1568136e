#!/bin/bash
# Installs a build into a folder of its own, and uses it as a program outside the tree would: by the CMake
# package and by pkg-config, shared and static; and looks at what the shared library exports.
#
# usage: CC=cc CMAKE=cmake VERSION=x.y.z run.sh BUILD
set -u
build=$(realpath "${1:?usage: run.sh BUILD}")
source=$(dirname "$(realpath "$0")")
CC=${CC:-cc} CMAKE=${CMAKE:-cmake}
place=$(mktemp -d)
trap 'rm -r "$place"' EXIT
prefix="$place/a prefix"  # with a blank, as users have them
passed=0 failed=0

# check NAME COMMAND...: quiet where it is well
check() {
    local name=$1
    shift
    if "$@" >"$place/log" 2>&1; then
        passed=$((passed + 1))
    else
        failed=$((failed + 1))
        echo "FAILED $name"
        tail -n 40 "$place/log"
    fi
}

install_there() { "$CMAKE" --install "$build" --prefix "$prefix"; }

by_cmake() {
    "$CMAKE" -S "$source" -B "$place/cmake" -DCMAKE_PREFIX_PATH="$prefix" -DCMAKE_C_COMPILER="$CC" \
        && "$CMAKE" --build "$place/cmake"
}

# The prefix in the file is that of configuring; pkg-config puts the one where the file is in its place.
flags() { pkg-config --define-prefix "$@" anabranch; }

by_pkg_config() {
    local kind=$1 words
    shift
    words=$(flags --cflags --libs "$@") || return 1
    eval "$CC '$source/consumer.c' -o '$place/pkg_$kind' $words -lm ${1:+-static}"
}

# The program ends well, and its first word is the version.
runs() {
    local words
    words=$("$@") && [ "${words%% *}" = "$VERSION" ]
}

command_runs() { [ "$("$prefix/bin/anabranch" --version)" = "anabranch $VERSION" ]; }

pages() {
    local page
    for page in "$prefix"/share/man/man1/anabranch*.1; do
        mandoc -T lint -W warning "$page" 2>&1 | grep -v 'skipping paragraph macro' && return 1
    done
    [ -s "$page" ]
}

# The public names, all of them, and nothing else.
exports() {
    nm -D --defined-only "$library" | awk '{print $3}' | sort >"$place/exported"
    if grep -v '^anb_[a-z]' "$place/exported"; then
        echo "stand above, in the shared library's exports"
        return 1
    fi
    grep -v '^#' "$prefix/include/anabranch.h" | tr '\n' ' ' | grep -o 'ANB_API [^(]*(' \
        | sed 's/($//; s/.*[ *]//' | sort >"$place/promised"
    [ -s "$place/promised" ] && diff "$place/promised" "$place/exported"
}

# Strict C11, and C++, take the header as it is.
header() {
    local name=$prefix/include/anabranch.h
    "$CC" -std=c11 -pedantic-errors -Wall -Wextra -Werror -fsyntax-only -x c "$name" \
        && "$CC" -std=c++17 -pedantic-errors -Wall -Wextra -Werror -fsyntax-only -x c++ "$name"
}

# The names of the static library take none from the program, and nothing in it can be written to.
static_names() { ! nm -g --defined-only "$archive" | awk 'NF == 3 {print $3}' | grep -v '^anb_'; }
static_state() {
    ! size -A "$archive" | grep -E '^\.(data|bss|tdata|tbss)\S* +[1-9]' | grep -v '^\.data\.rel\.ro'
}

versioned() {
    [ -L "$library" ] && readelf -d "$library" | grep "SONAME.*libanabranch.so.${VERSION%%.*}"
}

check install install_there
library=$(find "$prefix" -name libanabranch.so)
archive=${library%.so}.a
PKG_CONFIG_PATH=$(dirname "$library")/pkgconfig
export PKG_CONFIG_PATH
check "the command runs where it was installed" command_runs
check "the public header" header
check "names that are exported" exports
check "names of the static library" static_names
check "state of the static library" static_state
check "the library's own version" versioned
check "manual pages" pages
check "licence" test -s "$prefix/share/doc/anabranch/LICENSE"
check "CMake package" by_cmake
check "CMake, shared" runs "$place/cmake/consumer_shared"
check "CMake, static" runs "$place/cmake/consumer_static"
check "pkg-config, shared" by_pkg_config shared
check "pkg-config, shared, runs" runs env LD_LIBRARY_PATH="$(dirname "$library")" "$place/pkg_shared"
check "pkg-config, static" by_pkg_config static --static
check "pkg-config, static, runs" runs "$place/pkg_static"
check "pkg-config's version" test "$(pkg-config --modversion anabranch)" = "$VERSION"
echo "$passed passed, $failed failed"
[ "$failed" = 0 ]
