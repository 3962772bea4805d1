"""A second opinion on tuning: the same objective coded anew in numpy, and scipy.optimize from many starts.

    python3 tune.py evaluate  < problems.json     the objective at given values
    python3 tune.py optimise  < problems.json     the best of so many restarts, with wall times

Reads a list of problems, writes a list of answers. A problem is

    { "name", "freqs": [Hz], "source": ohm, "nodes": n,
      "branches": [{ "kind": "R"|"L"|"C"|"Z", "from", "to", "value", "loss", "z": [[re, im]...] over freqs, "zload" over loads }],
      "outputs": [[from, to]...], "press": [ear][way][[re, im]...] in Pa per volt/volt, or null without sound,
      "targets": [[{ "high", "shape", "order", "hz" }...]...] by way, "aim": [dB], "weights": { "sum", "ways", "angles" },
      "level": dB or null, "vars": [{ "branches": [index], "low", "high", "start" }],
      "limit": ohm, "loads": [Hz], "values": [[by variable]...], "restarts", "seed" }

Node 0 is the return and node 1 the amplifier's terminal. The targets are scipy.signal's. What the objective is stands in
the documentation of package tune.
"""
import json
import sys
import time

import numpy as np
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
        elif t["shape"] == "linkwitz-riley" and t["order"] == 2:
            b, a = signal.butter(1, w, kind, analog=True)
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
        ys, v, _ = self.solve(values, [])
        if self.source > 0:
            return v[:, 1] * self.source / (1 - v[:, 1])
        i = 0
        for b, y in zip(self.branches, ys):
            for a, c in ((b["from"], b["to"]), (b["to"], b["from"])):
                if a == 1:
                    i = i + y * (v[:, a] - v[:, c])
        return 1 / i


class Problem:
    def __init__(self, p):
        self.p = p
        self.f = np.asarray(p["freqs"])
        self.net = Network(p, self.f, "z")
        self.load = Network(p, p["loads"], "zload") if p["limit"] > 0 else None
        self.base = [b["value"] for b in p["branches"]]
        self.vars = p["vars"]
        self.aim = np.asarray(p["aim"])
        self.press = [cplx(e) for e in p["press"]] if p["press"] else None
        self.targets = [target_db(t, self.f) if t else None for t in p["targets"]]

    def values(self, x):
        values = list(self.base)
        for v, q in zip(np.exp(x), self.vars):
            for b in q["branches"]:
                values[b] = v
        return values

    def residuals(self, x, want_jac=False):
        """Residuals whose squares add up to the objective, and their derivatives by x = ln values."""
        w = self.p["weights"]
        values = self.values(x)
        ys, v, adj = self.net.solve(values, self.p["outputs"])
        gains = [v[:, a] - v[:, c] for a, c in self.p["outputs"]]
        slopes = []  # by variable, by way
        if want_jac:
            for q in self.vars:
                d = [np.zeros(self.f.size, complex) for _ in gains]
                for b in q["branches"]:
                    a, c = self.p["branches"][b]["from"], self.p["branches"][b]["to"]
                    dy = self.net.slope(b, ys[b], values[b])
                    for o in range(len(gains)):
                        d[o] -= (adj[:, a, o] - adj[:, c, o]) * (v[:, a] - v[:, c]) * dy
                slopes.append(d)
        terms = []  # (what, its derivatives, aim, weight a point, which level)
        n = self.f.size
        if self.press is not None:
            for e, press in enumerate(self.press):
                add = lambda g: sum(press[k] * g[k] for k in range(len(g)))
                weight = w["sum"] if e == 0 else w["angles"]
                terms.append((add(gains) / 20e-6, [add(d) / 20e-6 for d in slopes], self.aim, np.full(n, weight / n), e, np.arange(n)))
        for k, t in enumerate(self.targets):
            if t is None:
                continue
            at = np.flatnonzero(t > -20)
            if at.size == 0:
                continue
            c = self.press[0][k] / 20e-6 if self.press is not None else np.ones(n)
            terms.append(((c * gains[k])[at], [(c * d[k])[at] for d in slopes], t[at], np.full(at.size, w["ways"] / at.size), 0, at))
        db = 20 / np.log(10)
        r = [db * np.log(np.abs(z)) - aim for z, _, aim, _, _, _ in terms]
        J = [[db * np.real(d / z) for d in dz] for z, dz, _, _, _, _ in terms]
        for level in {t[4] for t in terms}:
            of = [i for i, t in enumerate(terms) if t[4] == level]
            if level == 0 and self.p["level"] is not None:
                for i in of:
                    r[i] = r[i] - self.p["level"]
                continue
            total = sum(terms[i][3].sum() for i in of)
            mean = sum((terms[i][3] * r[i]).sum() for i in of) / total
            for i in of:
                r[i] = r[i] - mean
            for k in range(len(slopes)):
                mean = sum((terms[i][3] * J[i][k]).sum() for i in of) / total
                for i in of:
                    J[i][k] = J[i][k] - mean
        root = [np.sqrt(t[3]) for t in terms]
        resid = np.concatenate([a * b for a, b in zip(root, r)])
        if not want_jac:
            return resid
        return np.stack([np.concatenate([root[i] * J[i][k] for i in range(len(terms))]) for k in range(len(slopes))], axis=1)

    def optimise(self):
        low = np.log([q["low"] for q in self.vars])
        high = np.log([q["high"] for q in self.vars])
        start = np.clip(np.log([q["start"] for q in self.vars]), low, high)
        rng = np.random.default_rng(self.p["seed"])
        best, at, t0 = np.inf, None, time.perf_counter()
        for k in range(self.p["restarts"]):
            x0 = start if k == 0 else np.clip(start + rng.uniform(-1, 1, start.size) * np.log(10), low, high)
            inside = np.clip(x0, low + 1e-9, high - 1e-9)
            if self.load is None:
                r = optimize.least_squares(self.residuals, inside, lambda x: self.residuals(x, True), bounds=(low, high), max_nfev=300)
                f, x = 2 * r.cost, r.x
            else:
                limit = np.log(self.p["limit"])
                room = lambda x: np.log(np.abs(self.load.impedance(self.values(x)))) - limit
                r = optimize.minimize(
                    lambda x: float(np.sum(self.residuals(x) ** 2)), inside, method="SLSQP",
                    jac=lambda x: 2 * self.residuals(x, True).T @ self.residuals(x),
                    bounds=list(zip(low, high)), constraints=[{"type": "ineq", "fun": room}], options={"maxiter": 200})
                f, x = r.fun, r.x
                if room(x).min() < -1e-6:
                    continue
            if f < best:
                best, at = f, x
        return {"name": self.p["name"], "objective": best, "values": list(np.exp(at)), "seconds": time.perf_counter() - t0}


def main():
    problems = [Problem(p) for p in json.load(sys.stdin)]
    if sys.argv[1:] == ["evaluate"]:
        out = [{"name": p.p["name"], "objectives": [float(np.sum(p.residuals(np.log(v)) ** 2)) for v in p.p["values"]]} for p in problems]
    else:
        out = [p.optimise() for p in problems]
    json.dump(out, sys.stdout)


main()
