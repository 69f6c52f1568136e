"""Random networks: a netlist and the same network built here, from a seed.

networks(n, seed) -> Case(kind, text, net, frequencies); the same seed gives the same networks. 2 to 7 nodes,
1 to 4 ports, parts of every kind; lines have round lengths at 1 GHz, and are swept at half waves too.
"""
import random

from mpmath import mpf

import network as n
from cases import Case


def networks(count, seed):
    for k in range(count):
        case = Draw(random.Random(f"{seed}/{k}")).network()
        if case.frequencies:
            yield case


class Draw:
    """One network being drawn; a method for each kind of part gives (text, item)."""

    def __init__(self, rng):
        self.rng, self.net, self.text = rng, n.Network(), []

    def network(self):
        rng = self.rng
        self.nodes = [f"n{k}" for k in range(rng.randint(2, 7))]
        for k, node in enumerate(rng.sample(self.nodes, rng.randint(1, min(4, len(self.nodes))))):
            self.port(k, node)
        tree = self.nodes[:]
        rng.shuffle(tree)
        for k in range(1, len(tree)):                       # so that the network hangs together
            self.chain(rng.choice(tree[:k]), tree[k])
        for _ in range(rng.randint(1, len(tree) + 2)):
            rng.choice((self.chain, self.chain, self.shunt, self.shunt, self.several))()
        f = [0.0, rng.choice((1e6, 137e6, 3.1e9))] + rng.sample((5e8, 1e9, 2e9, 4e9), 2)
        return Case("random", "\n".join(self.text), self.net, [x for x in sorted(f) if self.has_solution(x)])

    def has_solution(self, f):
        """Not where a node that controls a current floats, for one."""
        try:
            self.net.s(f)
        except n.Singular:
            return False
        return True

    def port(self, k, node):
        z = self.rng.choice((50, 75, 12.5, 100))
        x = self.rng.choice((0, 0, 0, 20, -35))
        self.net.port(mpf(z) if not x else n.mpc(z, x), node)
        self.text.append(f"port p{k}: {z} ohm{f' + j*({x} ohm)' if x else ''} at {node}")

    def two(self):
        return self.rng.sample(self.nodes, 2)

    def chain(self, left=None, right=None):
        if left is None:
            left, right = self.two()
        text, item = self.item()
        self.net.chain(left, item, right)
        self.text.append(f"{left} -- {text} -- {right}")

    def shunt(self):
        node = self.rng.choice(self.nodes)
        text, item = self.two_terminal()
        self.net.chain(node, n.Shunt(item))
        self.text.append(f"{node} -- shunt {text}")

    def several(self):
        nodes = self.nodes + [n.GROUND]
        name = self.rng.choice(("coupled_lines", "coupled_inductors", "transformer", "circulator",
                                "transconductance", "line"))
        count = 3 if name == "circulator" else 4
        if len(nodes) < count:
            return
        terminals = self.rng.sample(nodes, count)
        text, part = getattr(self, "on_" + name)()
        self.net.on(part, *terminals)
        self.text.append(f"{text} on ({', '.join(terminals)})")

    # ---- items in a chain

    def item(self):
        if self.rng.random() < 0.45:
            return self.two_port()
        return self.two_terminal()

    def two_terminal(self):
        kind = self.rng.choice((self.resistor, self.inductor, self.capacitor, self.inductor, self.capacitor,
                                self.stub, self.impedance, self.composite))
        return kind()

    def two_port(self):
        kind = self.rng.choice((self.line, self.line, self.line_constants, self.transformer, self.matched,
                                self.gyrator, self.turned, self.repeat))
        return kind()

    def number(self, low, high):
        """Three digits, evenly over the logarithm."""
        return float(f"{low * (high / low) ** self.rng.random():.3g}")

    def options(self, *choices):
        """A random choice of options, as text and as keywords."""
        text, keywords = "", {}
        for part, more in choices:
            if self.rng.random() < 0.5:
                text += ", " + part
                keywords.update(more)
        return text, keywords

    def resistor(self):
        r, esl, cp = self.number(1, 1000), self.number(0.1, 3), self.number(0.02, 0.5)
        t, k = self.options((f"esl = {esl} nH", {"esl": mpf(esl) / 10 ** 9}),
                            (f"cp = {cp} pF", {"cp": mpf(cp) / 10 ** 12}))
        return f"resistor({r} ohm{t})", n.resistor(r, **k)

    def inductor(self):
        l, q, r, f = self.number(0.5, 50), self.number(10, 200), self.number(0.05, 5), self.number(2, 9)
        loss = self.rng.choice([("", {}), (f", q = {q}", {"q": q}),
                                (f", q = {q} @ 500 MHz", {"q": n.At(q, 5e8)}),
                                (f", resistance = {r} ohm", {"resistance": r})])
        t, k = self.options((f"srf = {f} GHz", {"srf": mpf(f) * 10 ** 9}))
        return f"inductor({l} nH{loss[0]}{t})", n.inductor(mpf(l) / 10 ** 9, **loss[1], **k)

    def capacitor(self):
        c, q, r, x = self.number(0.3, 30), self.number(20, 500), self.number(0.05, 2), self.number(0.1, 1)
        loss = self.rng.choice([("", {}), (f", q = {q}", {"q": q}),
                                (f", q = {q} @ 500 MHz", {"q": n.At(q, 5e8)}),
                                (f", esr = {r} ohm", {"esr": r})])
        t, k = self.options((f"esl = {x} nH", {"esl": mpf(x) / 10 ** 9}),
                            ("loss_tangent = 0.015", {"loss_tangent": mpf("0.015")}))
        return f"capacitor({c} pF{loss[0]}{t})", n.capacitor(mpf(c) / 10 ** 12, **loss[1], **k)

    def impedance(self):
        r, x = self.number(1, 200), self.number(1, 200)
        if self.rng.random() < 0.5:
            return f"impedance({r} ohm - j*{x} ohm)", n.impedance(n.mpc(r, -x))
        return (f"admittance({r} mS*(1 + j*frequency/{x} GHz))",
                n.admittance(lambda f: mpf(r) / 1000 * (1 + 1j * f / (mpf(x) * 10 ** 9))))

    def composite(self):
        (a, x), (b, y) = self.resistor(), self.rng.choice((self.inductor, self.capacitor))()
        if self.rng.random() < 0.5:
            return f"({a} || {b})", n.Parallel(x, y)
        return f"({a} -- {b})", n.Chain(x, y)

    def length(self):
        """(text, keywords) of a length and its losses."""
        angle, loss = self.rng.choice((30, 45, 90, 90, 180, 270, 360)), self.number(0.05, 2)
        mm, per_metre, delay = self.number(2, 100), self.number(0.5, 20), self.number(20, 900)
        losses = [(f", loss = {loss} dB", {"loss": loss}),
                  (f", loss = {loss} dB @ 2 GHz", {"loss": n.At(loss, 2e9)}), ("", {}), ("", {})]
        form = self.rng.randrange(4)
        if form < 2:
            text, k = f"{angle} deg @ 1 GHz", {"turns": n.At(mpf(angle) / 360, 1e9)}
        elif form == 2:
            text, k = f"{delay} ps", {"seconds": mpf(delay) / 10 ** 12}
        else:
            text, k = f"{mm} mm, permittivity = 3.4", {"metres": mpf(mm) / 1000, "permittivity": mpf("3.4")}
            losses = [("", {}), (f", loss = {per_metre} dB/m", {"loss_per_metre": per_metre}),
                      (f", loss = {per_metre} dB/m @ 1 GHz", {"loss_per_metre": n.At(per_metre, 1e9)})]
        t, more = self.rng.choice(losses)
        u, last = self.options(("loss_tangent = 0.01", {"loss_tangent": mpf("0.01")}))
        return text + t + u, {**k, **more, **last}

    def stub(self):
        name, z = self.rng.choice(("open_stub", "shorted_stub")), self.number(15, 150)
        t, k = self.length()
        return f"{name}({z} ohm, {t})", getattr(n, name)(z, **k)

    def line(self):
        z, (t, k) = self.number(15, 150), self.length()
        return f"line({z} ohm, {t})", n.line(z, **k)

    def line_constants(self):
        r, l, g = self.number(0.1, 50), self.number(100, 600), self.number(0.01, 5)
        c, d = self.number(30, 300), self.number(1, 30)
        return (f"line_constants({r} ohm/m, {l} nH/m, {g} mS/m, {c} pF/m, {d} cm)",
                n.line_constants(r, mpf(l) / 10 ** 9, mpf(g) / 1000, mpf(c) / 10 ** 12, mpf(d) / 100))

    def transformer(self):
        turns = self.rng.choice((0.5, 2, -1, 1.7))
        return f"transformer({turns})", n.transformer(turns)

    def matched(self):
        z, x = self.number(20, 120), self.number(0.1, 20)
        return self.rng.choice([(f"attenuator({x} dB, z = {z} ohm)", n.attenuator(x, z)),
                                (f"phase_shift({x} deg, z = {z} ohm)", n.phase_shift(mpf(x) / 360, z)),
                                (f"isolator(z = {z} ohm)", n.isolator(z))])

    def gyrator(self):
        r = self.number(10, 200)
        return f"gyrator({r} ohm)", n.gyrator(r)

    def turned(self):
        text, item = self.rng.choice((self.line, self.transformer, self.line_constants, self.gyrator))()
        if self.rng.random() < 0.5:
            return f"reversed({text})", n.Reversed(item)
        return f"inverse({text})", n.Inverse(item)

    def repeat(self):
        (a, x), (b, y), k = self.inductor(), self.capacitor(), self.rng.randint(2, 4)
        return f"repeat({k}, {a} -- shunt {b})", n.Repeat(k, n.Chain(x, n.Shunt(y)))

    # ---- parts with more terminals

    def on_coupled_lines(self):
        even, odd, angle = self.number(60, 150), self.number(20, 55), self.rng.choice((45, 90, 180))
        return (f"coupled_lines({angle} deg @ 1 GHz, even = {even} ohm, odd = {odd} ohm, "
                "loss = 0.3 dB @ 1 GHz)",
                n.coupled_lines(even, odd, {"turns": n.At(mpf(angle) / 360, 1e9)}, loss=n.At(0.3, 1e9)))

    def on_coupled_inductors(self):
        a, b, k = self.number(1, 50), self.number(1, 50), self.rng.choice((0.3, 0.95, -0.8, 1))
        return (f"coupled_inductors({a} nH, {b} nH, {k})",
                n.coupled_inductors(mpf(a) / 10 ** 9, mpf(b) / 10 ** 9, k))

    def on_transformer(self):
        turns = self.rng.choice((0.5, 2, -1, 1.7))
        return f"transformer({turns})", n.transformer4(turns)

    def on_circulator(self):
        z = self.number(20, 120)
        return f"circulator(z = {z} ohm)", n.circulator(z)

    def on_transconductance(self):
        gm = self.number(1, 50)
        return f"transconductance({gm} mS)", n.transconductance(mpf(gm) / 1000)

    def on_line(self):
        z, (t, k) = self.number(15, 150), self.length()
        return f"line({z} ohm, {t})", n.line4(z, **k)
