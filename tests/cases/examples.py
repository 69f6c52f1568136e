#!/usr/bin/python3
"""Every example in netlists/ does what its head says.

usage: ANABRANCH=path/to/anabranch examples.py [--self] [NAME...]

For each example: the values in the table below, which come from closed forms and not from the engine; every
`require` of the file, at the points of its sweep; and S at a few points against tests/reference, which
computes with 40 digits. An example that the table does not know fails. --self takes S from tests/reference
instead of the command: that tests the examples and this table. The last line is `N passed, N failed`.
"""
import cmath
import functools
import glob
import math
import os
import re
import subprocess
import sys

HERE = os.path.dirname(os.path.abspath(__file__))
NETLISTS = os.path.normpath(os.path.join(HERE, "..", "..", "netlists"))
sys.path.insert(0, os.path.join(HERE, "..", "reference"))
import tool

TOLERANCE = 1e-10               # of S where nothing else is said; prose rounds, and says so by `digits`
FEW = 5                         # points of each sweep that are held against the reference
BEYOND_THE_READER = {"match_pi", "gauge_station", "gauge_station, 12 m"}  # `assume`, `include`, `cases`
UNITS = {"Hz": 1.0, "kHz": 1e3, "MHz": 1e6, "GHz": 1e9}
R2 = math.sqrt(0.5)
Z0 = 50.0


class Wrong(Exception):
    pass


# ---- two-ports in a chain, for the closed forms -------------------------------------------------


def product(*matrices):
    (a, b), (c, d) = (1, 0), (0, 1)
    for (e, f), (g, h) in matrices:
        (a, b), (c, d) = (a * e + b * g, a * f + b * h), (c * e + d * g, c * f + d * h)
    return (a, b), (c, d)


def series(z):
    return (1, z), (0, 1)


def shunt(y):
    return (1, 0), (y, 1)


def travel(z, gamma):
    return (cmath.cosh(gamma), z * cmath.sinh(gamma)), (cmath.sinh(gamma) / z, cmath.cosh(gamma))


def scattering(chain, z1, z2):
    """-> S11, S21 between real references."""
    (a, b), (c, d) = chain
    below = a * z2 + b + c * z1 * z2 + d * z1
    return (a * z2 + b - c * z1 * z2 - d * z1) / below, 2 * math.sqrt(z1 * z2) / below


def coil(l, hz, q, q_hz, srf=None):
    """Its impedance: Q falls off as the square root of frequency; `srf` is a capacitance across all."""
    w = 2 * math.pi * hz
    z = 2 * math.pi * q_hz * l / q * math.sqrt(hz / q_hz) + 1j * w * l
    return 1 / (1 / z + 1j * w / ((2 * math.pi * srf) ** 2 * l)) if srf else z


def chip(c, hz, q, q_hz, esl=0.0):
    """A capacitor's admittance: the same series resistance everywhere."""
    w = 2 * math.pi * hz
    return 1 / (1 / (2 * math.pi * q_hz * c * q) + 1 / (1j * w * c) + 1j * w * esl)


def l_match(hz):
    q, w0, w = math.sqrt(50 / 12 - 1), 2 * math.pi * 433.92e6, 2 * math.pi * hz
    return scattering(product(series(1j * w * q * 12 / w0), shunt(1j * w * q / (w0 * 50))), 12.0, 50.0)


def pi_match(hz):
    shunts = [shunt(chip(c, hz, 400, 433.92e6)) for c in (13e-12, 7.5e-12)]
    return scattering(product(shunts[0], series(coil(24e-9, hz, 60, 433.92e6)), shunts[1]), 50.0, 200.0)


def gauge(hz, metres):
    """Both antennas are in step, so that the splitter's two arms are one of half the impedance."""
    w, edge, arm = 2 * math.pi * hz, 2 * math.pi * 700e6, 2 * math.pi * 433.92e6
    a, z = 10 ** (3 / 20), math.sqrt(2) * 50
    across = shunt((a - 1) / (a + 1) / 50)
    pad = product(across, series(50 * (a * a - 1) / (2 * a)), across)
    ladder = [series(coil(50 / edge, hz, 40, 900e6)), shunt(chip(2 / (edge * 50), hz, 250, 900e6))]
    loss = 0.15 * metres * math.sqrt(hz / 433.92e6) * math.log(10) / 20
    cable = travel(50, loss + 1j * w * metres / (0.83 * 299792458))
    head = shunt(chip(2 / (arm * z), hz, 300, 900e6, 0.4e-9))
    halves = [series(coil(z / arm, hz, 45, 900e6, 3e9) / 2),
              shunt(2 * chip(1 / (arm * z), hz, 300, 900e6, 0.4e-9))]
    s11, s21 = scattering(product(pad, *ladder, ladder[0], cable, head, *halves), 50.0, 25.0)
    return s11, s21 * R2


def stub_match(hz):
    """30 - j40 ohm: t = (-40 + sqrt(30*2000/50))/(30 - 50) = 0.26795 is the tangent of 15 deg."""
    f = hz / 868.3e6
    along, stub = math.radians(15 * f), math.atan(math.sqrt(3) / 2) * f
    (a, b), (c, d) = product(shunt(1 / (1j * Z0 * math.tan(stub))), travel(Z0, 1j * along))
    z = (a * (30 - 40j) + b) / (c * (30 - 40j) + d)
    return (z - Z0) / (z + Z0)


def chebyshev(hz):
    """The size of S21; Tn(x) = cosh(n acosh x)."""
    e = math.sqrt(10 ** 0.01 - 1)
    return 1 / math.sqrt(1 + (e * cmath.cosh(5 * cmath.acosh(hz / 470e6)).real) ** 2)


def shared(hz):
    """The diplexer: what `low` and `high` get of the power."""
    x = (hz / math.sqrt(433.92e6 * 868.3e6)) ** 10
    return 1 / (1 + x), x / (1 + x)


def coupler(hz):
    """-> coupled, through (Oliver 1954, Jones and Bolljahn 1956)"""
    c, angle = 10 ** -0.5, math.pi / 2 * hz / 868.3e6
    root = math.sqrt(1 - c * c)
    below = root * math.cos(angle) + 1j * math.sin(angle)
    return 1j * c * math.sin(angle) / below, root / below


def cable(hz):
    loss = 0.15 * 12 * math.sqrt(hz / 433.92e6) * math.log(10) / 20
    return cmath.exp(-loss - 2j * math.pi * hz * 12 / (0.83 * 299792458))


def hybrid_isolation(hz):
    return 20 * math.log10(2) + 10 * math.log10(1 + (4 * 2 * math.pi * hz * 1e-6 / Z0) ** 2)


# ---- what the heads say ---------------------------------------------------------------------------
# ports, then (what, at which frequency in MHz, what it is[, tolerance]). `max` and `min` look over the sweep.
# A tolerance of 0.05, say, stands where the head rounds to one digit. Last, where there are any, the
# `cases` that are chosen.

M434, M868 = 433.92, 868.3
NOTHING = 0.0

EXAMPLES = {
    "splitter_quarter_wave": ("common left right", [
        ("S(left, common)", 1000, -1j * R2), ("S(right, common)", 1000, -1j * R2),
        ("S(common, common)", 1000, NOTHING), ("S(left, left)", 1000, NOTHING),
        ("S(right, left)", 1000, NOTHING),
        # closed roots: the sections' even and odd halves
        ("isolation(left, right)", 819.4328801979911, 20.0),
        ("isolation(left, right)", 1180.567119802009, 20.0),
        ("return_loss(common)", 816.4991577520184, 20.0), ("return_loss(common)", 1183.5008422479816, 20.0),
        ("S(common, common)", 2000, -1 / 3), ("S(left, common)", 2000, -2 / 3),
        ("S(right, left)", 2000, 2 / 3),
    ]),
    "splitter_lumped": ("common left right", [
        ("S(left, common)", M434, -1j * R2), ("S(right, common)", M434, -1j * R2),
        ("S(common, common)", M434, NOTHING), ("S(left, left)", M434, NOTHING),
        ("S(right, left)", M434, NOTHING),
        ("isolation(left, right)", 0.8813 * M434, 20, 0.01),
        ("isolation(left, right)", 1.1147 * M434, 20, 0.01),
        ("insertion_loss(common, left)", 2 * M434, 13.5, 0.05),
    ]),
    "splitter_resistive": ("common left right", [
        (f"S({a}, {b})", f, 0.0 if a == b else 0.5)
        for f in (0, 1000) for a in ("common", "left", "right") for b in ("common", "left", "right")
    ]),
    # S of the rounded values of the table: even and odd halves, and a 40-digit nodal solution, agree
    "splitter_three_sections": ("common left right", [
        ("S(common, common)", 650, 0.00001865005092556155888755),
        ("S(left, common)", 650, 0.7071067810635730286067j),
        ("S(left, left)", 650, 0.00002701601645669825632101),
        ("S(right, left)", 650, -0.00000836596553113669743346),
        ("S(common, common)", 455, -0.04289969380976192079252 + 0.006450615573983009060395j),
        ("S(left, common)", 455, -0.6986198392615483847053 + 0.1048299723602032597564j),
        ("S(right, left)", 780, 0.03053959760598314724728 + 0.02461694628461909925006j),
        ("max vswr(common)", None, 1.105216905783611, 1e-4),
        ("max vswr(left)", None, 1.038191746261219, 1e-4),
        ("min isolation(left, right)", None, 27.85723961717485, 1e-2),
    ]),
    "splitter_unequal": ("common far near", [
        ("S(far, common)", M868, 1j * math.sqrt(2 / 3)), ("S(near, common)", M868, 1j * math.sqrt(1 / 3)),
        ("S(common, common)", M868, NOTHING), ("S(far, far)", M868, NOTHING),
        ("S(near, near)", M868, NOTHING),
        ("S(near, far)", M868, NOTHING),
        # at 0.8 f0, from a 40-digit nodal solution
        ("S(common, common)", 694.64, 0.04762116683468478641112 + 0.02264778784395971194792j),
        ("S(near, common)", 694.64, -0.4661801201369200498882 + 0.3295010614076964570524j),
        ("S(far, common)", 694.64, -0.670781279663037644497 + 0.467838161901442425789j),
        ("S(near, far)", 694.64, -0.03856738756777212726248 + 0.0613686756541506642863j),
    ]),
    "feed_four": ("common out[1] out[2] out[3] out[4]", [
        *((f"S(out[{k}], common)", 1000, -0.5) for k in range(1, 5)),
        *((f"S(out[{k}], out[{m}])", 1000, NOTHING) for k in range(1, 5) for m in range(1, k + 1)),
        ("S(common, common)", 1000, NOTHING), ("return_loss(common)", 820, 24.69, 0.005),
    ]),
    "feed_sixteen": ("common " + " ".join(f"out[{k}]" for k in range(1, 17)), [
        *((f"S(out[{k}], common)", M868, cmath.rect(0.25, math.radians(-480))) for k in range(1, 17)),
        *((f"S(out[{k}], out[{m}])", M868, NOTHING) for k in range(1, 17) for m in range(1, k + 1)),
        ("S(common, common)", M868, NOTHING),
    ]),
    "feed_phased": ("common out[1] out[2] out[3] out[4]", [
        *((f"S(out[{k}], common)", M868, cmath.rect(0.5, math.radians(-135 - 45 * k))) for k in range(1, 5)),
        *((f"S(out[{k}], out[{m}])", M868, NOTHING) for k in range(1, 5) for m in range(1, k + 1)),
        ("S(common, common)", M868, NOTHING),
    ]),
    "hybrid_branch_line": ("in through coupled isolated", [
        ("S(through, in)", M868, -1j * R2), ("S(coupled, in)", M868, -R2),
        ("S(isolated, in)", M868, NOTHING),
        ("S(in, in)", M868, NOTHING), ("S(coupled, through)", M868, NOTHING),
    ]),
    "hybrid_ring": ("sum left right difference", [
        ("S(left, sum)", M434, -1j * R2), ("S(right, sum)", M434, -1j * R2),
        ("S(difference, sum)", M434, NOTHING),
        ("S(right, difference)", M434, -1j * R2), ("S(left, difference)", M434, 1j * R2),
        ("S(right, left)", M434, NOTHING), ("S(sum, sum)", M434, NOTHING), ("S(left, left)", M434, NOTHING),
        ("S(difference, difference)", M434, NOTHING),
    ]),
    "coupler_coupled_lines": ("in through coupled isolated", [
        ("S(coupled, in)", M868, 10 ** -0.5), ("S(through, in)", M868, -1j * math.sqrt(0.9)),
        ("gain(in, through)", M868, -0.4576, 5e-5),
        *((f"S({port}, in)", f, coupler(f * 1e6)[k]) for f in (400, 600, 1300) for k, port in
          enumerate(("coupled", "through"))),
        ("S(isolated, in)", 600, NOTHING), ("S(in, in)", 600, NOTHING),
        ("coupling(in, coupled)", 0.78 * M868, 10.5, 0.05),
        ("coupling(in, coupled)", 1.22 * M868, 10.5, 0.05),
    ]),
    "hybrid_transformer": ("common left right", [
        *((f"S({a}, {b})", f, value) for f in (1, 10, 500) for a, b, value in
          (("left", "common", R2), ("right", "common", R2), ("common", "common", NOTHING))),
        *(("isolation(left, right)", f, hybrid_isolation(f * 1e6)) for f in (1, 10, 100, 500)),
        ("isolation(left, right)", 10, 20.2, 0.05), ("isolation(left, right)", 100, 40.0, 0.05),
    ]),
    "match_l": ("amplifier antenna", [
        ("S(amplifier, amplifier)", M434, NOTHING), ("S(antenna, antenna)", M434, NOTHING),
        ("return_loss(amplifier)", 0.8758 * M434, 15, 0.01),
        ("return_loss(amplifier)", 1.1104 * M434, 15, 0.01),
        *((f"S({port}, amplifier)", f, l_match(f * 1e6)[k]) for f in (300, 500, 867.84) for k, port in
          enumerate(("amplifier", "antenna"))),
    ]),
    "match_pi": ("radio antenna", [
        *((f"S({port}, radio)", f, pi_match(f * 1e6)[k]) for f in (350, M434, 520) for k, port in
          enumerate(("radio", "antenna"))),
        ("insertion_loss(radio, antenna)", M434, 0.49, 0.005),
    ]),
    "match_stub": ("radio", [
        ("S(radio, radio)", M868, NOTHING),
        *(("S(radio, radio)", f, stub_match(f * 1e6)) for f in (800, 900)),
    ]),
    "balun_lattice": ("cable antenna", [
        ("S(antenna, cable)", M434, -1j), ("S(cable, cable)", M434, NOTHING),
        ("S(antenna, antenna)", M434, NOTHING),
    ]),
    "diplexer": ("antenna low high", [
        *(("S(antenna, antenna)", f, NOTHING) for f in (100, M434, 613.8, M868, 2000)),
        *((f"share({port}, antenna)", f, shared(f * 1e6)[k]) for f in (100, M434, 613.8, M868, 2000)
          for k, port in enumerate(("low", "high"))),
        ("insertion_loss(antenna, low)", M434, 0.133, 5e-4),
        ("insertion_loss(antenna, high)", M868, 0.133, 5e-4),
        # lossless, with the antenna matched: what passes between the two is the product of their shares
        *(("share(high, low)", f, math.prod(shared(f * 1e6))) for f in (M434, 700)),
        ("isolation(low, high)", M434, 15.33, 0.005),
    ]),
    "filter_low_pass": ("transmitter antenna", [
        *(("size(antenna, transmitter)", f, chebyshev(f * 1e6))
          for f in (10, 200, M434, 470, 867.84, 1301.76)),
        ("insertion_loss(transmitter, antenna)", 470, 0.1),
        ("insertion_loss(transmitter, antenna)", 867.84, 30.79, 0.005),
        ("insertion_loss(transmitter, antenna)", 1301.76, 50.51, 0.005),
    ]),
    "pad_pi": ("in out ideal_in ideal_out", [
        (f"S({a}, {b})", f, value) for f in (0, 1000) for a, b, value in
        (("out", "in", 10 ** -0.5), ("in", "in", 0.0), ("out", "out", 0.0),
        ("ideal_out", "ideal_in", 10 ** -0.5),
         ("ideal_in", "ideal_in", 0.0), ("ideal_in", "in", 0.0))
    ]),
    "cable_lossy": ("hut mast", [
        *(("S(mast, hut)", f, cable(f * 1e6)) for f in (100, M434, M868)),
        ("S(hut, hut)", 700, NOTHING), ("insertion_loss(hut, mast)", M434, 1.8),
        ("insertion_loss(hut, mast)", M868, 2.546, 5e-4),
    ]),
    "gauge_station": ("transmitter upstream downstream", [
        *((f"S({port}, transmitter)", f, gauge(f * 1e6, 3)[k]) for f in (300, M434, 867.84) for k, port in
          enumerate(("transmitter", "upstream"))),
        ("insertion_loss(transmitter, downstream)", M434, 7.23, 0.005),
        ("insertion_loss(transmitter, downstream)", 867.84, 7.23 + 9.2, 0.05),
        ("return_loss(transmitter)", M434, 19.8, 0.05),
        ("isolation(upstream, downstream)", M434, 22.7, 0.05),
    ], "run = 3 m"),
    "gauge_station, 12 m": ("transmitter upstream downstream", [
        *((f"S({port}, transmitter)", f, gauge(f * 1e6, 12)[k]) for f in (M434, 867.84) for k, port in
          enumerate(("transmitter", "upstream"))),
        ("insertion_loss(transmitter, upstream)", M434, 8.70, 0.005),
    ], "run = 12 m"),
}


# ---- where S comes from -------------------------------------------------------------------------


def path_of(name):
    return os.path.join(NETLISTS, name.split(",")[0] + ".anab")


def from_tool(name, points):
    """Points in Hz, or None for the file's own sweep. -> {Hz: matrix}"""
    wanted = ["--sweep", "at " + ", ".join(f"{f!r} Hz" for f in points)] if points else []
    for chosen in EXAMPLES[name][2:]:
        wanted += ["--set", chosen]
    run = subprocess.run([tool.binary(), "sweep", path_of(name), *wanted], capture_output=True, timeout=300,
                         cwd="/", check=False)
    if run.returncode or run.stderr:
        raise Wrong(f"exit status {run.returncode}: {run.stderr.decode(errors='replace').strip()[:400]}")
    got, _, matrices = tool.parse(run.stdout.decode())
    return dict(zip(got, matrices))


def from_reference(name, points):
    import reader
    with open(path_of(name), encoding="utf-8") as fh:
        net, own = reader.read(fh.read())
    chosen = points or [float(f) for f in own[::max(1, len(own) // 40)]]
    return {f: [[complex(v) for v in row] for row in net.s(f)] for f in chosen}


# ---- measures, from their definitions -------------------------------------------------------------


def decibel(value):
    return math.inf if value == 0 else -20 * math.log10(abs(value))


def spread(values):
    return max(values) - min(values)


MEASURES = {
    "S": lambda s, to, at: s[to][at],
    "size": lambda s, to, at: abs(s[to][at]),
    "share": lambda s, to, at: abs(s[to][at]) ** 2,
    "return_loss": lambda s, p: decibel(s[p][p]),
    "vswr": lambda s, p: (1 + abs(s[p][p])) / (1 - abs(s[p][p])),
    "insertion_loss": lambda s, at, to: decibel(s[to][at]),
    "isolation": lambda s, p, q: decibel(s[q][p]),
    "coupling": lambda s, at, to: decibel(s[to][at]),
    "gain": lambda s, at, to: -decibel(s[to][at]),
    "amplitude_balance": lambda s, at, *to: spread([decibel(s[k][at]) for k in to]),
    "phase_balance": lambda s, at, a, b: math.degrees(cmath.phase(s[b][at] / s[a][at])),
}


def measure(text, ports, s):
    m = re.fullmatch(r"(\w+)\((.*)\)", text)
    if not m or m[1] not in MEASURES:
        raise Wrong(f"no measure: {text}")
    return MEASURES[m[1]](s, *(ports.index(p.strip()) for p in m[2].split(",")))


# ---- the three checks -------------------------------------------------------------------------------


def check_table(ports, lines, at_points, own):
    for what, where, value, *tolerance in lines:
        words = what.split(" ", 1)
        if words[0] in ("max", "min"):
            low, high = where or (0, math.inf)
            within = [s for f, s in own.items() if low * 1e6 <= f <= high * 1e6]
            got = {"max": max, "min": min}[words[0]](measure(words[1], ports, s) for s in within)
        else:
            got = measure(what, ports, at_points[where * 1e6])
        yield what, got, value, abs(got - value) <= (tolerance or [TOLERANCE * max(1, abs(value))])[0]


def hertz(text, netlist):
    """`1 GHz`, or the name of such a value."""
    m = re.fullmatch(r"([\d.]+)\s*([kMG]?Hz)", text.strip())
    if m:
        return float(m[1]) * UNITS[m[2]]
    m = re.search(rf"^{re.escape(text.strip())}\s*=\s*([\d.]+ *[kMG]?Hz)", netlist, re.M)
    if not m:
        raise Wrong(f"no frequency: {text}")
    return hertz(m[1], netlist)


def span(text, netlist):
    if ".." not in text:
        m = re.search(rf"^{re.escape(text.strip())}\s*=\s*(.+\.\..+)$", netlist, re.M)
        if not m:
            raise Wrong(f"no range: {text}")
        text = m[1]
    low, high = text.split("..")
    return hertz(low, netlist), hertz(high, netlist)


REQUIRE = re.compile(r"^require\s+(\w+\([^)]*\))\s*(>=|<=|within)\s*(-?[\d.]+)[ \w]*?"
                     r"(?:\.\.\s*(-?[\d.]+)[ \w]*?)?(?:\s(over|at)\s+(.+?))?$", re.M)


def check_requirements(netlist, ports, own, source_at):
    text = re.sub(r"[ \t]*#.*", "", netlist)
    found = list(REQUIRE.finditer(text))
    if len(found) != len(re.findall(r"^require\b", text, re.M)) or len(found) < 2:
        raise Wrong(f"{len(found)} requirements read")
    for m in found:
        if m[5] == "at":
            within = list(source_at([hertz(m[6], text)]).values())
        else:
            low, high = span(m[6], text) if m[5] else (0, math.inf)
            within = [s for f, s in own.items() if low <= f <= high]
        if not within:
            raise Wrong(f"no point of the sweep is in {m[0]}")
        bounds = (float(m[3]), math.inf) if m[2] == ">=" else (-math.inf, float(m[3]))
        bounds = (float(m[3]), float(m[4])) if m[2] == "within" else bounds
        turn = 360 if m[1].startswith("phase") else 0
        values = [measure(m[1], ports, s) for s in within]
        values = [v + turn if turn and v < bounds[0] - turn / 2 else v for v in values]
        met = all(bounds[0] <= v <= bounds[1] for v in values)
        yield m[0], (min(values), max(values)), bounds, met


def check_reference(name, own):
    points = sorted(own)
    few = points[::max(1, (len(points) - 1) // (FEW - 1))]
    for f, expected in from_reference(name, few).items():
        worst = max(abs(a - b) for r, q in zip(own[f], expected) for a, b in zip(r, q))
        yield f"S at {f!r} Hz against the reference", worst, 0.0, worst <= TOLERANCE


def check_head(netlist):
    """It begins by saying what the network is, what it is for, and what to expect."""
    head = re.match(r"(#.*\n)+", netlist)
    for word in ("# Purpose: ", "# Expected"):
        yield f"the head's `{word}`", bool(head and word in head[0]), True, bool(head and word in head[0])


def check_example(name, source):
    """Yields (what, got, expected, whether it is well)."""
    if name not in EXAMPLES:
        raise Wrong("tests/cases/examples.py does not know it")
    with open(path_of(name), encoding="utf-8") as fh:
        netlist = fh.read()
    ports, lines = EXAMPLES[name][0].split(), EXAMPLES[name][1]
    own = source(name, None)
    points = sorted({where * 1e6 for _, where, *_ in lines if isinstance(where, (int, float))})
    yield from check_head(netlist)
    yield from check_table(ports, lines, source(name, points), own)
    yield from check_requirements(netlist, ports, own, functools.partial(source, name))
    if source is from_tool and name not in BEYOND_THE_READER:
        yield from check_reference(name, own)


def main(argv):
    source = from_reference if "--self" in argv else from_tool
    wanted = [a for a in argv if not a.startswith("--")]
    names = [os.path.basename(p)[:-5] for p in sorted(glob.glob(os.path.join(NETLISTS, "*.anab")))]
    passed = failed = 0
    for name in sorted(set(names) | set(EXAMPLES)):
        if wanted and name not in wanted or source is from_reference and name in BEYOND_THE_READER:
            continue
        try:
            for what, got, expected, well in check_example(name, source):
                passed, failed = passed + well, failed + (not well)
                if not well:
                    print(f"FAILED {name}: {what}: {got}, {expected} expected")
        except (Wrong, tool.Failed, OSError, ValueError, LookupError, ArithmeticError,
                subprocess.SubprocessError) as e:
            failed += 1
            print(f"FAILED {name}: {type(e).__name__}: {e}")
    print(f"{passed} passed, {failed} failed")
    return 0 if passed and not failed else 1


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
