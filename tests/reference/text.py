"""The text of a netlist as a tree of tuples, for reader.py: what docs/language.md says of words and units,
statements, chains and values, as far as the networks of the tests use it."""
import re

from mpmath import mpf

PREFIXES = {"f": -15, "p": -12, "n": -9, "u": -6, "µ": -6, "μ": -6, "m": -3, "": 0,
            "k": 3, "M": 6, "G": 9, "T": 12}
# exponents of V, A, s, m, angle, level
BASE = {"ohm": (1, -1, 0, 0, 0, 0), "Ω": (1, -1, 0, 0, 0, 0), "S": (-1, 1, 0, 0, 0, 0),
        "H": (1, -1, 1, 0, 0, 0), "F": (-1, 1, 1, 0, 0, 0), "Hz": (0, 0, -1, 0, 0, 0),
        "s": (0, 0, 1, 0, 0, 0), "m": (0, 0, 0, 1, 0, 0), "V": (1, 0, 0, 0, 0, 0),
        "A": (0, 1, 0, 0, 0, 0), "W": (1, 1, 0, 0, 0, 0)}
NONE, ANGLE, LEVEL = (0,) * 6, (0, 0, 0, 0, 1, 0), (0, 0, 0, 0, 0, 1)
UNITS = {p + u: (mpf(10) ** e, d) for p, e in PREFIXES.items() for u, d in BASE.items()}
UNITS.update({"cm": (mpf(1) / 100, BASE["m"]), "%": (mpf(1) / 100, NONE), "ppm": (mpf(10) ** -6, NONE),
              "mil": (mpf("25.4e-6"), BASE["m"]), "inch": (mpf("25.4e-3"), BASE["m"]),
              "ft": (mpf("0.3048"), BASE["m"]), "deg": (1 / mpf(360), ANGLE), "°": (1 / mpf(360), ANGLE),
              "wave": (mpf(1), ANGLE), "rad": ("rad", ANGLE), "dB": (mpf(1), LEVEL), "Np": ("Np", LEVEL)})
TOKEN = re.compile(r"""(?P<blank>[ \t\u00a0\u2009\u202f]+|\#[^\n]*)|(?P<string>"(?:[^"\\\n]|\\.)*")
    |(?P<number>(?:\d+(?:\.\d+)?|\.\d+)(?:[eE][+-]?\d+)?)|(?P<name>[A-Za-z_]\w*|[%°Ω]|[µμ]\w+)
    |(?P<op>\r?\n|--|\|\||\.\.|<=|>=|==|!=|\+/-|[-+*/^()\[\]{},;:=<>@.±])""", re.X | re.ASCII)


class BadText(Exception):
    pass


# ---- text to tokens ------------------------------------------------------------------------------

def tokens(text):
    out, at, depth = [], 0, []
    while at < len(text):
        m = TOKEN.match(text, at)
        if not m:
            raise BadText(f"what is {text[at:at + 10]!r}?")
        kind, word, at = m.lastgroup, m.group(), m.end()
        if kind == "blank":
            continue
        if word.endswith("\n"):
            if not depth and out and _ends(out[-1]):
                out.append(("op", "\n"))
            continue
        if kind == "op" and word in "([":
            depth.append(word)
        elif kind == "op" and word in ")]":
            depth.pop()
        out.append((kind, word))
    clean = []
    for k, token in enumerate(out):
        follows = out[k + 1][1] if k + 1 < len(out) else ";"
        if token == ("op", "\n"):
            if follows in ("--", "||", "{", "else"):
                continue
            token = ("op", ";")
        clean.append(token)
    return clean + [("op", ";"), ("end", "")]


def _ends(token):
    kind, word = token
    return kind in ("number", "string") or word in (")", "]", "}") or \
        kind == "name" and word not in ("shunt", "on", "in", "and", "or", "not")


# ---- tokens to a tree: tuples (kind, ...) --------------------------------------------------------

class Parser:
    def __init__(self, text):
        self.t, self.at = tokens(text), 0

    def peek(self, ahead=0):
        return self.t[min(self.at + ahead, len(self.t) - 1)][1]

    def kind(self, ahead=0):
        return self.t[min(self.at + ahead, len(self.t) - 1)][0]

    def take(self, word=None):
        if word is not None and self.peek() != word:
            raise BadText(f"{word!r} expected, not {self.peek()!r}")
        self.at += 1
        return self.t[self.at - 1][1]

    def accept(self, word):
        if self.peek() == word and self.kind() != "string":
            self.at += 1
            return True
        return False

    def block(self):
        out = []
        self.take("{")
        while not self.accept("}"):
            if not self.accept(";"):
                out.append(self.statement())
        return out

    def program(self):
        out = []
        while self.kind() != "end":
            if not self.accept(";"):
                out.append(self.statement())
        return out

    def statement(self):
        word, then = self.peek(), self.peek(1)
        if word == "title":
            self.at += 2
            return ("none",)
        if word in ("assume", "include", "cases", "shared"):
            raise BadText(f"{word!r} is not known here")
        if word in ("require", "drive", "tune"):
            while self.peek() != ";":
                self.at += 1
            return ("none",)
        if word == "port":
            return self.port()
        if word == "join":
            self.take()
            return ("join", self.listed(self.node))
        if word == "for":
            self.take()
            name = self.take()
            self.take("in")
            bounds = self.range()
            return ("for", name, bounds, self.block())
        if word == "if":
            return self.condition()
        if word == "sweep":
            return self.sweep()
        if word == "network":
            return self.network()
        if self.kind() == "name" and then == "=":
            self.at += 2
            return ("set", word, self.range())
        if self.kind() == "name" and then == "(":
            start = self.at
            own = self.own_kind(word)
            if own:
                return own
            self.at = start
        return self.chain_statement()

    def own_kind(self, word):
        self.at += 2
        names = []
        while not self.accept(")"):
            if self.kind() != "name":
                return None
            names.append(self.take())
            self.accept(",")
        if not self.accept("="):
            return None
        return ("own", word, names, self.item())

    def listed(self, what):
        out = [what()]
        while self.accept(","):
            out.append(what())
        return out

    def port(self):
        self.take("port")
        names = self.listed(self.node)
        z = self.value() if self.accept(":") else None
        nodes = None
        if self.peek() == "at":
            self.take()
            nodes = self.listed(self.node)
        return ("port", names, z, nodes)

    def network(self):
        self.take("network")
        name, formals = self.take(), []
        self.take("(")
        while not self.accept(")"):
            formal = self.take()
            formals.append((formal, self.item() if self.accept("=") else None))
            self.accept(",")
        return ("network", name, formals, self.block())

    def condition(self):
        self.take("if")
        test = self.logic()
        yes, no = self.block(), []
        if self.accept("else"):
            no = [self.condition()] if self.peek() == "if" else self.block()
        return ("if", test, yes, no)

    def logic(self):
        left = self.value()
        comparison = self.take()
        return (comparison, left, self.value())

    def sweep(self):
        self.take("sweep")
        if self.accept("at"):
            return ("at", self.listed(self.value))
        bounds = self.range()
        kind = self.take()
        if kind == "per":
            self.take("decade")
        return ("grid", bounds, kind, self.value())

    def node(self):
        name = self.take()
        while self.peek() in ("[", ".") and self.kind() == "op":
            if self.accept("."):
                name = (name, ".", self.take())
                continue
            self.take("[")
            name = (name, self.value())
            self.take("]")
        return ("node", name)

    def chain_statement(self):
        start = self.at
        label = None
        if self.kind() == "name" and self.peek(1) in (":", "["):
            label = self.node()
            if not self.accept(":"):
                self.at, label = start, None
        if self.kind() == "name" and (self.peek(1) == "(" or label or self.peek(1) == "on"):
            item = self.atom()
            if self.peek() == "on":
                self.take()
                self.take("(")
                terminals = self.listed(self.terminal)
                self.take(")")
                return ("on", label, item, terminals)
        self.at = start
        path = [self.step()]
        while self.accept("--"):
            path.append(self.step())
        return ("path", path)

    def terminal(self):
        if self.peek(1) == "=":
            name = self.take()
            self.take()
            return (name, self.node())
        return (None, self.node())

    def step(self):
        if self.accept("shunt"):
            return ("shunt", self.parallel())
        return self.parallel()

    def parallel(self):
        items = [self.labelled()]
        while self.accept("||"):
            items.append(self.labelled())
        return items[0] if len(items) == 1 else ("parallel", items)

    def labelled(self):
        start = self.at
        if self.kind() == "name" and self.peek(1) in (":", "["):
            self.node()
            if not self.accept(":"):
                self.at = start
        return self.value()

    def range(self):
        low = self.item()
        if self.accept(".."):
            return ("range", low, self.value())
        return low

    def item(self):
        """A value or a chain without nodes."""
        path = [self.step()]
        while self.accept("--"):
            path.append(self.step())
        return path[0] if len(path) == 1 and path[0][0] != "shunt" else ("chain", path)

    def value(self):
        left = self.sum()
        if self.peek() in ("+/-", "±"):             # the value itself is the nominal one
            self.take()
            self.sum()
            self.accept("normal")
        if self.peek() == "@":
            self.take()
            left = ("@", left, self.sum())
        return left

    def sum(self):
        left = self.product()
        while self.kind() == "op" and self.peek() in ("+", "-"):
            left = (self.take(), left, self.product())
        return left

    def product(self):
        left = self.signed()
        while self.kind() == "op" and self.peek() in ("*", "/"):
            left = (self.take(), left, self.signed())
        return left

    def signed(self):
        if self.kind() == "op" and self.accept("-"):
            return ("negative", self.signed())
        base = self.atom()
        if self.accept("^"):
            return ("^", base, self.signed())
        return base

    def atom(self):
        kind, word = self.kind(), self.take()
        if kind == "number":
            return self.unit(("number", mpf(word), NONE))
        if word == "(":
            inner = self.item()
            self.take(")")
            return inner
        if word == "[":
            out = self.listed(self.value)
            self.take("]")
            return ("list", out)
        if kind != "name":
            raise BadText(f"a value expected, not {word!r}")
        if self.peek() == "(":
            return ("call", word, self.arguments())
        if self.peek() == "[" or self.peek() == ".":
            self.at -= 1
            return self.node()
        return ("name", word)

    def unit(self, number):
        if self.kind() in ("name", "op") and self.peek() in UNITS:
            factor, dimension = UNITS[self.take()]
            if self.peek() == "/" and self.kind(1) == "name" and self.peek(1) in UNITS and \
                    dimension != NONE and self.peek(1) in ("m",):
                self.take()
                self.take()
                dimension = tuple(a - b for a, b in zip(dimension, BASE["m"]))
            return ("number", (factor, number[1]), dimension)
        return number

    def arguments(self):
        self.take("(")
        out = []
        while not self.accept(")"):
            key = None
            if self.kind() == "name" and self.peek(1) == "=":
                key = self.take()
                self.take()
            out.append((key, self.item()))
            self.accept(",")
        return out
