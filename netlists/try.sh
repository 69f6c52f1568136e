#!/bin/bash
# Builds the command, and does its main job on the first example: a netlist in, S-parameters out.
set -eu
cd "$(dirname "$(realpath "$0")")/.."
. tests/packages.sh

packages_install "$packages_build"
log=$(mktemp)
trap 'rm -f "$log"' EXIT
[ -f build/CMakeCache.txt ] || fresh=-DANB_TESTS=OFF # the tests need more packages
if ! { cmake -S . -B build ${fresh:-} && cmake --build build --parallel "$(nproc)"; } >"$log" 2>&1; then
    cat "$log" >&2
    exit 1
fi

result=build/splitter_quarter_wave.s3p
build/anabranch sweep netlists/splitter_quarter_wave.anab -o "$result"
echo "build/anabranch sweep netlists/splitter_quarter_wave.anab wrote $PWD/$result, which begins:"
head -n 12 "$result"
