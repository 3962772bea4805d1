"""The yardstick of spread: the same builds by numpy's batched solve.

    python3 testdata/spread.py < builds.json          levels of the sum of each build, for the tests of sim/spread
    python3 testdata/spread.py --time < builds.json   seconds for so many builds

Reads { "freqs": [Hz], "source": ohm, "nodes": n, "branches": [{ "kind": "R"|"L"|"C"|"Z", "from", "to", "loss", "z": [[re, im]...] }],
"outputs": [[from, to]...], "press": [way][[re, im]...] in Pa, "values": [build][branch] }. Node 0 is the return, node 1 the
amplifier's terminal behind the source resistance, which must not be 0.
"""
import json
import sys
import time

import numpy as np


def levels(p, values):
    """Levels in dB SPL, builds by frequencies: all builds at all frequencies in one batch."""
    s = 2j * np.pi * np.asarray(p["freqs"])
    m, n = len(values), p["nodes"] - 1
    Y = np.zeros((m, s.size, n, n), complex)
    for i, b in enumerate(p["branches"]):
        v = values[:, i, None]
        if b["kind"] == "R":
            y = 1 / v + 0 * s
        elif b["kind"] == "L":
            y = 1 / (b["loss"] + s * v)
        elif b["kind"] == "C":
            y = 1 / (b["loss"] + 1 / (s * v))
        else:
            z = np.asarray(b["z"])
            y = np.broadcast_to(1 / (z[:, 0] + 1j * z[:, 1]), (m, s.size))
        a, c = b["from"] - 1, b["to"] - 1
        for u, w in ((a, c), (c, a)):
            if u >= 0:
                Y[:, :, u, u] += y
                if w >= 0:
                    Y[:, :, u, w] -= y
    Y[:, :, 0, 0] += 1 / p["source"]
    I = np.zeros((m, s.size, n, 1), complex)
    I[:, :, 0, 0] = 1 / p["source"]
    V = np.linalg.solve(Y, I)[..., 0]
    total = 0
    for (a, c), press in zip(p["outputs"], p["press"]):
        k = np.asarray(press)
        h = (V[:, :, a - 1] if a else 0) - (V[:, :, c - 1] if c else 0)
        total = total + h * (k[:, 0] + 1j * k[:, 1])
    return 20 * np.log10(np.abs(total) / 20e-6)


p = json.load(sys.stdin)
values = np.asarray(p["values"])
if "--time" in sys.argv:
    t0 = time.perf_counter()
    for at in range(0, len(values), 100):  # more at once is slower: it leaves the cache
        levels(p, values[at:at + 100])
    print(time.perf_counter() - t0)
else:
    json.dump(levels(p, values).tolist(), sys.stdout)
