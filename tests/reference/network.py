"""The reference: networks of parts, solved with mpmath in 50 digits and more.

Written from docs/language.md alone; it shares no line with lib/. A network is a list of placed parts. A part has m branches, each between two nodes, with a voltage v and a current i that
enters at the first node and leaves at the second, and states m equations A v + B i = 0. The unknowns of
the dense tableau are all node voltages, all branch currents and the port currents; the equations are
Kirchhoff's current law at each node, the parts' own equations, and v + z i = 2 sqrt(Re z) a at each port.
Columns without a pivot (a floating net, a loop of wires) are free, which is an error only where a port
depends on them.

S are power waves (Kurokawa 1965). 0 Hz is a frequency of 1e-40 Hz in 300 digits: whatever vanishes with
the frequency, even with its root, is then far below anything that is compared.

Angles are kept in turns, so that 90 deg @ 1 GHz is exactly half a wave at 2 GHz.
"""
from mpmath import mp, mpf, mpc, sqrt, exp, sinh, cosh, cospi, sinpi, pi, log, fabs

DIGITS, PIVOT = 50, mpf(10) ** -32              # an ordinary frequency
DIGITS_AT_ZERO, PIVOT_AT_ZERO = 300, mpf(10) ** -220
ZERO_HZ = mpf(10) ** -40
LIGHT = 299792458                               # c0, m/s
GROUND = "ground"


def nepers(db):
    return mpf(db) * log(10) / 20


def omega(f):
    return 2 * pi * f


def at(value, f):
    """A value, which may be a function of the frequency."""
    return value(f) if callable(value) else mpc(value)


class At:
    """`value @ frequency`"""

    def __init__(self, value, hz):
        self.value, self.hz = value, hz


# ---- what stands in a chain ----------------------------------------------------------------------

class Item:
    """Something that lies between two nodes. place(net, left, right) adds it to the network."""

    def __or__(self, other):
        return Parallel(self, other)


class Part(Item):
    """branches: pairs of terminals, by number, or None for ground. equations(f) -> (A, B), m x m.
    In a chain, the left terminal is number 0 and the right number 1."""

    def __init__(self, branches, equations):
        self.branches, self.equations = branches, equations

    def place(self, net, left, right):
        self.on(net, left, right)

    def on(self, net, *nodes):
        net.placed.append((self, [(nodes[p], GROUND if m is None else nodes[m]) for p, m in self.branches]))


class Parallel(Item):
    def __init__(self, *items):
        self.items = items

    def place(self, net, left, right):
        for item in self.items:
            item.place(net, left, right)


class Shunt(Item):
    def __init__(self, item):
        self.item = item

    def hang(self, net, node):
        self.item.place(net, node, GROUND)


class Chain(Item):
    """Items one after the other, as one value; Shunt items hang where they stand."""

    def __init__(self, *items):
        self.items = items

    def place(self, net, left, right):
        along = sum(not isinstance(i, Shunt) for i in self.items)
        here, done = left, 0
        for item in self.items:
            if isinstance(item, Shunt):
                item.hang(net, here)
                continue
            done += 1
            there = right if done == along else net.fresh()
            item.place(net, here, there)
            here = there


class Reversed(Item):
    def __init__(self, item):
        self.item = item

    def place(self, net, left, right):
        self.item.place(net, right, left)


class Repeat(Chain):
    def __init__(self, n, item):
        super().__init__(*[item] * n)


class Inverse(Part):
    """The two-port that undoes another one: at its sides stand the other's waves, in and out exchanged."""

    def __init__(self, item):
        inner = Network()
        item.place(inner, "left", "right")
        inner.port(50, "left")
        inner.port(50, "right")

        def equations(f):
            s = inner.solve(f)
            # a2' = S11 b2' + S12 b1',  a1' = S21 b2' + S22 b1',  a = v + 50 i, b = v - 50 i
            rows = [([-s[0][1], 1 - s[0][0]], [50 * s[0][1], 50 + 50 * s[0][0]]),
                    ([1 - s[1][1], -s[1][0]], [50 + 50 * s[1][1], 50 * s[1][0]])]
            return [r[0] for r in rows], [r[1] for r in rows]

        super().__init__([(0, None), (1, None)], equations)


# ---- two-terminal parts --------------------------------------------------------------------------

def _two_terminal(y_and_z):
    """y_and_z(f) -> (p, q) with p v = q i."""
    def equations(f):
        p, q = y_and_z(f)
        return [[p]], [[-q]]
    return Part([(0, 1)], equations)


def impedance(z):
    return _two_terminal(lambda f: (mpf(1), at(z, f)))


def admittance(y):
    return _two_terminal(lambda f: (at(y, f), mpf(1)))


def resistor(r, esl=0, cp=0, rating=None):
    def pq(f):
        z = at(r, f) + 1j * omega(f) * at(esl, f)
        return 1 + 1j * omega(f) * at(cp, f) * z, z
    return _two_terminal(pq)


def inductor(l, q=None, resistance=0, srf=None, rating=None):
    def pq(f):
        w, value = omega(f), at(l, f)
        r = at(resistance, f)
        if isinstance(q, At):
            r = omega(mpf(q.hz)) * value / at(q.value, f) * sqrt(f / mpf(q.hz))
        elif q is not None:
            r = w * value / at(q, f)
        z = r + 1j * w * value
        y = 1j * w / (omega(at(srf, f)) ** 2 * value) if srf is not None else 0
        return 1 + y * z, z
    return _two_terminal(pq)


def capacitor(c, q=None, esr=0, loss_tangent=0, esl=0, srf=None, rating=None):
    def pq(f):
        w, value = omega(f), at(c, f)
        r, l = at(esr, f), at(esl, f)
        y = 1j * w * value * (1 - 1j * at(loss_tangent, f))
        if isinstance(q, At):
            r = 1 / (omega(mpf(q.hz)) * value * at(q.value, f))
        elif q is not None:
            r = 1 / (w * value * at(q, f))
        if srf is not None:
            l = 1 / (omega(at(srf, f)) ** 2 * value)
        return y, 1 + y * (r + 1j * w * l)
    return _two_terminal(pq)


def short():
    return _two_terminal(lambda f: (mpf(1), mpf(0)))


def open_():
    return _two_terminal(lambda f: (mpf(0), mpf(1)))


# ---- lines ---------------------------------------------------------------------------------------

class Length:
    """What `length` and its options say: electrical length in turns and attenuation in nepers."""

    def __init__(self, turns=None, metres=None, seconds=None, permittivity=1, velocity_factor=1,
                 loss=0, loss_per_metre=0, loss_tangent=0):
        self.__dict__.update(locals())

    def turns_at(self, f):
        if self.turns is not None:
            return mpf(self.turns.value) * f / mpf(self.turns.hz)
        if self.seconds is not None:
            return mpf(self.seconds) * f
        return mpf(self.metres) * sqrt(mpf(self.permittivity)) / mpf(self.velocity_factor) / LIGHT * f

    def nepers_at(self, f):
        total = mpf(0)
        for loss, length in ((self.loss, 1), (self.loss_per_metre, self.metres)):
            if isinstance(loss, At):
                total += nepers(loss.value) * mpf(length) * sqrt(f / mpf(loss.hz))
            elif loss:
                total += nepers(loss) * mpf(length)
        return total + pi * self.turns_at(f) * mpf(self.loss_tangent)

    def travel(self, f):
        """What a wave is multiplied with on its way along the line."""
        t = 2 * self.turns_at(f)
        return exp(-self.nepers_at(f)) * mpc(cospi(t), -sinpi(t))


def _waves(z, travel):
    """v1 - z i1 = e (v2 + z i2) and the same with the sides exchanged."""
    def equations(f):
        zz, e = at(z, f), travel(f)
        return [[mpf(1), -e], [-e, mpf(1)]], [[-zz, -e * zz], [-e * zz, -zz]]
    return equations


def line(z, **length):
    return Part([(0, None), (1, None)], _waves(z, Length(**length).travel))


def line4(z, **length):
    """in, out, in_return, out_return"""
    return Part([(0, 2), (1, 3)], _waves(z, Length(**length).travel))


def _stub(z, sign, length):
    e = Length(**length).travel

    def pq(f):
        w = e(f) ** 2
        return 1 - sign * w, at(z, f) * (1 + sign * w)
    return _two_terminal(pq)


def open_stub(z, **length):
    return _stub(z, 1, length)


def shorted_stub(z, **length):
    return _stub(z, -1, length)


def line_constants(r, l, g, c, length):
    def equations(f):
        series = (mpf(r) + 1j * omega(f) * mpf(l)) * mpf(length)
        across = (mpf(g) + 1j * omega(f) * mpf(c)) * mpf(length)
        x = sqrt(series * across)
        a, s = cosh(x), sinh(x) / x if x else mpf(1)
        # v1 = a v2 - series s i2,  i1 = across s v2 - a i2
        return [[mpf(1), -a], [mpf(0), -across * s]], [[mpf(0), series * s], [mpf(1), a]]
    return Part([(0, None), (1, None)], equations)


def coupled_lines(even, odd, length=None, even_length=None, odd_length=None, **loss):
    """a1, a2, b1, b2; lengths are dictionaries of Length's arguments."""
    modes = [(even, Length(**(even_length or length), **loss)),
             (odd, Length(**(odd_length or length), **loss))]

    def equations(f):
        a, b = [], []
        for (z, length_), sign in zip(modes, (1, -1)):
            zz, e = mpf(z), length_.travel(f)
            # the mode's voltage and current at the ends: sums or differences of the two lines'
            for x, y in ((0, 1), (1, 0)):
                va, ib = [mpf(0)] * 4, [mpf(0)] * 4
                for line_, s in ((0, 1), (2, sign)):
                    va[x + line_], va[y + line_] = mpf(s), -s * e
                    ib[x + line_], ib[y + line_] = -s * zz, -s * e * zz
                a.append(va)
                b.append(ib)
        return a, b
    return Part([(0, None), (1, None), (2, None), (3, None)], equations)


# ---- ideal blocks --------------------------------------------------------------------------------

def _scattering(branches, z, s):
    """v - z i = S (v + z i)"""
    def equations(f):
        zz, m, n = at(z, f), s(f), len(branches)
        a = [[(i == k) - m[i][k] for k in range(n)] for i in range(n)]
        b = [[-zz * ((i == k) + m[i][k]) for k in range(n)] for i in range(n)]
        return a, b
    return Part(branches, equations)


_TWO_PORT = [(0, None), (1, None)]
_WINDINGS = [(0, 1), (2, 3)]


def attenuator(db, z=50):
    return _scattering(_TWO_PORT, z, lambda f: [[0, exp(-nepers(db))], [exp(-nepers(db)), 0]])


def phase_shift(turns, z=50):
    e = lambda f: mpc(cospi(2 * mpf(turns)), -sinpi(2 * mpf(turns)))
    return _scattering(_TWO_PORT, z, lambda f: [[0, e(f)], [e(f), 0]])


def isolator(z=50):
    return _scattering(_TWO_PORT, z, lambda f: [[0, 0], [1, 0]])


def circulator(z=50):
    return _scattering([(0, None), (1, None), (2, None)], z, lambda f: [[0, 0, 1], [1, 0, 0], [0, 1, 0]])


def gyrator(r):
    return Part(_TWO_PORT, lambda f: ([[1, 0], [0, 1]], [[0, at(r, f)], [-at(r, f), 0]]))


def _transformer(branches, n):
    # v2 = n v1, i1 + n i2 = 0
    return Part(branches, lambda f: ([[-at(n, f), 1], [0, 0]], [[0, 0], [1, at(n, f)]]))


def transformer(n):
    return _transformer(_TWO_PORT, n)


def transformer4(n):
    """a1, a2, b1, b2"""
    return _transformer(_WINDINGS, n)


def transconductance(gm):
    """in, in_return, out, out_return"""
    return Part(_WINDINGS, lambda f: ([[0, 0], [-at(gm, f), 0]], [[1, 0], [0, 1]]))


def coupled_inductors(l1, l2, k):
    """a1, a2, b1, b2"""
    def equations(f):
        s = 1j * omega(f)
        m = mpf(k) * sqrt(mpf(l1) * mpf(l2))
        return [[1, 0], [0, 1]], [[-s * mpf(l1), -s * m], [-s * m, -s * mpf(l2)]]
    return Part(_WINDINGS, equations)


# ---- the network ---------------------------------------------------------------------------------

class Singular(Exception):
    pass


class Network:
    def __init__(self):
        self.placed, self.ports, self.joined, self._fresh = [], [], {}, 0

    def fresh(self):
        self._fresh += 1
        return f"({self._fresh})"

    def port(self, z, plus, minus=GROUND):
        self.ports.append((z, plus, minus))

    def join(self, *nodes):
        for n in nodes[1:]:
            self.joined[self.name(n)] = self.name(nodes[0])

    def name(self, node):
        while node in self.joined:
            node = self.joined[node]
        return node

    def chain(self, *path):
        """Nodes are strings; what stands between two nodes is one chain."""
        here, items = path[0], []
        for x in path[1:] + (None,):
            if isinstance(x, Item):
                items.append(x)
                continue
            self._between(here, items, x)
            here, items = x, []

    def _between(self, left, items, right):
        along = [i for i in items if not isinstance(i, Shunt)]
        if not along and right is not None:
            assert not items, "two nodes side by side"
        Chain(*items).place(self, left, right if right is not None else self.fresh())

    def on(self, part, *nodes):
        part.on(self, *nodes)

    # ---- the solution

    def s(self, hz, references="real"):
        """S at a frequency: rows are `to`, columns `from`; 'real' takes the real parts of complex references,
        as files are written, 'true' the references themselves."""
        zero = hz == 0
        with mp.workdps(DIGITS_AT_ZERO if zero else DIGITS):
            return self.solve(ZERO_HZ if zero else mpf(hz), references)

    def solve(self, f, references="real"):
        nodes = {GROUND: None}
        branches = [(self.name(p), self.name(m)) for _, bs in self.placed for p, m in bs]
        ends = [(self.name(p), self.name(m)) for _, p, m in self.ports]
        for p, m in branches + ends:
            for node in (p, m):
                if node not in nodes:
                    nodes[node] = len(nodes) - 1
        nv, nb, np = len(nodes) - 1, len(branches), len(self.ports)
        size = nv + nb + np
        z = [mpc(z) if references == "true" else mpf(mpc(z).real) for z, _, _ in self.ports]

        def voltage(row, p, m, value):
            for node, sign in ((p, 1), (m, -1)):
                if nodes[node] is not None:
                    row[nodes[node]] += sign * value

        rows = [[mpc(0)] * (size + np) for _ in range(size)]
        for k, (p, m) in enumerate(branches + ends):
            sign = 1 if k < nb else -1          # a port's current enters the network at its first node
            voltage_rows = ((p, sign), (m, -sign))
            for node, s in voltage_rows:
                if nodes[node] is not None:
                    rows[nodes[node]][nv + k] += s
        first = 0
        for part, bs in self.placed:
            a, b = part.equations(f)
            for i in range(len(bs)):
                row = rows[nv + first + i]
                for k in range(len(bs)):
                    if a[i][k]:
                        voltage(row, *branches[first + k], mpc(a[i][k]))
                    row[nv + first + k] += b[i][k]
            first += len(bs)
        for k, (p, m) in enumerate(ends):
            row = rows[nv + nb + k]
            voltage(row, p, m, mpc(1))
            row[nv + nb + k] += z[k]
            row[size + k] = 2 * sqrt(z[k].real)

        currents = _eliminate(rows, size, nv + nb, PIVOT_AT_ZERO if mp.dps > 2 * DIGITS else PIVOT)
        # b = (v - z* i) / (2 sqrt(Re z)), with v = 2 sqrt(Re z) a - z i
        return [[(k == d) - sqrt(z[k].real) * currents[k][d] for d in range(np)] for k in range(np)]


def _eliminate(rows, size, first, smallest):
    """Gauss and Jordan, with the largest pivot of each column of scaled rows. -> the unknowns from `first`
    on, for each right side. The others need not be determined."""
    width = len(rows[0])
    for row in rows:
        scale = max(fabs(v) for v in row[:size])
        if scale:
            row[:] = [v / scale if v else v for v in row]
    left, pivots = list(range(size)), [None] * size
    for column in range(size):
        best = max(left, key=lambda r: fabs(rows[r][column]) if rows[r][column] else mpf(0), default=None)
        if best is None or fabs(rows[best][column]) <= smallest:
            continue
        left.remove(best)
        pivots[column] = best
        pivot = rows[best]
        inverse = 1 / pivot[column]
        busy = [k for k in range(column, width) if pivot[k]]
        for k in busy:
            pivot[k] *= inverse
        for r in range(size):
            factor = rows[r][column]
            if r == best or not factor:
                continue
            row = rows[r]
            for k in busy:
                row[k] -= factor * pivot[k]
            row[column] = mpc(0)
    free = [c for c in range(size) if pivots[c] is None]
    wanted = [rows[p] if p is not None else None for p in pivots[first:]]
    if any(fabs(v) > smallest ** 0.5 for r in left for v in rows[r][size:]):
        raise Singular("no solution")
    if any(row is None or any(fabs(row[c]) > smallest ** 0.5 for c in free) for row in wanted):
        raise Singular("the ports are not determined")
    return [row[size:] for row in wanted]
