"""A second opinion on linear circuits, for the tests of sim/circuit.

    reference.py [REQUEST.json]        answers in JSON on standard output; reads standard input without a file

Request
    {"networks": [{"name": "...", "nodes": 5, "source_ohm": 0.1,
                   "branches": [{"name": "L1", "kind": "L", "from": 1, "to": 2, "value": 1e-3, "loss": 0.3}, ...],
                   "couplings": [{"a": 0, "b": 4, "k": 0.1}],
                   "outputs": [{"from": 2, "to": 0}],
                   "frequency_hz": [...], "s": [[re, im], ...]}],
     "alignments": [{"shape": "butterworth", "order": 4, "high_pass": false, "hz": 2000, "frequency_hz": [...]}]}

Node 0 is the return, node 1 the amplifier's terminal; the source is 1 V behind source_ohm. Kinds: R, L, C (ohm, henry,
farad; "loss" is ohms in series) and "driver", whose "driver" object is expanded here into its own resistors, coils and
capacitor. A coupling joins coils by the index of their branches.

Method: modified nodal analysis (C.-W. Ho, A. E. Ruehli and P. A. Brennan, "The Modified Nodal Approach to Network
Analysis", IEEE Trans. Circuits and Systems 22(6), 504-509, 1975) in its fullest form: every branch current is an
unknown, every branch one row v_from - v_to - Z*i = 0, so that shorts, opens and mutual inductance need no special care
and no admittance is ever formed. Rows and columns are scaled by powers of two, the dense matrix is inverted in double
precision, and the solution is then refined with residuals in extended precision (J. H. Wilkinson, "Rounding Errors in
Algebraic Processes", HMSO, 1963; N. J. Higham, "Accuracy and Stability of Numerical Algorithms", 2nd ed., SIAM, 2002,
chapter 12).

How good an answer can be: for a quantity q, "sense" is the sum over all parts of |Z dq/dZ| / |q|, the amount by which q
magnifies a relative error of the impedances. A program that holds Z in double precision cannot be expected to be better
than sense * 1.1e-16, whatever its method.
"""

import json
import sys

import numpy as np
from scipy import signal

EXT = np.longdouble
CEXT = np.clongdouble


def expand(network):
    """Flatten drivers into parts: (nodes, rows), a row being (kind, from, to, value, loss).

    The first rows stand for the network's own branches in order. A driver's own row is a short that carries its current
    from its From node to a new inner node, where its equivalent circuit begins.
    """
    nodes = network["nodes"]
    rows, inner = [], []
    for b in network["branches"]:
        if b["kind"] != "driver":
            rows.append((b["kind"], b["from"], b["to"], b["value"], b.get("loss", 0.0)))
            continue
        d = b["driver"]
        rows.append(("R", b["from"], nodes, 0.0, 0.0))
        here = nodes
        nodes += 1
        sections = [[("R", d["re"])]]
        if d.get("le", 0):
            sections.append([("L", d["le"])])
        if d.get("l2", 0):
            sections.append([("R", d["r2"]), ("L", d["l2"])])
        if d.get("res", 0):
            sections.append([("R", d["res"]), ("L", d["lces"]), ("C", d["cmes"])])
        for i, section in enumerate(sections):
            there = b["to"]
            if i < len(sections) - 1:
                there = nodes
                nodes += 1
            for kind, value in section:
                inner.append((kind, here, there, value, 0.0))
            here = there
    return nodes, rows + inner


def power_of_two(x):
    """The powers of two next to x, 1 where x is 0: scaling by them rounds nothing."""
    x = np.where(x > 0, x, 1).astype(float)
    return np.exp2(np.round(np.log2(x)))


class Solution:
    """All node voltages and branch currents of one network at the complex frequencies s (rad/s)."""

    def __init__(self, network, s):
        nodes, rows = expand(network)
        self.own = len(network["branches"])
        self.nodes = nodes
        self.rows = rows
        n_v = nodes - 1  # the return is not an unknown
        n_i = len(rows)
        n = n_v + n_i + 1  # the last unknown is the current out of the source
        self.n_v, self.n = n_v, n
        s = np.asarray(s, dtype=CEXT)
        a = np.zeros((len(s), n, n), dtype=CEXT)
        b = np.zeros(n, dtype=CEXT)

        def volt(matrix, row, node, factor):
            if node != 0:
                matrix[:, row, node - 1] += factor

        for k, (kind, start, end, value, loss) in enumerate(rows):
            value, loss = EXT(value), EXT(loss)
            i = n_v + k
            if start != 0:
                a[:, start - 1, i] += 1  # Kirchhoff: the current leaves From
            if end != 0:
                a[:, end - 1, i] -= 1
            if kind == "C":
                volt(a, i, start, s * value)
                volt(a, i, end, -s * value)
                a[:, i, i] -= 1 + s * value * loss
            else:
                volt(a, i, start, 1)
                volt(a, i, end, -1)
                a[:, i, i] -= value if kind == "R" else loss + s * value
        for c in network.get("couplings") or []:
            mutual = EXT(c["k"]) * np.sqrt(EXT(rows[c["a"]][3]) * EXT(rows[c["b"]][3]))
            a[:, n_v + c["a"], n_v + c["b"]] -= s * mutual
            a[:, n_v + c["b"], n_v + c["a"]] -= s * mutual
        a[:, 0, n - 1] -= 1  # the source feeds node 1
        a[:, n - 1, 0] += 1
        a[:, n - 1, n - 1] += EXT(network.get("source_ohm", 0.0))
        b[n - 1] = 1
        self.s, self.a = s, a
        self._solve(b)

    def _solve(self, b):
        size = np.abs(self.a)
        row = np.ones(size.shape[:2])
        col = np.ones(size.shape[:2])
        for _ in range(4):
            row /= power_of_two(np.sqrt((size * row[:, :, None] * col[:, None, :]).max(axis=2)))
            col /= power_of_two(np.sqrt((size * row[:, :, None] * col[:, None, :]).max(axis=1)))
        scaled = (self.a * row[:, :, None] * col[:, None, :]).astype(complex)
        inverse = np.linalg.inv(scaled)
        self.condition = np.abs(scaled).sum(axis=2).max(axis=1) * np.abs(inverse).sum(axis=2).max(axis=1)
        self.inverse = inverse * col[:, :, None] * row[:, None, :]

        x = np.zeros(size.shape[:2], dtype=CEXT)
        best = np.inf
        for _ in range(30):
            residual = b - np.einsum("fij,fj->fi", self.a, x)
            step = np.einsum("fij,fj->fi", inverse, (residual * row).astype(complex)) * col
            norm = (np.abs(step) / col).max()
            if not norm < best / 2:
                break
            best = norm
            x = x + step
        self.x = x
        self.step = np.abs(step)
        self.x_v = np.concatenate([np.zeros((len(self.s), 1), dtype=CEXT), x[:, : self.n_v]], axis=1)

    def voltage(self, start, end):
        return self.x_v[:, start] - self.x_v[:, end]

    def current(self, k):
        return self.x[:, self.n_v + k]

    def source_current(self):
        return self.x[:, self.n - 1]

    def _weight(self):
        """Per equation, the size of the terms that hold part values: what a relative error of 1 would add to it."""
        w = np.zeros((len(self.s), self.n))
        for k, (kind, _, _, value, loss) in enumerate(self.rows):
            i = self.n_v + k
            w[:, i] = np.abs(self.x[:, i]) * (1 + np.abs(self.s) * value * loss) if kind == "C" else 0
            if kind != "C":
                w[:, i] = (np.abs(self.a[:, i, self.n_v : -1]) * np.abs(self.x[:, self.n_v : -1])).sum(axis=1)
        w[:, -1] = np.abs(self.a[:, -1, -1] * self.x[:, -1])
        return w

    def sense(self, picks):
        """Magnification of the functionals `picks` [f, q, n], each already divided by its quantity."""
        return np.einsum("fqj,fj->fq", np.abs(np.einsum("fqi,fij->fqj", picks, self.inverse)), self._weight())

    def mesh_sense(self, picks, couplings):
        """What `picks` magnify when coupled coils are written as admittances between their four ends.

        The mutual admittances y of two coils, +y between unlike and -y between like ends, all but cancel at each end.
        A method that holds them as such multiplies relative errors of y by this, and cannot do better.
        """
        total = np.zeros(picks.shape[:2])
        # rows[:, :, p] is what a current into node p adds to each functional; that into the return adds nothing.
        rows = np.einsum("fqi,fij->fqj", picks, self.inverse[:, :, : self.n_v])
        rows = np.concatenate([np.zeros_like(rows[:, :, :1]), rows], axis=2)
        coils = sorted({c[x] for c in couplings for x in "ab"})
        for i, a in enumerate(coils):
            for b in coils[i + 1 :]:
                y = self._mutual(coils, a, b)
                for p in self.rows[a][1:3]:
                    for q in self.rows[b][1:3]:
                        total += np.abs(rows[:, :, p] - rows[:, :, q]) * np.abs(y * self.voltage(p, q))[:, None]
        return total

    def _mutual(self, coils, a, b):
        index = [self.n_v + k for k in coils]
        y = np.linalg.inv(-self.a[:, index][:, :, index].astype(complex))
        return y[:, coils.index(a), coils.index(b)]

    def pick(self, start, end, over):
        p = np.zeros((len(self.s), self.n), dtype=complex)
        if start != 0:
            p[:, start - 1] += 1
        if end != 0:
            p[:, end - 1] -= 1
        return p / over.astype(complex)[:, None]

    def pick_current(self, index, over):
        p = np.zeros((len(self.s), self.n), dtype=complex)
        p[:, index] = 1
        return p / over.astype(complex)[:, None]


def pairs(z):
    z = np.asarray(z).astype(complex)
    return np.stack([z.real, z.imag], axis=-1).tolist()


def plain(x):
    """A list that JSON can hold: no infinities."""
    return np.minimum(np.nan_to_num(np.asarray(x, dtype=float), nan=1e300, posinf=1e300), 1e300).tolist()


def gains_and_impedance(network, sol):
    outputs = [sol.voltage(o["from"], o["to"]) for o in network["outputs"]]
    amp = sol.voltage(1, 0)
    zin = amp / sol.source_current()
    return outputs, amp, zin


def answer(network):
    with np.errstate(all="ignore"):
        return _answer(network)


def _answer(network):
    # 2*pi*f is rounded to double here on purpose: the angular frequency is an input, and a resonance of high Q
    # would show its rounding.
    s = 1j * (2 * np.pi * np.asarray(network["frequency_hz"], dtype=float))
    sol = Solution(network, s)
    outputs, amp, zin = gains_and_impedance(network, sol)
    picks = [sol.pick(o["from"], o["to"], v) for o, v in zip(network["outputs"], outputs)]
    picks.append(sol.pick(1, 0, amp) - sol.pick_current(sol.n - 1, sol.source_current()))
    volts, amps = [], []
    for k, b in enumerate(network["branches"]):
        v, i = sol.voltage(b["from"], b["to"]), sol.current(k)
        volts.append(v)
        amps.append(i)
        picks.append(sol.pick(b["from"], b["to"], v))
        picks.append(sol.pick_current(sol.n_v + k, i))
    picks = np.stack(picks, axis=1)
    sense = sol.sense(picks)
    couplings = network.get("couplings") or []
    if couplings:
        sense += sol.mesh_sense(picks, couplings)
    doubt = np.einsum("fqi,fi->fq", np.abs(picks), sol.step)
    n_out = len(outputs)
    result = {
        "name": network.get("name", ""),
        "gain": [pairs(v) for v in outputs],
        "gain_sense": plain(sense[:, :n_out].T),
        "amp": pairs(amp),
        "zin": pairs(zin),
        "zin_sense": plain(sense[:, n_out]),
        "branch_voltage": [pairs(v) for v in volts],
        "branch_voltage_sense": plain(sense[:, n_out + 1 :: 2].T),
        "branch_current": [pairs(i) for i in amps],
        "branch_current_sense": plain(sense[:, n_out + 2 :: 2].T),
        "node_magnitude": plain(np.abs(sol.x_v[:, : network["nodes"]]).T),
        "condition": plain(sol.condition),
        "doubt": float(plain([doubt[:, : n_out + 1].max()])[0]),
    }
    if network.get("s"):
        points = Solution(network, [complex(*p) for p in network["s"]])
        outputs, amp, zin = gains_and_impedance(network, points)
        result["at"] = {"gain": [pairs(v) for v in outputs], "amp": pairs(amp), "zin": pairs(zin)}
    return result


def prototype(a):
    """Zeros, poles and gain of the low-pass prototype at 1 rad/s, gain 1 at DC."""
    shape, n = a["shape"], a["order"]
    if shape == "butterworth":
        z, p, k = signal.butter(n, 1, analog=True, output="zpk")
    elif shape == "linkwitz-riley":
        z, p, k = signal.butter(n // 2, 1, analog=True, output="zpk")
        z, p, k = np.concatenate([z, z]), np.concatenate([p, p]), k * k
    elif shape == "bessel":
        z, p, k = signal.bessel(n, 1, analog=True, output="zpk", norm=a["norm"])
    elif shape == "chebyshev":
        z, p, k = signal.cheby1(n, a["ripple_db"], 1, analog=True, output="zpk")
    else:
        raise ValueError(f"alignment {shape!r} is unknown")
    return z, p, np.prod(-p).real


def align(a):
    """H at each frequency, and the prototype's denominator, highest power first and 1 at the end."""
    z, p, k = prototype(a)
    b, den = signal.zpk2tf(z, p, k)
    w0 = 2 * np.pi * a["hz"]
    w = 2 * np.pi * np.asarray(a["frequency_hz"], dtype=float)
    change = signal.lp2hp_zpk if a["high_pass"] else signal.lp2lp_zpk
    _, h = signal.freqs_zpk(*change(z, p, k, wo=w0), worN=w)
    num, poly = (signal.lp2hp if a["high_pass"] else signal.lp2lp)(b, den, wo=1.0)
    _, h_poly = signal.freqs(num, poly, worN=w / w0)
    return {"denominator": (den / den[-1]).tolist(), "gain": pairs(h), "gain_by_polynomial": pairs(h_poly)}


def main():
    source = open(sys.argv[1], encoding="utf-8") if len(sys.argv) > 1 else sys.stdin
    with source:
        request = json.load(source)
    reply = {
        "extended_eps": float(np.finfo(EXT).eps),
        "networks": [answer(n) for n in request.get("networks") or []],
        "alignments": [align(a) for a in request.get("alignments") or []],
    }
    sys.stdout.write(json.dumps(reply, allow_nan=False))  # dumps is many times faster than dump


if __name__ == "__main__":
    main()
