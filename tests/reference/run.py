#!/usr/bin/python3
"""The reference against the tool: every kind of part and option, then random networks.

usage: ANABRANCH=build/anabranch run.py [--self] [--random N] [--seed K] [--verbose]

Compares `sweep` on the netlists of cases.py, and of N (default 200) networks of random_networks.py from seed
K, with the networks that were built beside them: to 1e-11 in each S-parameter, or of the largest where that
is above 1 (a network that amplifies). --self compares with reader.py instead of the tool: that tests the
pairs, not the tool. Exit status 0 only if all agree.
"""
import sys
from collections import defaultdict

sys.dont_write_bytecode = True
import random_networks
import reader
import tool
from cases import cases
from network import Singular

TOLERANCE = 1e-11


def by_tool(case):
    points = ", ".join(f"{f!r} Hz" for f in case.frequencies)
    got, references, matrices = tool.sweep(f"{case.text}\nsweep at {points}\n")
    pairs = zip(got, case.frequencies)
    if len(got) != len(case.frequencies) or any(abs(a - b) > 1e-13 * b for a, b in pairs):
        raise tool.Failed(f"frequencies {got}, not {case.frequencies}")
    return references, matrices


def by_reader(case):
    net, _ = reader.read(case.text)
    return [float(complex(z).real) for z, _, _ in net.ports], [net.s(f) for f in case.frequencies]


def compare(case, solve):
    """-> (worst error, relative to the largest S above 1; where)"""
    references, matrices = solve(case)
    wanted = [float(complex(z).real) for z, _, _ in case.net.ports]
    if any(abs(a - b) > 1e-12 * b for a, b in zip(references, wanted)) or len(references) != len(wanted):
        raise tool.Failed(f"references {references}, not {wanted}")
    worst, where = 0.0, ""
    for f, got in zip(case.frequencies, matrices):
        want = [[complex(v) for v in row] for row in case.net.s(f)]
        scale = max(1.0, max(abs(v) for row in want for v in row))
        for i, row in enumerate(want):
            for k, value in enumerate(row):
                is_ = complex(got[i][k])
                error = abs(is_ - value) / scale
                if not error <= worst:              # also takes what is not a number
                    error = error if error == error else float("inf")
                    worst, where = error, f"S({i + 1},{k + 1}) at {f!r} Hz: {is_!r}, expected {value!r}"
    return worst, where


def option(argv, name, default):
    return int(argv[argv.index(name) + 1]) if name in argv else default


def main(argv):
    solve = by_reader if "--self" in argv else by_tool
    count, worst, passed, failed, unread = defaultdict(int), defaultdict(float), 0, 0, 0
    randoms = random_networks.networks(option(argv, "--random", 200), option(argv, "--seed", 1))
    for part in (cases(), randoms):
        for case in part:
            try:
                error, where = compare(case, solve)
                problem = "" if error <= TOLERANCE else f"off by {error:.3g} in {where}"
            except reader.BadText as e:
                unread += 1
                print(f"not read: {e} ({case.kind})")
                continue
            except (tool.Failed, Singular) as e:
                error, problem = 0.0, f"{type(e).__name__}: {e}"
            count[case.kind] += 1
            worst[case.kind] = max(worst[case.kind], error)
            passed += not problem
            failed += bool(problem)
            if problem:
                print(f"FAILED ({case.kind}) {problem}\n{case.text}\n", flush=True)
            elif "--verbose" in argv:
                print(f"ok {error:.1e} ({case.kind})\n{case.text}\n")
    for kind in count:
        print(f"{kind:20s} {count[kind]:4d} networks, worst {worst[kind]:.1e}")
    if unread:
        print(f"{unread} not read by reader.py")
    print(f"{passed} passed, {failed} failed")
    return 0 if passed and not failed else 1


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
