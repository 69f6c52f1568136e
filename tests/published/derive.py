"""What a line of the topic files may say: quantities that follow from S at one frequency, and closed forms.

Everything here is plain double arithmetic on the numbers that the tool prints.
"""
import cmath
from math import acos, acosh, cos, cosh, exp, log, pi, sin, sqrt, tan


# ---- from one S-parameter ------------------------------------------------------------------------

def db(s):
    return 20 * cmath.log10(abs(s)).real


def vswr(s):
    return (1 + abs(s)) / (1 - abs(s))


# ---- small complex matrices, as lists of rows ----------------------------------------------------

def times(*factors):
    a = factors[0]
    for b in factors[1:]:
        a = [[sum(x * y for x, y in zip(row, column)) for column in zip(*b)] for row in a]
    return a


def plus(a, b, sign=1):
    return [[x + sign * y for x, y in zip(p, q)] for p, q in zip(a, b)]


def diagonal(values):
    return [[v if i == k else 0 for k in range(len(values))] for i, v in enumerate(values)]


def inverted(a):
    n = len(a)
    rows = [list(row) + [complex(i == k) for k in range(n)] for i, row in enumerate(a)]
    for c in range(n):
        best = max(range(c, n), key=lambda r: abs(rows[r][c]))
        rows[c], rows[best] = rows[best], rows[c]
        rows[c] = [v / rows[c][c] for v in rows[c]]
        for r in range(n):
            if r != c:
                rows[r] = [v - rows[r][c] * w for v, w in zip(rows[r], rows[c])]
    return [row[n:] for row in rows]


# ---- from the whole matrix -----------------------------------------------------------------------

class Point:
    """S at one frequency; ports count from 1. z: the references that the file states; ports: those that the
    netlist states, which may be complex."""

    def __init__(self, s, z, ports):
        self.s, self.z, self.ports = s, z, ports

    def S(self, to, source):
        return self.s[to - 1][source - 1]

    def n(self):
        return len(self.s)

    def reflections(self):
        return [self.s[i][i] for i in range(self.n())]

    def transfers(self):
        return [self.s[i][k] for i in range(self.n()) for k in range(self.n()) if i != k]

    def from_first(self):
        return [row[0] for row in self.s[1:]]

    def among_others(self):
        """The transfers between all ports but the first."""
        return [self.s[i][k] for i in range(1, self.n()) for k in range(1, self.n()) if i != k]

    def wave(self, port, incident):
        """The wave that leaves `port` while incident = {port: wave} act; |wave|^2 is a power in watts."""
        return sum(self.S(port, k) * a for k, a in incident.items())

    def out(self, port, incident):
        return abs(self.wave(port, incident)) ** 2

    def heat(self, incident):
        """What goes in and does not come out."""
        return sum(abs(a) ** 2 for a in incident.values()) - \
            sum(self.out(k, incident) for k in range(1, self.n() + 1))

    def lost(self, port):
        return self.heat({port: 1})

    # Z = F^-1 (I - S)^-1 (S z + z*) F with F = 1 / (2 sqrt Re z), Kurokawa 1965
    def z_matrix(self):
        one = diagonal([1] * self.n())
        f = diagonal([1 / (2 * sqrt(z)) for z in self.z])
        z = diagonal(self.z)
        return times(inverted(f), inverted(plus(one, self.s, -1)), plus(times(self.s, z), z), f)

    def Z(self, i, k):
        return self.z_matrix()[i - 1][k - 1]

    def Y(self, i, k):
        return inverted(self.z_matrix())[i - 1][k - 1]

    def A(self, i, k):
        """Chain (ABCD) matrix, i2 flowing out."""
        (a, b), (c, d) = self.z_matrix()
        return [[a / c, (a * d - b * c) / c], [1 / c, d / c]][i - 1][k - 1]

    def H(self, i, k):
        """v1 = h11 i1 + h12 v2, i2 = h21 i1 + h22 v2"""
        (a, b), (c, d) = self.z_matrix()
        return [[(a * d - b * c) / d, b / d], [-c / d, 1 / d]][i - 1][k - 1]

    def T(self, i, k):
        """a1 = t11 b2 + t12 a2, b1 = t21 b2 + t22 a2"""
        (a, b), (c, d) = self.s
        return [[1 / c, -d / c], [a / c, -(a * d - b * c) / c]][i - 1][k - 1]

    def power(self, i, k):
        """S in power waves (Kurokawa 1965) for the netlist's own references, complex or not."""
        f = diagonal([1 / (2 * cmath.sqrt(z.real)) for z in self.ports])
        z, g = self.z_matrix(), diagonal(self.ports)
        conjugate = diagonal([p.conjugate() for p in self.ports])
        return times(f, plus(z, conjugate, -1), inverted(plus(z, g)), inverted(f))[i - 1][k - 1]

    def pseudo(self, i, k):
        """S in pseudo waves (Marks and Williams 1992) for the netlist's own references."""
        u = diagonal([sqrt(z.real) / abs(z) for z in self.ports])
        z, g = self.z_matrix(), diagonal(self.ports)
        return times(u, plus(z, g, -1), inverted(plus(z, g)), inverted(u))[i - 1][k - 1]

    def mixed(self, to, source, i, k):
        """Mixed-mode S (Bockelman and Eisenstadt 1995) of two pairs, ports 1, 2 and 3, 4; to and source are
        'd' or 'c', i and k the pair."""
        h = sqrt(0.5)
        m = [[h, -h, 0, 0], [0, 0, h, -h], [h, h, 0, 0], [0, 0, h, h]]
        row = {"d": 0, "c": 2}
        return times(m, self.s, [list(c) for c in zip(*m)])[row[to] + i - 1][row[source] + k - 1]


# ---- closed forms that a network built from listed element values must show ----------------------

def chebyshev(n, x):
    return cos(n * acos(x)) if abs(x) <= 1 else (1 if x > 0 or n % 2 == 0 else -1) * cosh(n * acosh(abs(x)))


def flat_transformer(n, r, x):
    """|S11|^2 of the maximally flat quarter-wave transformer with n sections at f = x f0 (Collin 1955)."""
    p = (r - 1) ** 2 / (4 * r) * cos(pi / 2 * x) ** (2 * n)
    return p / (1 + p)


def ripple_transformer(n, gm, width, x):
    """|S11|^2 of the equal-ripple quarter-wave transformer: |S11| = gm at the edges f0 (1 -+ width/2)."""
    edge = cos(pi / 2 * (1 - width / 2))
    p = gm ** 2 / (1 - gm ** 2) * chebyshev(n, cos(pi / 2 * x) / edge) ** 2
    return p / (1 + p)


NAMES = {f.__name__: f for f in (db, vswr, chebyshev, flat_transformer, ripple_transformer, abs, max, min,
                                 sum, cos, sin, tan, acos, exp, log, sqrt, range)}
NAMES.update(pi=pi, j=1j, rect=lambda r, degrees: cmath.rect(r, degrees * pi / 180))
METHODS = ("S", "n", "reflections", "transfers", "from_first", "among_others", "wave", "out", "heat", "lost",
           "Z", "Y", "A", "H", "T", "power", "pseudo", "mixed")
