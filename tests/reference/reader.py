"""A small reader of the netlist language, from docs/language.md, for the reference.

It knows what the networks of the tests use: names, lists, ranges, arithmetic with units, chains, `shunt`,
`||`, labels, `on`, `join`, `for`, `if`, networks, own kinds of parts, ports and sweeps; no `assume`, no
`include`, no measures, no `preferred`. Tolerances are left out. It trusts its input: what it does not know is
a BadText, without a place.
Numbers are taken as they are written, not as the nearest doubles.
"""
from mpmath import mp, mpf, mpc

import network as n
from text import ANGLE, BASE, LEVEL, NONE, BadText, Parser


class Quantity:
    """A value in units of V, A, s, m, turns and dB, and its dimension."""

    def __init__(self, value, dimension=NONE):
        self.value, self.dimension = value, tuple(dimension)

    def __add__(self, other):
        return Quantity(self.value + other.value, self.dimension)

    def __mul__(self, other):
        return Quantity(self.value * other.value, [a + b for a, b in zip(self.dimension, other.dimension)])

    def power(self, exponent):
        return Quantity(self.value ** exponent, [a * exponent for a in self.dimension])

    def radians(self):
        return self.value * 2 * mp.pi if self.dimension == ANGLE else self.value


# ---- a tree to a network -------------------------------------------------------------------------

MATHS = {"exp": mp.exp, "ln": mp.log, "log10": mp.log10, "sin": mp.sin, "cos": mp.cos, "tan": mp.tan,
         "floor": mp.floor, "ceil": mp.ceil, "round": mp.nint}
INVERSE = {"asin": mp.asin, "acos": mp.acos, "atan": mp.atan, "arg": mp.arg}
KEEPING = {"abs": abs, "real": mp.re, "imag": mp.im, "conj": mp.conj}
FUNCTIONS = {*MATHS, *INVERSE, *KEEPING, "sqrt", "min", "max", "round", "atan2", "amplitude", "decibel"}
# a part's arguments in order; "L" stands for the length of a line
ORDER = {"resistor": ["r"], "inductor": ["l"], "capacitor": ["c"], "impedance": ["z"], "admittance": ["y"],
         "line": ["z", "L"], "open_stub": ["z", "L"], "shorted_stub": ["z", "L"], "attenuator": ["db"],
         "line_constants": ["r", "l", "g", "c", "length"], "transformer": ["n"], "phase_shift": ["turns"],
         "isolator": [], "circulator": [], "gyrator": ["r"], "transconductance": ["gm"],
         "coupled_inductors": ["l1", "l2", "k"], "coupled_lines": ["L"]}


def at_or_value(q):
    if isinstance(q, n.At):
        return n.At(q.value.value, q.hz.value)
    return q.value


def length(q):
    """A length's arguments of network.Length."""
    if isinstance(q, n.At):
        return {"turns": n.At(q.value.value, q.hz.value)}
    return {"seconds" if q.dimension == BASE["s"] else "metres": q.value}


class Function:
    """A quantity that depends on `frequency`: its tree and where it was written."""

    def __init__(self, tree, scope):
        self.tree, self.scope = tree, scope

    def __call__(self, f):
        inner = Scope(self.scope)
        inner.names["frequency"] = Quantity(f, BASE["Hz"])
        return inner.value(self.tree).value


class Scope:
    def __init__(self, outer=None, net=None, prefix=""):
        self.names, self.outer = {}, outer
        self.net = net if net is not None else outer.net
        self.prefix = prefix if outer is None or prefix else outer.prefix
        self.sweeps = outer.sweeps if outer else []

    def find(self, name):
        scope = self
        while scope is not None:
            if name in scope.names:
                return scope.names[name]
            scope = scope.outer
        return None

    def child(self):
        return Scope(self)

    # -- statements

    def run(self, statements, inside=None):
        for s in statements:
            getattr(self, "do_" + s[0])(*s[1:], *([inside] if s[0] in ("port", "for", "if") else []))

    def do_none(self):
        pass

    def do_set(self, name, tree):
        self.names[name] = self.lazy(tree)

    def do_own(self, name, formals, tree):
        self.names[name] = ("own", formals, tree, self)

    def do_network(self, name, formals, block):
        self.names[name] = ("network", formals, block, self)

    def do_join(self, nodes):
        self.net.join(*[self.node(x) for x in nodes])

    def do_for(self, name, bounds, block, inside):
        low, high = self.bounds(bounds)
        for k in range(int(low.value), int(high.value) + 1):
            inner = self.child()
            inner.names[name] = Quantity(mpf(k))
            inner.run(block, inside)

    def do_if(self, test, yes, no, inside):
        a, b = self.value(test[1]).value, self.value(test[2]).value
        holds = {"<": a < b, "<=": a <= b, ">": a > b, ">=": a >= b, "==": a == b, "!=": a != b}[test[0]]
        self.run(yes if holds else no, inside)

    def do_port(self, names, z, nodes, inside):
        for name in names:
            ends = [self.node(x) for x in (nodes or [name])]
            if inside is not None:
                inside.append(ends[0])
            else:
                self.net.port(self.value(z).value, *ends)

    def bounds(self, tree):
        r = self.value(tree)
        return r if isinstance(r, tuple) else (r, r)

    def do_at(self, values):
        self.sweeps += [float(self.value(v).value) for v in values]

    def do_grid(self, bounds, kind, count):
        low, high = [float(q.value) for q in self.bounds(bounds)]
        c = float(self.value(count).value)
        if kind == "points":
            grid = [low + (high - low) * k / (c - 1) for k in range(int(c) - 1)] + [high]
        elif kind == "step":
            grid = [low + c * k for k in range(int((high * (1 + 1e-12) - low) / c) + 1)]
        else:
            steps = int(mp.ceil(c * mp.log10(high / low) - mpf(10) ** -9))
            grid = [low * (high / low) ** (k / steps) for k in range(steps)] + [high]
        self.sweeps += grid

    def do_on(self, label, item, terminals):
        nodes = [self.node(x) for _, x in terminals]
        part = self.value(item, placed_on=len(nodes))
        if isinstance(part, Placement):
            part.label = self.node(label) if label else None
            part.on(self.net, *nodes)
        else:
            self.part(part).on(self.net, *nodes)

    def do_path(self, path):
        out = []
        for tree in path:
            if self.is_node(tree):
                out.append(self.node(tree))
            else:
                out.append(self.placeable(tree))
        self.net.chain(*out)

    def is_node(self, tree):
        if tree[0] == "name":
            return self.find(tree[1]) is None and tree[1] not in ("open", "short")
        if tree[0] != "node":
            return False
        name = tree[1]
        while isinstance(name, tuple):
            name = name[0]
        return not isinstance(self.find(name), list)

    # -- nodes and items

    def node(self, tree):
        if tree[1] == n.GROUND:
            return n.GROUND
        return self.prefix + self.spelt(tree[1])

    def spelt(self, name):
        if isinstance(name, str):
            return name
        if len(name) == 3:
            return f"{self.spelt(name[0])}.{name[2]}"
        return f"{self.spelt(name[0])}[{int(self.value(name[1]).value)}]"

    def placeable(self, tree):
        if tree[0] == "shunt":
            return n.Shunt(self.placeable(tree[1]))
        if tree[0] == "parallel":
            return n.Parallel(*[self.placeable(t) for t in tree[1]])
        if tree[0] == "chain":
            return n.Chain(*[self.placeable(t) for t in tree[1]])
        return self.part(self.value(tree))

    @staticmethod
    def part(q):
        if isinstance(q, n.Item):
            return q
        value = q if isinstance(q, Function) else q.value
        d = q.dimension if isinstance(q, Quantity) else Scope.probe(q).dimension
        if d == BASE["ohm"]:
            return n.impedance(value)
        if d == BASE["S"]:
            return n.admittance(value)
        return n.inductor(value) if d == BASE["H"] else n.capacitor(value)

    @staticmethod
    def probe(function):
        inner = Scope(function.scope)
        inner.names["frequency"] = Quantity(mpf(10) ** 9, BASE["Hz"])
        return inner.value(function.tree)

    # -- values

    def lazy(self, tree):
        """The tree's value; a Function where it uses `frequency`."""
        if self.find("frequency") is None and self.uses_frequency(tree):
            return Function(tree, self)
        return self.value(tree)

    def uses_frequency(self, tree):
        if tree == ("name", "frequency"):
            return True
        if tree[0] == "name":
            return isinstance(self.find(tree[1]), Function)
        if tree[0] == "call":
            return tree[1] in FUNCTIONS and any(self.uses_frequency(t) for _, t in tree[2])
        if tree[0] in ("chain", "parallel", "shunt", "list"):
            return False
        trees = [t for t in tree[1:] if isinstance(t, tuple) and t and isinstance(t[0], str)]
        return any(self.uses_frequency(t) for t in trees)

    def value(self, tree, placed_on=None):
        kind = tree[0]
        if kind == "number":
            return self.number(tree[1], tree[2])
        if kind == "name":
            return self.named(tree[1])
        if kind == "node":
            name, index = tree[1]
            return self.find(name)[int(self.value(index).value) - 1]
        if kind == "list":
            return [self.value(t) for t in tree[1]]
        if kind == "range":
            return (self.value(tree[1]), self.value(tree[2]))
        if kind in ("chain", "parallel", "shunt"):
            return self.placeable(tree)
        if self.find("frequency") is None and self.uses_frequency(tree):
            return Function(tree, self)
        if kind == "call":
            return self.call(tree[1], tree[2], placed_on)
        if kind == "@":
            return n.At(self.value(tree[1]), self.value(tree[2]))
        return self.arithmetic(kind, [self.value(t) for t in tree[1:]])

    @staticmethod
    def number(value, dimension):
        if not isinstance(value, tuple):
            return Quantity(value)
        factor, plain = value
        if factor == "rad":
            return Quantity(plain / (2 * mp.pi), dimension)
        if factor == "Np":
            return Quantity(plain * 20 / mp.log(10), dimension)
        return Quantity(plain * factor, dimension)

    def named(self, name):
        found = self.find(name)
        if found is not None:
            return found
        constants = {"pi": Quantity(+mp.pi), "j": Quantity(mpc(0, 1)), "open": n.open_(), "short": n.short(),
                     "c0": Quantity(mpf(n.LIGHT), (0, 0, -1, 1, 0, 0))}
        if name == "frequency":
            return Function(("name", name), self)
        if name not in constants:
            raise BadText(f"{name!r} is not defined")
        return constants[name]

    @staticmethod
    def arithmetic(kind, v):
        if kind == "negative":
            return v[0] * Quantity(mpf(-1))
        if kind == "+":
            return v[0] + v[1]
        if kind == "-":
            return v[0] + v[1] * Quantity(mpf(-1))
        if kind == "*":
            return v[0] * v[1]
        if kind == "/":
            return v[0] * v[1].power(-1)
        e = v[1].value
        return v[0].power(int(e) if e == int(e) else e)

    def call(self, name, arguments, placed_on):
        own = self.find(name)
        if isinstance(own, tuple) and own[0] == "own":
            inner = own[3].child()
            inner.names.update({f: self.value(t) for f, (_, t) in zip(own[1], arguments)})
            return inner.value(own[2])
        if isinstance(own, tuple) and own[0] == "network":
            return self.placement(own, arguments)
        if name == "reversed":
            return n.Reversed(self.placeable(arguments[0][1]))
        if name == "inverse":
            return n.Inverse(self.placeable(arguments[0][1]))
        if name == "repeat":
            return n.Repeat(int(self.value(arguments[0][1]).value), self.placeable(arguments[1][1]))
        if name in ORDER:
            return self.made(name, arguments, placed_on)
        return self.function(name, [self.value(t) for _, t in arguments])

    def function(self, name, v):
        x = v[0]
        if name == "sqrt":
            return x.power(mpf(1) / 2)
        if name == "count":
            return Quantity(mpf(len(x)))
        if name in ("min", "max"):
            return (min if name == "min" else max)(v, key=lambda q: q.value)
        if name == "amplitude":
            return Quantity(mpf(10) ** (x.value / 20))
        if name == "decibel":
            return Quantity(20 * mp.log10(x.value), LEVEL)
        if name == "atan2":
            return Quantity(mp.atan2(x.value, v[1].value) / (2 * mp.pi), ANGLE)
        if name in KEEPING:
            return Quantity(KEEPING[name](x.value), x.dimension)
        if name in MATHS:
            return Quantity(MATHS[name](x.radians()))
        if name in INVERSE:
            return Quantity(INVERSE[name](x.value) / (2 * mp.pi), ANGLE)
        raise BadText(f"{name!r} is not known")

    def placement(self, own, arguments):
        _, formals, block, home = own
        values = {f: home.value(d) for f, d in formals if d is not None}
        names = [f for f, _ in formals]
        for k, (key, tree) in enumerate(arguments):
            values[key or names[k]] = self.lazy(tree)
        return Placement(self, home, values, block)

    def made(self, name, arguments, placed_on):
        positional, given = [], {}
        for key, tree in arguments:
            if key is None:
                positional.append(self.lazy(tree))
            else:
                given[key] = self.lazy(tree)
        options = {}
        for key, q in list(zip(ORDER[name], positional)) + list(given.items()):
            if key == "L" or key == "length" and name != "line_constants":
                options.update({"length": length(q)} if name == "coupled_lines" else length(q))
            elif key in ("even_length", "odd_length"):
                options[key] = length(q)
            elif key == "loss" and name != "attenuator":
                per_metre = (q.value if isinstance(q, n.At) else q).dimension != LEVEL
                options["loss_per_metre" if per_metre else "loss"] = at_or_value(q)
            elif key == "rating":
                continue
            else:
                options["db" if key == "loss" else key] = q if isinstance(q, Function) else at_or_value(q)
        four = {"line": n.line4, "transformer": n.transformer4} if placed_on == 4 else {}
        return four.get(name, getattr(n, name))(**options)


class Placement(n.Item):
    """A network that is placed: its own nodes get a prefix of their own."""
    count = 0

    def __init__(self, scope, home, values, block):
        self.scope, self.home, self.values, self.block, self.label = scope, home, values, block, None

    def place(self, net, left, right):
        self.on(net, left, right)

    def on(self, net, *nodes):
        Placement.count += 1
        prefix = f"{self.label}." if self.label else f"{self.scope.prefix}({Placement.count})."
        inner = Scope(self.home, net, prefix)
        inner.names.update(self.values)
        ports = []
        inner.run(self.block, ports)
        for outer, own in zip(nodes, ports):
            net.join(outer, own)


def read(text):
    """-> (network, sweep frequencies in Hz)"""
    with mp.workdps(60):
        scope = Scope(net=n.Network())
        scope.run(Parser(text).program())
        points = sorted(set(scope.sweeps))
        kept = [f for k, f in enumerate(points) if not k or f - points[k - 1] > 1e-12 * f]
        return scope.net, kept
