#!/bin/bash
# Everything that holds this project, from a fresh clone on: installs what is missing, builds with gcc and
# clang and with the sanitizers, and runs all the tests, valgrind, the linters, and a minute of fuzzing.
#
# usage: tests/run.sh [PHASE...]      all the phases, or those named (their builds must be there)
#
#   ANB_SKIP="valgrind threads"   phases that this machine cannot run; they are listed at the end
#   ANB_FUZZ_SECONDS=60           for all the fuzz targets together
#
# A line for each phase with its time; more only where something fails. The builds and the logs stay in
# build-check/. The last line is `N passed, N failed`; the exit status is 0 only where none failed.
set -u
cd "$(dirname "$(realpath "$0")")/.." || exit 1
. tests/packages.sh

phases="packages gcc tests bench clang sanitizers threads valgrind fuzz cppcheck tidy shell tree"
place=$PWD/build-check
cores=$(nproc)
passed=0 failed=0 skipped="" closings="" started=$SECONDS
export CMAKE_BUILD_PARALLEL_LEVEL=$cores CTEST_PARALLEL_LEVEL=$cores CTEST_OUTPUT_ON_FAILURE=1
export OPENBLAS_NUM_THREADS=1 PYTHONDONTWRITEBYTECODE=1
export ASAN_OPTIONS=detect_stack_use_after_return=1 UBSAN_OPTIONS=print_stacktrace=1:halt_on_error=1
export TSAN_OPTIONS=halt_on_error=1
mkdir -p "$place"

# ---- counting ---------------------------------------------------------------------------

# check NAME COMMAND...: one check, quiet where it is well. Its log is NAME.log.
check() {
    local log="$place/${1//[ \/]/-}.log" name=$1
    shift
    if "$@" >"$log" 2>&1 </dev/null; then
        passed=$((passed + 1))
        return 0
    fi
    failed=$((failed + 1))
    echo "FAILED $name"
    tail -n 60 "$log" | sed 's/^/    /'
    return 1
}

# tests NAME BUILD [CTEST'S ARGUMENTS]: each test of a build counts; the runner's closing line is kept.
tests() {
    local name=$1 build=$2 log="$place/tests-$1.log" closing bad all
    shift 2
    ${runner:-} ctest --test-dir "$place/$build" "$@" >"$log" 2>&1 </dev/null
    closing=$(grep -E '^[0-9]+% tests passed, [0-9]+ tests failed out of [0-9]+$' "$log")
    if [ -z "$closing" ]; then
        failed=$((failed + 1))
        echo "FAILED tests, $name: none was run"
        tail -n 20 "$log" | sed 's/^/    /'
        return 1
    fi
    bad=$(echo "$closing" | sed 's/.*passed, \([0-9]*\) .*/\1/')
    all=${closing##* }
    passed=$((passed + all - bad))
    failed=$((failed + bad))
    closings+="$name: $closing"$'\n'
    [ "$bad" = 0 ] || grep -vE ' Passed +[0-9.]+ sec$|^ +Start ' "$log" | sed 's/^/    /'
}

# build NAME COMPILER [CMAKE'S ARGUMENTS] [-- TARGET...]
build() {
    local name=$1 compiler=$2 targets=()
    shift 2
    local arguments=()
    while [ $# -gt 0 ]; do
        if [ "$1" = -- ]; then shift; targets=(--target "$@"); break; fi
        arguments+=("$1")
        shift
    done
    check "configure-$name" env CC="$compiler" cmake -S . -B "$place/$name" -G Ninja "${arguments[@]}" \
        && check "build-$name" cmake --build "$place/$name" "${targets[@]}"
}

# ---- phases -----------------------------------------------------------------------------

phase_packages() { packages_install "$packages_build $packages_test" || exit 1; }

phase_gcc() { build gcc gcc -DANB_BENCH=ON; }

phase_tests() { tests gcc gcc; }

# Speed is not judged here; that the answers agree with those of other ways to them is.
phase_bench() {
    check bench-sweep "$place/gcc/tests/bench_sweep" --points 101 --rounds 1 tests/bench/networks/*.anab
    check bench-numbers "$place/gcc/tests/number_compare" --check 1000000
}

phase_clang() {
    build clang clang -DCMAKE_EXPORT_COMPILE_COMMANDS=ON && tests clang clang -L '^(unit|cases)$'
}

phase_sanitizers() {
    build sanitizers gcc -DCMAKE_BUILD_TYPE=Debug -DCMAKE_C_FLAGS_DEBUG="-O1 -g" \
        -DANB_SANITIZE=address,undefined \
        && ANB_NETWORKS=500 tests sanitizers sanitizers -LE '^(layers|published|reference)$'
}

# Addresses in a fixed order: the sanitizer of these compilers fails where the kernel spreads them too far.
phase_threads() {
    local runner command="$place/threads/anabranch" netlist
    runner="setarch $(uname -m) -R"
    build threads gcc -DCMAKE_BUILD_TYPE=RelWithDebInfo -DANB_SANITIZE=thread -- threaded || return
    ANB_NETWORKS=200 tests threads threads -L '^threads$'
    check threads-cli $runner env ANABRANCH="$command" python3 tests/cli/run.py thread
    for netlist in netlists/*.anab; do
        check "threads-$(basename "$netlist")" $runner bash -c '
            "$1" sweep "$2" --threads 3 | cmp - <("$1" sweep "$2" --threads 1)
            [ "${PIPESTATUS[*]}" = "0 0" ]' sh "$command" "$netlist"
    done
}

phase_valgrind() {
    local run="valgrind --quiet --error-exitcode=9 --leak-check=full --show-leak-kinds=all" name
    for name in splitter_quarter_wave feed_sixteen diplexer; do
        check "valgrind-sweep-$name" $run "$place/gcc/anabranch" sweep "netlists/$name.anab" \
            --sweep "0 Hz .. 2 GHz points 21" --threads 2
        check "valgrind-show-$name" $run "$place/gcc/anabranch" show "netlists/$name.anab"
        check "valgrind-format-$name" $run "$place/gcc/anabranch" format "netlists/$name.anab"
    done
}

fuzz_target() {
    local target=$1 seconds=$2 name dictionary seeds
    name=$(basename "$target")
    mkdir -p "$place/corpus/$name"
    dictionary=$(ls tests/fuzz/"$name".dict tests/fuzz/*.dict 2>/dev/null | head -n 1)
    mapfile -t seeds < <(ls -d tests/fuzz/seeds tests/fuzz/seeds/* 2>/dev/null)
    "$target" -seed=1 -max_total_time="$seconds" -timeout=20 -rss_limit_mb=3000 -print_final_stats=1 \
        -artifact_prefix="$place/corpus/$name-" ${dictionary:+-dict="$dictionary"} \
        "$place/corpus/$name" netlists "${seeds[@]}"
}

phase_fuzz() {
    local targets=() target all=${ANB_FUZZ_SECONDS:-60} seconds name log
    build fuzz clang -DCMAKE_BUILD_TYPE=RelWithDebInfo -DANB_FUZZ=ON -DANB_SANITIZE=address,undefined \
        -- fuzzers || return
    for target in "$place"/fuzz/tests/fuzz_*; do
        [ -x "$target" ] && [ -f "$target" ] && targets+=("$target")
    done
    check "fuzz-targets" test "${#targets[@]}" -gt 0 || return
    seconds=$((all * cores / ${#targets[@]}))
    [ "$seconds" -le "$all" ] || seconds=$all
    export -f fuzz_target
    export place
    printf '%s\0' "${targets[@]}" | xargs -0 -P "$cores" -I '{}' bash -c '
        name=$(basename "$1")
        fuzz_target "$1" "$2" >"$place/$name.out" 2>&1; echo $? >"$place/$name.status"' sh '{}' "$seconds"
    for target in "${targets[@]}"; do
        name=$(basename "$target") log="$place/$(basename "$target").out"
        check "$name" bash -c 'tail -n 60 "$1"; exit "$(cat "$2")"' sh "$log" "$place/$name.status"
        echo "    $name: $(sed -n 's/^stat::number_of_executed_units: *//p' "$log") executions," \
            "$(grep -o 'cov: [0-9]*' "$log" | tail -n 1 | cut -d ' ' -f 2) edges, ${seconds} s"
    done
}

phase_cppcheck() {
    check cppcheck cppcheck --quiet -j "$cores" --std=c11 --enable=warning,performance,portability \
        --error-exitcode=1 --inline-suppr --suppressions-list=.cppcheck -I lib lib cli
}

phase_tidy() {
    check tidy bash -c 'printf "%s\0" lib/*.c lib/*/*.c cli/*.c | grep -zv _avx \
        | xargs -0 -n 4 -P "$1" clang-tidy --quiet -p "$2"' sh "$cores" "$place/clang"
}

phase_shell() {
    local script
    for script in tests/*.sh tests/*/*.sh netlists/*.sh .ci/run; do
        check "shell-${script//\//-}" shellcheck --severity=warning -x "$script"
    done
}

# Nothing above left anything in the tree.
phase_tree() {
    command -v git >/dev/null && [ -d .git ] || return 0
    check tree test "$before" = "$(git status --porcelain 2>&1)"
}

# ---- all of them ------------------------------------------------------------------------

phase() {
    local begun=$SECONDS was=$failed
    if [[ " ${ANB_SKIP:-} " == *" $1 "* ]]; then
        skipped+=" $1"
        return
    fi
    "phase_$1"
    local word=well
    [ "$was" = "$failed" ] || word=FAILED
    printf '%-12s %4d s  %s\n' "$1" $((SECONDS - begun)) $word
}

before=$(git status --porcelain 2>&1)
[ $# -gt 0 ] || set -- $phases
for name in "$@"; do
    declare -F "phase_$name" >/dev/null || { echo "no phase $name; there are: $phases" >&2; exit 2; }
    phase "$name"
done
printf '%-12s %4d s\n' all $((SECONDS - started))
printf '%s' "$closings"
[ -z "$skipped" ] || echo "left out, by ANB_SKIP:$skipped"
echo "$passed passed, $failed failed"
[ "$failed" = 0 ] && [ "$passed" -gt 0 ]
