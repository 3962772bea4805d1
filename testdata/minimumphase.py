#!/usr/bin/env python3
"""Minimum phase of magnitudes that are no rational functions, by two roads that share nothing with the program's.

Reads {"bumps": [[dB, Hz, octaves], ...], "order": n, "corner": Hz, "hz": [...]} from standard input. The magnitude is
the sum of the bumps, Gaussian in log frequency, and of a high-pass |H| = (1 + (corner/f)^2)^(-n/2), n any number.
Writes {"bode": [...], "hilbert": [...]}, in degrees at each of hz:
  bode     Bode's integral of the slope with the weight ln coth |u/2|, by scipy.integrate.quad. Both parts.
  hilbert  minus the Hilbert transform of ln|H| over linear frequency, by scipy.signal.hilbert. The bumps only, since
           they end within the band, and the high-pass does not.
"""

import json
import sys

import numpy as np
from scipy.integrate import quad
from scipy.signal import hilbert


def bumps(request, x):
    """ln|H| of the bumps at x = ln f."""
    total = 0 * x
    for db, at, octaves in request["bumps"] or []:
        total = total + db * np.log(10) / 20 * np.exp(-((x - np.log(at)) / (octaves * np.log(2))) ** 2 / 2)
    return total


def slope(request, x):
    """d ln|H| / dx of bumps and high-pass."""
    total = request["order"] / (1 + np.exp(2 * (x - np.log(request["corner"]))))
    for db, at, octaves in request["bumps"] or []:
        width = octaves * np.log(2)
        u = (x - np.log(at)) / width
        total -= db * np.log(10) / 20 * u / width * np.exp(-u * u / 2)
    return total


def by_bode(request, hz):
    x0 = np.log(hz)

    def integrand(u):
        return (slope(request, x0 + u) + slope(request, x0 - u)) * -np.log(np.tanh(u / 2))

    total = 0
    edges = [0, 1e-3, 0.03, 0.1, 0.3, 1, 2, 4, 8, 16, 40]
    for a, b in zip(edges, edges[1:]):
        total += quad(integrand, a, b, epsabs=1e-10, epsrel=1e-10, limit=200)[0]
    return np.degrees(total / np.pi)


def by_hilbert(request, step=0.5, size=1 << 21):
    """Returns frequencies and phases: ln|H| is even, at 0, step, ..., to half the size and back."""
    f = step * np.minimum(np.arange(size), size - np.arange(size))
    f[0] = step / 1000
    return f[: size // 2], -np.degrees(np.imag(hilbert(bumps(request, np.log(f)))))[: size // 2]


request = json.load(sys.stdin)
f, phase = by_hilbert(request)
json.dump({
    "bode": [by_bode(request, hz) for hz in request["hz"]],
    "hilbert": list(np.interp(request["hz"], f, phase)),
}, sys.stdout)
