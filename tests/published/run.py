#!/usr/bin/python3
"""Published and closed-form values against the tool.

usage: ANABRANCH=build/anabranch run.py [--self] [--verbose] [TOPIC...]

Each topic-NN.toml holds networks in the netlist language and checks: where a value comes from, how far it is
to be trusted, and lines that derive it from S. README.md describes the lines. Every value of the collection
stands in one line, so that what is left out is seen, with its reason. --self takes S from tests/reference
instead of the tool. Exit status 0 only if every value that is checked agrees.
"""
import glob
import math
import os
import re
import sys
import tomllib

HERE = os.path.dirname(os.path.abspath(__file__))
sys.dont_write_bytecode = True
sys.path[:0] = [HERE, os.path.join(HERE, "..", "reference")]
import derive
import tool

TOLERANCE = 1e-11           # absolute; relative above 1
BAND_POINTS = 4001
UNITS = {"Hz": 1.0, "kHz": 1e3, "MHz": 1e6, "GHz": 1e9}
NUMBER = r"[-+]?(?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d+)?"


class Bad(Exception):
    """A mistake in a topic file."""


# ---- sources of S --------------------------------------------------------------------------------

def from_tool(text, frequencies):
    text += "\nsweep at " + ", ".join(f"{f!r} Hz" for f in frequencies) + "\n"
    got, references, matrices = tool.sweep(text)
    if len(got) != len(frequencies) or any(abs(a - b) > 1e-12 * b for a, b in zip(got, frequencies)):
        raise tool.Failed(f"frequencies {got}, not {frequencies}")
    return references, matrices


def from_reference(text, frequencies):
    import reader
    net, _ = reader.read(text)
    matrices = [[[complex(v) for v in row] for row in net.s(f)] for f in frequencies]
    return [float(complex(z).real) for z, _, _ in net.ports], matrices


# ---- lines ---------------------------------------------------------------------------------------

def number(text):
    """'0.5', '-0.1 - j0.2', '3e-9 H' -> value (complex where there is a j)"""
    m = re.match(rf"\s*({NUMBER})\s*(?:([-+])\s*j({NUMBER}))?", text)
    if not m:
        raise Bad(f"no number: {text!r}")
    if not m[2]:
        return float(m[1])
    return complex(float(m[1]), float(m[2] + m[3]))


def expression(text):
    return re.sub(rf"(?<![\w.])({NUMBER}) (f0|fc|[kMG]?Hz)\b", r"(\1*\2)", text.strip())


class Line:
    """`[LABEL: ]EXPRESSION [at F, ... | over F .. F | around F] = VALUE [; how near: why]`"""

    def __init__(self, text):
        self.text = text
        body, _, rule = text.partition(" ; ")
        left, equal, right = body.rpartition(" = ")
        if not equal:
            raise Bad(f"no value: {text!r}")
        self.rule, self.why = self.nearness(rule)
        self.right = right.strip()
        label, colon, rest = left.partition(": ")
        left = rest if colon else left
        m = re.match(r"(.*?) (at|over|around) (.*)$", left)
        self.how, self.where = (m[2], m[3]) if m else ("at", "f0")
        self.left = expression(m[1] if m else left)

    @staticmethod
    def nearness(rule):
        if not rule:
            return None, None
        m = re.match(r"(?:(\d+) digits|within (\S+)|(relative))\s*: (\S.*)$", rule.strip())
        if not m:
            raise Bad(f"how near, and why? {rule!r}")
        kind = ("digits", int(m[1])) if m[1] else ("within", float(m[2])) if m[2] else ("relative", None)
        return kind, m[4]

    def tolerance(self, value):
        size = abs(value)
        if self.rule is None:
            return TOLERANCE * max(1, size)
        kind, amount = self.rule
        if kind == "digits":
            return 10.0 ** (math.floor(math.log10(size)) + 1 - amount) if size else 10.0 ** -amount
        return amount if kind == "within" else TOLERANCE * size


class Network:
    """One instance of a network: its text, the S at all frequencies that its lines ask for."""

    def __init__(self, name, text, names):
        self.name, self.text, self.names = name, text, names
        self.wanted, self.points, self.extrapolated = set(), {}, None

    def used(self, definitions=None):
        """The names that the text uses, or that one of those uses."""
        definitions = definitions or self.names
        used, grown = set(), True
        while grown:
            text = " ".join([self.text, *(definitions[u] for u in used)])
            found = set(re.findall(r"[A-Za-z_]\w*", text)) & definitions.keys()
            grown = not found <= used
            used |= found
        return used

    def netlist(self, extra=()):
        """The text, behind the definitions that it uses."""
        definitions = dict(self.names, **dict(extra))
        used = self.used(definitions)
        return "".join(f"{k} = {v}\n" for k, v in definitions.items() if k in used) + self.text

    def solve(self, source):
        frequencies = sorted(self.wanted)
        if not frequencies:
            return
        if self.extrapolated is None:
            references, matrices = source(self.netlist(), frequencies)
        else:
            references, matrices = self.extrapolate(source, frequencies)
        ports = self.port_references(references)
        self.points = {f: derive.Point(m, references, ports) for f, m in zip(frequencies, matrices)}

    def extrapolate(self, source, frequencies):
        """Richardson's extrapolation of a cascade whose error has even powers of 1/n; n doubles."""
        name, counts = self.extrapolated
        table = []
        for n in counts:
            references, m = source(self.netlist({name: str(n)}), frequencies)
            table.append(m)
        for order in range(1, len(table)):
            w = 4.0 ** order
            table = [[[[(w * y - x) / (w - 1) for x, y in zip(*r)] for r in zip(*p)] for p in zip(a, b)]
                     for a, b in zip(table, table[1:])]
        return references, table[0]

    def port_references(self, references):
        """`ports = [..]` among the definitions states complex references for those of the file."""
        stated = self.names.get("references")
        return [number(p) for p in stated.split(",")] if stated else references


class Check:
    """The lines of one check, in blocks; a block stands or falls with all its lines."""

    def __init__(self, topic, data):
        self.topic, self.data, self.id = topic, data, data["id"]
        for key in ("title", "source", "kind", "values"):
            if not data.get(key):
                raise Bad(f"{self.id}: no {key}")
        self.blocks, self.left_out = [], []
        for raw in data["values"].splitlines():
            line = re.sub(r"(^|\s)#.*", "", raw).strip()
            if line:
                self.add(line)

    def add(self, line):
        word, _, rest = line.partition(" ")
        if word == "network":
            self.blocks.append({"networks": [], "lines": [], "given": [], "names": {}})
            self.network(rest)
        elif line.startswith("and network "):
            self.network(line[12:])
        elif line.startswith("left out "):
            what, because, why = line[9:].partition(" because ")
            if not because:
                raise Bad(f"{self.id}: why is it left out? {line}")
            self.left_out.append((what, self.topic.get("why", {}).get(why, why)))
        elif word in ("with", "given"):
            name, _, value = rest.partition(" = ")
            self.define(word, name.split()[0], value)
        elif word == "extrapolated":
            name, _, counts = rest.partition(" = ")
            self.blocks[-1]["networks"][-1].extrapolated = (name, [int(c) for c in counts.split(",")])
        else:
            proof = word == "proof"
            network = self.blocks[-1]["networks"][-1]
            self.blocks[-1]["lines"].append((network, Line(rest if proof else line), not proof))

    def network(self, name):
        block = self.blocks[-1]
        if name not in self.topic["networks"]:
            raise Bad(f"{self.id}: no network {name!r}")
        block["networks"].append(Network(name, self.topic["networks"][name], block["names"]))

    def define(self, word, name, value):
        block = self.blocks[-1]
        block["names"] = dict(block["names"], **{name: value.strip()})
        block["networks"][-1].names = block["names"]
        if word == "given":
            block["given"].append(name)


# ---- evaluation ----------------------------------------------------------------------------------

class Evaluator:
    """Evaluates a line's expressions; `record` notes the frequencies that it needs beforehand."""

    def __init__(self, topic, network):
        self.network = network
        self.names = dict(derive.NAMES, **UNITS)
        self.names.update(f0=topic.get("f0", 1e9), fc=topic.get("f0", 1e9))
        for key, value in network.names.items():
            if key != "references" and not value.startswith("["):
                self.define(key, value)

    def define(self, key, value):
        """A number, with or without a unit, or an expression of earlier names; parts have no value here."""
        m = re.fullmatch(rf"({NUMBER})( \S+)?", value)
        try:
            self.names[key] = float(m[1]) if m else self.eval(value)
        except (NameError, SyntaxError):
            pass

    def eval(self, text, f=None):
        names = dict(self.names)
        if f is not None:
            names["x"] = f / names["f0"]
            for method in derive.METHODS:
                names[method] = lambda *a, m=method: self.call(m, f, *a)
        return eval(expression(text), dict(names, __builtins__={}))

    def call(self, method, f, *arguments):
        return getattr(self.network.points[f], method)(*arguments)

    def frequencies(self, line):
        if line.how == "over":
            low, high = [float(self.eval(p)) for p in line.where.split(" .. ")]
            return [low + (high - low) * k / (BAND_POINTS - 1) for k in range(BAND_POINTS)]
        if line.how == "around":
            return [float(self.eval(line.where)) * u for u, _ in QUADRATURE]
        return [float(self.eval(p)) for p in line.where.split(", ")]

    def record(self, line):
        for f in self.frequencies(line):
            self.network.wanted.add(f)

    def pairs(self, line):
        """(computed, expected) values"""
        frequencies = self.frequencies(line)
        if line.how == "over":
            name, _, inner = line.left.partition(" ")
            values = [self.eval(inner, f) for f in frequencies]
            return [(peak(values, max if name == "max" else min), self.expected(line, None))]
        if line.how == "around":
            centre = 2 * math.pi * float(self.eval(line.where))
            values = (self.eval(line.left, f) for f in frequencies)
            total = centre * sum(w * v for v, (_, w) in zip(values, QUADRATURE))
            return [(total, self.expected(line, None))]
        out = []
        for f in frequencies:
            value = self.eval(line.left, f)
            want = self.expected(line, f)
            out += [(v, want) for v in (value if isinstance(value, list) else [value])]
        return out

    def expected(self, line, f):
        m = re.fullmatch(rf"({NUMBER})(\s*[-+]\s*j{NUMBER})?( (ohm|S|H|F|W|V|dB|deg|rad/s))?", line.right)
        return number(line.right) if m else self.eval(line.right, f)


def peak(values, most):
    """The extreme of evenly spaced values, by a parabola through its neighbours where it is inside."""
    if any(v != v for v in values):
        return math.nan
    v = most(values)
    k = values.index(v)
    if 0 < k < len(values) - 1:
        a, b = values[k - 1], values[k + 1]
        bend = a - 2 * v + b
        if bend:
            v -= (b - a) ** 2 / (8 * bend)
    return v


def _quadrature():
    """Nodes u and weights for the integral over u from 0 to infinity: u = exp(t), t = sinh(s), trapezoids."""
    h, out = 1 / 16, []
    for k in range(-64, 65):
        s = k * h
        u = math.exp(math.sinh(s))
        weight = h * math.cosh(s) * u
        if 1e-14 < u < 1e7:
            out.append((u, weight))
    return out


QUADRATURE = _quadrature()


# ---- a topic -------------------------------------------------------------------------------------

class Tally:
    def __init__(self):
        self.checked = self.listed = self.failed = self.worst = 0
        self.reasons = {}

    def merge(self, other):
        for key in ("checked", "listed", "failed"):
            setattr(self, key, getattr(self, key) + getattr(other, key))
        self.worst = max(self.worst, other.worst)
        for why, n in other.reasons.items():
            self.reasons[why] = self.reasons.get(why, 0) + n

    def text(self):
        left = "; ".join(f"{n} because {why}" for why, n in sorted(self.reasons.items(), key=lambda r: -r[1]))
        return f"{self.checked} of {self.listed} listed values checked; left out: {left or 'none'}"


def run_block(check, block, source, tally, verbose):
    """A block's given values count only if all its lines hold."""
    problems, mentioned = [], set()
    evaluators = {id(n): Evaluator(check.topic, n) for n in block["networks"]}
    for network, line, _ in block["lines"]:
        evaluators[id(network)].record(line)
    try:
        for network in block["networks"]:
            mentioned |= network.used()
            network.solve(source)
    except (tool.Failed, ArithmeticError) as e:
        problems.append(str(e))
    for network, line, listed in block["lines"]:
        mentioned |= set(re.findall(r"[A-Za-z_]\w*", line.text))
        problem = None if not problems or network.points else "not computed"
        if problem is None:
            problem = compare(evaluators[id(network)], line, tally)
        tally.listed += listed
        tally.checked += listed and problem is None
        tally.failed += problem is not None
        if problem:
            problems.append(f"{line.text}: {problem}")
        elif verbose:
            print(f"  ok  {check.id}: {line.text}")
    idle = [g for g in block["given"] if g not in mentioned]
    if idle or block["given"] and not block["lines"]:
        raise Bad(f"{check.id}: {', '.join(idle)} given, but nothing uses it")
    tally.listed += len(block["given"])
    tally.checked += 0 if problems else len(block["given"])
    tally.failed += len(block["given"]) if problems else 0
    for p in problems:
        print(f"FAILED {check.id}: {p}")


def compare(evaluator, line, tally):
    try:
        pairs = evaluator.pairs(line)
    except (ArithmeticError, ValueError) as e:
        return f"{type(e).__name__}: {e}"
    for got, want in pairs:
        error, tolerance = abs(got - want), line.tolerance(want)
        if not error <= tolerance:
            return f"{got!r}, expected {want!r}; off by {error:.3g}, tolerance {tolerance:.3g}"
        if line.rule is None:
            tally.worst = max(tally.worst, error / max(1, abs(want)))
    return None


def run_topic(path, source, verbose):
    with open(path, "rb") as fh:
        topic = tomllib.load(fh)
    tally = Tally()
    for data in topic["check"]:
        check = Check(topic, data)
        for block in check.blocks:
            run_block(check, block, source, tally, verbose)
        tally.listed += len(check.left_out)
        for _, why in check.left_out:
            tally.reasons[why] = tally.reasons.get(why, 0) + 1
    if tally.listed != topic["listed"]:
        raise Bad(f"{tally.listed} values in {path}, {topic['listed']} in the collection")
    print(f"topic {topic['topic']:2d}: {tally.text()}; worst of those at 1e-11: {tally.worst:.1e}")
    return tally


def main(argv):
    verbose = "--verbose" in argv
    source = from_reference if "--self" in argv else from_tool
    wanted = [int(a) for a in argv if not a.startswith("--")]
    total = Tally()
    try:
        for path in sorted(glob.glob(os.path.join(HERE, "topic-*.toml"))):
            if not wanted or int(path[-7:-5]) in wanted:
                total.merge(run_topic(path, source, verbose))
    except Bad as e:
        print(f"FAILED {e}")
        return 1
    print(total.text())
    print(f"{total.checked} passed, {total.failed} failed")
    return 0 if total.checked and not total.failed else 1


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
