#!/usr/bin/env python3
"""Large networks and long sweeps: time and peak memory of the command, each within 2 GiB.

usage: ANABRANCH=build/anabranch tests/bench/size.py [NAME ...]

Prints a line for each; exit status 1 where one fails or takes more than 2 GiB. Needs /usr/bin/time.
"""
import os, re, subprocess, sys, tempfile

LIMIT_KB = 2 << 20

NETWORKS = {
    "star-1000-ports": """for k in 1 .. 1000 {
    port p[k]: 50 ohm at n[k]
    n[k] -- line(50 ohm, 90 deg @ 1 GHz) -- hub
}
sweep 800 MHz .. 1200 MHz points 11
""",
    "mesh-1000-ports": """for k in 1 .. 1000 {
    port p[k]: 50 ohm at n[k]
    n[k] -- (k*1 ohm + 20 ohm) -- hub
    n[k] -- 3 pF -- n[k+1]
}
n[1001] -- shunt 50 ohm
for k in 1 .. 990 {
    n[k] -- 5 nH -- n[k+10]
}
sweep 800 MHz .. 1200 MHz points 11
""",
    "ladder-10000-nodes": """port a: 50 ohm at n[0]
port b: 50 ohm at n[9999]
for k in 1 .. 9999 {
    n[k-1] -- inductor(1 nH, q = 60 @ 1 GHz) -- n[k] -- shunt 0.4 pF
}
sweep 100 MHz .. 3 GHz points 101
""",
    "grid-100x100-nodes": """port a: 50 ohm at n[0]
port b: 50 ohm at n[9999]
for r in 0 .. 99 {
    for c in 0 .. 98 {
        n[100*r+c] -- 10 ohm -- n[100*r+c+1]
        n[r+100*c] -- 2 nH -- n[r+100*c+100]
    }
}
for k in 0 .. 9999 {
    n[k] -- shunt 0.1 pF
}
sweep 100 MHz .. 3 GHz points 101
""",
    "points-10000000": """port a, b: 50 ohm
a -- 3 nH -- b -- shunt 2 pF
sweep 1 MHz .. 3 GHz points 10000000
""",
    "parts-100000": None,
    "parts-1000000": None,
}
for name, sections in (("parts-100000", 50000), ("parts-1000000", 499999)):
    NETWORKS[name] = f"""port a: 50 ohm at n[0]
port b: 50 ohm at n[{sections}]
for k in 1 .. {sections} {{
    n[k-1] -- 1 nH -- n[k] -- shunt 0.4 pF
}}
sweep at 1 GHz
"""


def run(name, words):
    """-> True where it went well within the limit"""
    done = subprocess.run(["/usr/bin/time", "-f", "%e %M"] + words, stdout=subprocess.DEVNULL,
                          stderr=subprocess.PIPE, text=True)
    match = re.search(r"([0-9.]+) ([0-9]+)\n\Z", done.stderr)
    if done.returncode or not match:
        print(f"{name}: exit status {done.returncode}: {done.stderr.strip()[:300]}")
        return False
    seconds, peak = float(match[1]), int(match[2])
    print(f"{name:24s} {seconds:7.2f} s {peak/1024:8.0f} MiB{'  too much' if peak > LIMIT_KB else ''}", flush=True)
    return peak <= LIMIT_KB


def main(names):
    binary = os.environ.get("ANABRANCH")
    if not binary or any(n not in NETWORKS for n in names):
        sys.stderr.write(__doc__ + "names: " + " ".join(NETWORKS) + "\n")
        return 2
    good = True
    with tempfile.TemporaryDirectory() as folder:
        for name in names or NETWORKS:
            path = os.path.join(folder, name + ".anab")
            with open(path, "w") as file:
                file.write(NETWORKS[name])
            out = os.path.join(folder, "out.ts")
            good &= run(name, [binary, "sweep", path, "-o", out])
            if name == "parts-100000":
                good &= run(name + ", show", [binary, "show", path])
            if os.path.exists(out):
                os.remove(out)
    return 0 if good else 1


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
