"""The sweep of the 38-branch three-way by numpy's batched LAPACK solve, timed.

    batched.py [SECONDS]               default 2 seconds a case

It is the yardstick for BenchmarkSweep of sim/circuit: the same network, the same 500 frequencies, every branch one
admittance, the nodal matrices of all frequencies assembled in whole-array operations and solved in one call. Before
timing, its gains are compared with those of reference.py.
"""

import json
import os
import sys
import time

sys.dont_write_bytecode = True

import numpy as np

import reference


class Batched:
    def __init__(self, network, frequency_hz):
        self.s = (2j * np.pi * frequency_hz)[:, None]
        self.source = network["source_ohm"]
        branches = network["branches"]
        self.columns = {k: [i for i, b in enumerate(branches) if b["kind"] == k] for k in ("R", "L", "C", "driver")}
        self.value = {
            k: (np.array([branches[i]["value"] for i in at]), np.array([branches[i].get("loss", 0.0) for i in at]))
            for k, at in self.columns.items()
            if k != "driver"
        }
        self.drivers = [branches[i]["driver"] for i in self.columns["driver"]]
        n = network["nodes"]
        incidence = np.zeros((n, len(branches)))
        for i, b in enumerate(branches):
            incidence[b["from"], i] += 1
            incidence[b["to"], i] -= 1
        # Without a source resistance the amplifier's node is known, with one it is an unknown.
        self.first = 2 if self.source == 0 else 1
        self.unknown = incidence[self.first :]
        self.amp = incidence[1]
        # Column i*n+j of the stamp says what each admittance adds to matrix element (i, j): all 500 matrices are one
        # matrix product.
        self.stamp = np.einsum("ib,jb->bij", self.unknown, self.unknown).reshape(len(branches), -1).astype(complex)
        self.reach = -(self.amp * self.unknown).T.astype(complex)
        self.outputs = [(o["from"], o["to"]) for o in network["outputs"]]

    def admittances(self):
        s = self.s
        y = np.empty((len(s), self.amp.size), dtype=complex)
        value, _ = self.value["R"]
        y[:, self.columns["R"]] = 1 / value
        value, loss = self.value["L"]
        y[:, self.columns["L"]] = 1 / (loss + s * value)
        value, loss = self.value["C"]
        y[:, self.columns["C"]] = s * value / (1 + s * value * loss)
        s = s[:, 0]
        for column, d in zip(self.columns["driver"], self.drivers):
            z = d["re"] + s * d["le"] + 1 / (1 / d["res"] + 1 / (s * d["lces"]) + s * d["cmes"])
            if "l2" in d:
                z += d["r2"] * s * d["l2"] / (d["r2"] + s * d["l2"])
            y[:, column] = 1 / z
        return y

    def solve(self):
        y = self.admittances()
        n = len(self.unknown)
        matrix = (y @ self.stamp).reshape(-1, n, n)
        if self.source == 0:
            right = y @ self.reach
        else:
            matrix[:, 0, 0] += 1 / self.source
            right = np.zeros(matrix.shape[:2], dtype=complex)
            right[:, 0] = 1 / self.source
        return np.linalg.solve(matrix, right[:, :, None])[:, :, 0]

    def gains(self):
        v = self.solve()
        return np.stack([v[:, a - self.first] for a, _ in self.outputs], axis=1)


def main():
    seconds = float(sys.argv[1]) if len(sys.argv) > 1 else 2.0
    with open(os.path.join(os.path.dirname(os.path.abspath(__file__)), "three-way-38.json"), encoding="utf-8") as f:
        network = json.load(f)
    frequency_hz = np.geomspace(20, 20000, 500)
    for source in (0.0, 0.05):
        network["source_ohm"] = source
        network["frequency_hz"] = frequency_hz.tolist()
        batched = Batched(network, frequency_hz)
        want = np.array(reference.answer(network)["gain"]) @ [1, 1j]
        worst = np.abs(batched.gains().T / want - 1).max()
        if not worst < 1e-9:
            sys.exit(f"batched.py: gains differ from those of reference.py by {worst:.1e}")
        taken = []
        end = time.perf_counter() + seconds
        while time.perf_counter() < end:
            begin = time.perf_counter()
            batched.solve()
            taken.append(time.perf_counter() - begin)
        middle, least = np.median(taken), min(taken)
        print(
            f"source {source:4.2f} ohm, {len(batched.unknown)} unknowns: {middle * 1e6:.0f} us a sweep"
            f" (least {least * 1e6:.0f}), {middle * 1e6 / len(frequency_hz):.2f} us a frequency;"
            f" {len(taken)} sweeps, gains within {worst:.0e} of reference.py"
        )


if __name__ == "__main__":
    main()
