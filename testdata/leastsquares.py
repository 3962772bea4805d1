"""A second opinion on circuits fitted to impedance tables, for the tests of sim/driver.

    leastsquares.py [REQUEST.json]        answers in JSON on standard output; reads standard input without a file

Request
    {"hz": [...], "ohm": [...], "deg": [...], "vented": false}

Answer
    {"value": {"re": ..., "le": ..., "fs": ..., "qms": ..., "qes": ..., "fb": ..., "alpha": ..., "ql": ...},
     "sigma": {the same keys}, "rms": root of the mean square of ln(Z/Z table)}

The circuit is Re and Le in series with Res || Lces || Cmes, and beside these for a vented box Lceb, Cmep and Rel in
series (R. H. Small, J. Audio Eng. Soc. 20(5), 1972, and 21(5), 1973). The unknowns are the logarithms of the elements
themselves; scipy.optimize.least_squares does the work by its default trust-region method with differences for
derivatives. Standard deviations come from its Jacobian: s^2 (J'J)^-1, carried over to the trade's terms by differences.
"""

import json
import sys

import numpy as np
from scipy.optimize import least_squares


def circuit(x, s):
    e = np.exp(x)
    y = 1 / e[2] + 1 / (s * e[3]) + s * e[4]
    if len(e) > 5:
        y = y + 1 / (s * e[5] + 1 / (s * e[6]) + e[7])
    return e[0] + s * e[1] + 1 / y


def terms(x):
    e = np.exp(x)
    ws = 1 / np.sqrt(e[3] * e[4])
    qms = e[2] * np.sqrt(e[4] / e[3])
    t = {"re": e[0], "le": e[1], "fs": ws / (2 * np.pi), "qms": qms, "qes": qms * e[0] / e[2]}
    if len(e) > 5:
        wb = 1 / np.sqrt(e[5] * e[6])
        t.update(fb=wb / (2 * np.pi), alpha=e[3] / e[5], ql=wb * e[5] / e[7])
    return t


def main():
    request = json.load(open(sys.argv[1]) if len(sys.argv) > 1 else sys.stdin)
    s = 2j * np.pi * np.array(request["hz"])
    table = np.array(request["ohm"]) * np.exp(1j * np.radians(request["deg"]))

    def miss(x):
        ln = np.log(circuit(x, s) / table)
        return np.concatenate([ln.real, ln.imag])

    start = [6, 1e-3, 40, 50e-3, 400e-6]
    if request["vented"]:
        start += [40e-3, 600e-6, 1]
    best = least_squares(miss, np.log(start), xtol=1e-14, ftol=1e-14, gtol=1e-14, max_nfev=1000)
    n, p = len(best.fun), len(best.x)
    cov = 2 * best.cost / (n - p) * np.linalg.inv(best.jac.T @ best.jac)
    value = terms(best.x)
    sigma = {}
    for key in value:
        h = 1e-6
        g = np.array([(terms(best.x + h * u)[key] - terms(best.x - h * u)[key]) / (2 * h) for u in np.eye(p)])
        sigma[key] = float(np.sqrt(g @ cov @ g))
    json.dump({"value": value, "sigma": sigma, "rms": float(np.sqrt(2 * best.cost * 2 / n))}, sys.stdout)


main()
