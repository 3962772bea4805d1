"""A second opinion on tuning: the same objective coded anew in numpy, and scipy.optimize from many starts.

    python3 tune.py evaluate  < problems.json     the score of given values
    python3 tune.py optimise  < problems.json     the best from given and random places, with wall times

Reads a list of problems, writes { "with": versions, "answers": [...] }. A problem is

    { "name", "freqs": [Hz], "band": [Hz, Hz], "source": ohm, "nodes": n,
      "branches": [{ "kind": "R"|"L"|"C"|"Z", "from", "to", "value", "loss", "z": [[re, im]...] over freqs, "zload" over loads }],
      "outputs": [[from, to]...], "press": [ear][way][[re, im]...] in Pa per volt/volt, or null without sound,
      "targets": [[{ "high", "shape", "order", "hz" }...]...] by way, "tilt": dB an octave,
      "weights": { "sum", "ways", "phase", "angles" }, "level": dB or null,
      "vars": [{ "branches": [index], "low", "high", "start" }], "limit": ohm, "loads": [Hz],
      "values": [[by variable]...], "restarts", "seed" }

An evaluation scores each of values. An optimisation begins at each of values, or at the start if there are none, and at so
many places more, each value of them within a decade of the start's, evenly in its logarithm. By least_squares (trf, exact
derivatives, its own tolerances and limits), or with a limit on the impedance over loads by SLSQP.

Node 0 is the return and node 1 the amplifier's terminal. The targets are scipy.signal's. What the objective is stands in
the documentation of package tune.
"""
import json
import sys
import time

import numpy as np
import scipy
from scipy import optimize, signal


def cplx(rows):
    a = np.asarray(rows, float)
    return a[..., 0] + 1j * a[..., 1]


def target_db(targets, f):
    """Level of the product of a way's targets, in dB."""
    h = np.ones(f.size, complex)
    for t in targets:
        kind = "highpass" if t["high"] else "lowpass"
        order, power = t["order"], 1
        if t["shape"] == "linkwitz-riley":
            order, power = order // 2, 2
        w = 2 * np.pi * t["hz"]
        if t["shape"] == "bessel":
            b, a = signal.bessel(order, w, kind, analog=True, norm="mag")
        else:
            b, a = signal.butter(order, w, kind, analog=True)
        h = h * signal.freqs(b, a, 2 * np.pi * f)[1] ** power
    return 20 * np.log10(np.abs(h))


class Network:
    """Nodal equations over a grid, solved in one batch."""

    def __init__(self, p, freqs, z):
        self.s = 2j * np.pi * np.asarray(freqs)
        self.branches, self.source = p["branches"], p["source"]
        self.zport = {i: 1 / cplx(b[z]) for i, b in enumerate(self.branches) if b["kind"] == "Z"}
        # Unknown are all nodes but the return, and but the amplifier's if nothing stands before it.
        self.first = 1 if self.source > 0 else 2
        self.n = p["nodes"] - self.first

    def admittance(self, i, values):
        b = self.branches[i]
        v = values[i]
        if b["kind"] == "R":
            return np.full(self.s.size, 1 / v, complex)
        if b["kind"] == "L":
            return 1 / (b["loss"] + self.s * v)
        if b["kind"] == "C":
            return 1 / (b["loss"] + 1 / (self.s * v))
        return self.zport[i]

    def slope(self, i, y, value):
        """∂y/∂ln value."""
        kind = self.branches[i]["kind"]
        if kind == "R":
            return -y
        if kind == "L":
            return -y * y * self.s * value
        return y * y / (self.s * value)

    def solve(self, values, outputs):
        m = self.s.size
        Y = np.zeros((m, self.n, self.n), complex)
        I = np.zeros((m, self.n), complex)
        ys = []
        for i, b in enumerate(self.branches):
            y = self.admittance(i, values)
            ys.append(y)
            a, c = b["from"] - self.first, b["to"] - self.first
            for u, w in ((a, c), (c, a)):
                if u >= 0:
                    Y[:, u, u] += y
                    if w >= 0:
                        Y[:, u, w] -= y
                    elif w + self.first == 1 and self.first == 2:
                        I[:, u] += y
        if self.source > 0:
            Y[:, 0, 0] += 1 / self.source
            I[:, 0] += 1 / self.source
        rhs = np.zeros((m, self.n, 1 + len(outputs)), complex)
        rhs[:, :, 0] = I
        for o, (a, c) in enumerate(outputs):
            for node, sign in ((a, 1), (c, -1)):
                if node >= self.first:
                    rhs[:, node - self.first, 1 + o] += sign
        x = np.linalg.solve(Y, rhs)
        volts = np.zeros((m, self.n + self.first), complex)
        volts[:, self.first:] = x[:, :, 0]
        if self.first == 2:
            volts[:, 1] = 1
        adj = np.zeros((m, self.n + self.first, len(outputs)), complex)
        adj[:, self.first:, :] = x[:, :, 1:]
        return ys, volts, adj

    def impedance(self, values):
        """What the amplifier sees behind its own resistance, and the voltages for a current of 1 A into it."""
        ys, v, _ = self.solve(values, [])
        if self.source > 0:
            i = (1 - v[:, 1]) / self.source
        else:
            i = 0
            for b, y in zip(self.branches, ys):
                for a, c in ((b["from"], b["to"]), (b["to"], b["from"])):
                    if a == 1:
                        i = i + y * (v[:, a] - v[:, c])
        return v[:, 1] / i, ys, v / i[:, None]


class Problem:
    def __init__(self, p):
        self.p = p
        self.f = np.asarray(p["freqs"])
        self.net = Network(p, self.f, "z")
        self.load = Network(p, p["loads"], "zload") if p["loads"] else None
        self.base = [b["value"] for b in p["branches"]]
        self.vars = p["vars"]
        self.aim = p["tilt"] * np.log2(self.f / 1000)
        self.press = [cplx(e) / 20e-6 for e in p["press"]] if p["press"] else None
        self.targets = [target_db(t, self.f) if t else None for t in p["targets"]]
        self.points = []  # of each pair of neighbours, where the phase between them counts

    def values(self, x):
        values = list(self.base)
        for v, q in zip(np.exp(x), self.vars):
            for b in q["branches"]:
                values[b] = v
        return values

    def gains(self, x):
        values = self.values(x)
        ys, v, adj = self.net.solve(values, self.p["outputs"])
        return values, ys, v, adj, [v[:, a] - v[:, c] for a, c in self.p["outputs"]]

    def settle(self, x):
        """Choose where the phases count: where the targets of neighbours are both above -12 dB, or, if they do not say, where both
        ways are within 12 dB of the sum. Returns the phase differences at the latter."""
        self.points, phases, said = [], [], []
        if self.press is None:
            return phases
        gains = self.gains(x)[-1]
        heard = [self.press[0][k] * g for k, g in enumerate(gains)]
        order = np.argsort([self.middle(k) for k in range(len(gains))], kind="stable")
        for low, high in zip(order, order[1:]):
            least = np.abs(sum(heard)) * 10 ** (-12 / 20)
            at = np.flatnonzero((np.abs(heard[low]) > least) & (np.abs(heard[high]) > least))
            self.points.append((low, high, at))
            phases.append(np.angle(heard[high][at] / heard[low][at], deg=True))
            if self.targets[low] is not None and self.targets[high] is not None:
                said.append((low, high, np.flatnonzero((self.targets[low] > -12) & (self.targets[high] > -12))))
        if len(said) == len(order) - 1 and all(at.size for _, _, at in said):
            self.points = said
        return phases

    def middle(self, way):
        """The middle of what a way's targets pass, which puts the ways in order."""
        low, high = self.p["band"]
        for t in self.p["targets"][way] or []:
            if t["high"]:
                low = max(low, t["hz"])
            else:
                high = min(high, t["hz"])
        return low * high

    def terms(self, gains):
        """The mean squares of levels: (what is heard, how it depends on the gains, aim, grid points, weight, which level)."""
        w, every = self.p["weights"], np.arange(self.f.size)
        terms = []
        for e, press in enumerate(self.press or []):
            weight = w["sum"] if e == 0 else w["angles"]
            terms.append((sum(c * g for c, g in zip(press, gains)), list(press), self.aim, every, weight, e))
        for k, t in enumerate(self.targets):
            at = np.flatnonzero(t > -20) if t is not None else every[:0]
            if at.size == 0:
                continue
            c = self.press[0][k] if self.press is not None else np.ones(self.f.size)
            share = [c[at] if o == k else np.zeros(at.size) for o in range(len(gains))]
            terms.append(((c * gains[k])[at], share, t[at], at, w["ways"], 0))
        return terms

    def deviations(self, terms):
        """In dB about the levels, by term, and the levels."""
        off = [20 * np.log10(np.abs(z)) - aim for z, _, aim, _, _, _ in terms]
        levels = {}
        for level in {t[5] for t in terms}:
            of = [i for i, t in enumerate(terms) if t[5] == level]
            if level == 0 and self.p["level"] is not None:
                levels[level] = self.p["level"]
            else:
                levels[level] = sum(terms[i][4] * off[i].mean() for i in of) / sum(terms[i][4] for i in of)
        return [r - levels[t[5]] for r, t in zip(off, terms)], levels

    def residuals(self, x):
        """Residuals whose squares add up to the objective."""
        gains = self.gains(x)[-1]
        terms = self.terms(gains)
        out = [np.sqrt(t[4] / r.size) * r for r, t in zip(self.deviations(terms)[0], terms)]
        for low, high, at in self.points if self.p["weights"]["phase"] else []:
            press = self.press[0]
            turn = np.angle((press[high] * gains[high])[at] / (press[low] * gains[low])[at], deg=True)
            out.append(np.sqrt(self.p["weights"]["phase"] / max(at.size, 1)) * turn / 10)
        return np.concatenate(out)

    def jacobian(self, x):
        """Derivatives of the residuals by x = ln values: dV = -inverse of Y times dY V."""
        values, ys, v, adj, gains = self.gains(x)
        terms = self.terms(gains)
        columns = []
        for q in self.vars:
            d = [np.zeros(self.f.size, complex) for _ in gains]
            for b in q["branches"]:
                a, c = self.p["branches"][b]["from"], self.p["branches"][b]["to"]
                dy = self.net.slope(b, ys[b], values[b])
                for o in range(len(gains)):
                    d[o] -= (adj[:, a, o] - adj[:, c, o]) * (v[:, a] - v[:, c]) * dy
            col = [20 / np.log(10) * np.real(sum(s * g[t[3]] for s, g in zip(t[1], d)) / t[0]) for t in terms]
            for level in {t[5] for t in terms}:
                if level == 0 and self.p["level"] is not None:
                    continue
                of = [i for i, t in enumerate(terms) if t[5] == level]
                mean = sum(terms[i][4] * col[i].mean() for i in of) / sum(terms[i][4] for i in of)
                for i in of:
                    col[i] = col[i] - mean
            col = [np.sqrt(t[4] / r.size) * r for r, t in zip(col, terms)]
            for low, high, at in self.points if self.p["weights"]["phase"] else []:
                turn = np.degrees(np.imag((d[high] / gains[high] - d[low] / gains[low])[at]))
                col.append(np.sqrt(self.p["weights"]["phase"] / max(at.size, 1)) * turn / 10)
            columns.append(np.concatenate(col))
        return np.stack(columns, axis=1)

    def objective(self, x):
        return float(np.sum(self.residuals(x) ** 2))

    def room(self, x):
        """ln |Zin| above the limit, over loads."""
        return np.log(np.abs(self.load.impedance(self.values(x))[0]) / self.p["limit"])

    def room_jacobian(self, x):
        """dZ = -u² dy, u the voltage across the branch for 1 A."""
        values = self.values(x)
        z, ys, v = self.load.impedance(values)
        columns = []
        for q in self.vars:
            d = 0
            for b in q["branches"]:
                u = v[:, self.p["branches"][b]["from"]] - v[:, self.p["branches"][b]["to"]]
                d = d - u * u * self.load.slope(b, ys[b], values[b])
            columns.append(np.real(d / z))
        return np.stack(columns, axis=1)

    def least_ohm(self, x):
        """The least |Zin|: by the parabola through |Zin|² at the three points of loads about it, as at a series resonance."""
        square = np.abs(self.load.impedance(self.values(x))[0]) ** 2
        k = int(np.argmin(square))
        if 0 < k < square.size - 1:
            a, b, c = square[k - 1 : k + 2]
            return float(np.sqrt(b - (a - c) ** 2 / (8 * (a + c - 2 * b))))
        return float(np.sqrt(square[k]))

    def score(self, values):
        x = np.log(values)
        phases = self.settle(x)
        terms = self.terms(self.gains(x)[-1])
        off, levels = self.deviations(terms)
        means = [np.mean(r**2) for r in off]
        sound = self.press is not None
        ways = means[len(self.press) if sound else 0 :]
        turns = np.concatenate(phases) if phases else np.zeros(0)
        return {
            "objective": self.objective(x),
            "level": levels[0],
            "sum_rms": np.sqrt(means[0]) if sound else None,
            "way_rms": np.sqrt(np.mean(ways)) if ways else None,
            "phase_rms": np.sqrt(np.mean(turns**2)) if turns.size else None,
            "least_ohm": self.least_ohm(x) if self.load else None,
        }

    def descend(self, start, low, high):
        """The objective and the place where a descent from start ends; infinite if it breaks the limit."""
        start = np.clip(start, low + 1e-9, high - 1e-9)
        self.settle(start)
        if self.p["limit"] > 0:
            r = optimize.minimize(
                self.objective, start, method="SLSQP", jac=lambda x: 2 * self.jacobian(x).T @ self.residuals(x),
                bounds=list(zip(low, high)), constraints=[{"type": "ineq", "fun": self.room, "jac": self.room_jacobian}],
                options={"maxiter": 1000, "ftol": 1e-10})
            if self.room(r.x).min() < -1e-6:
                return np.inf, r.x
        else:
            r = optimize.least_squares(self.residuals, start, self.jacobian, bounds=(low, high))
        self.settle(r.x)
        return self.objective(r.x), r.x

    def optimise(self):
        low = np.log([q["low"] for q in self.vars])
        high = np.log([q["high"] for q in self.vars])
        start = np.clip(np.log([q["start"] for q in self.vars]), low, high)
        rng = np.random.default_rng(self.p["seed"])
        places = [np.log(v) for v in self.p["values"]] if self.p["values"] else [start]
        for _ in range(self.p["restarts"]):
            places.append(np.clip(start + rng.uniform(-1, 1, start.size) * np.log(10), low, high))
        began = time.perf_counter()
        ends = [self.descend(x, low, high) for x in places]
        seconds = time.perf_counter() - began
        best, at = min(ends, key=lambda end: end[0])
        return {
            "name": self.p["name"], "objective": best, "values": list(np.exp(at)), "seconds": seconds, "starts": len(places),
            "within_1_percent": sum(int(f <= 1.01 * best) for f, _ in ends), "broke_limit": sum(int(np.isinf(f)) for f, _ in ends),
        }


def main():
    problems = [Problem(p) for p in json.load(sys.stdin)]
    if sys.argv[1:] == ["evaluate"]:
        answers = [{"name": p.p["name"], "scores": [p.score(v) for v in p.p["values"]]} for p in problems]
    else:
        answers = [p.optimise() for p in problems]
    versions = f"Python {sys.version.split()[0]}, numpy {np.__version__}, scipy {scipy.__version__}"
    json.dump({"with": versions, "answers": answers}, sys.stdout)


main()
