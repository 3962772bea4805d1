"""Write the driver tables of the tuning problems: python3 tables.py, in this folder.

All drivers are invented. A table is a circuit's impedance or a model's pressure, with half a per cent of noise and a few
ripples such as a cabinet makes, from a fixed seed.
"""
import numpy as np

F = np.geomspace(20, 20000, 140)
S = 2j * np.pi * F
RNG = np.random.default_rng(6)


def impedance(re, le, fs, qms, qes, r2=0.0, l2=0.0):
    res, ces, les = re * qms / qes, qes / (2 * np.pi * fs * re), re / (2 * np.pi * fs * qes)
    z = re + S * le + 1 / (1 / res + S * ces + 1 / (S * les))
    if r2:
        z = z + r2 * S * l2 / (r2 + S * l2)
    return z * (1 + 0.005 * RNG.standard_normal(F.size))


def pressure(level, fs, q, corner=None, ripple=0.6, flight=0.0, bump=None):
    s = S / (2 * np.pi * fs)
    p = 10 ** (level / 20) * s * s / (s * s + s / q + 1)
    if corner:
        p = p / (1 + S / (2 * np.pi * corner)) ** 2
    if bump:
        f0, qb, gain = bump
        t = S / (2 * np.pi * f0)
        p = p * (t * t + t * gain / qb + 1) / (t * t + t / qb + 1)
    ripples = sum(RNG.uniform(-1, 1) * np.cos(2 * np.pi * k * np.log2(F / 100) / 3 + RNG.uniform(0, 6)) for k in (1, 2, 3))
    return p * 10 ** (ripple * ripples / 20 / 1.5) * np.exp(-S * flight)


def write(name, what, values, level):
    with open(name, "w", encoding="ascii") as out:
        out.write(f"* invented: {what}\n")
        for f, v in zip(F, values):
            first = 20 * np.log10(abs(v)) if level else abs(v)
            out.write(f"{f:.3f}\t{first:.4f}\t{np.degrees(np.angle(v)):.3f}\n")


write("fairway-w.zma", "ohm, woofer", impedance(5.7, 0.35e-3, 44, 4.5, 0.45, 4, 0.3e-3), False)
write("fairway-w.frd", "dB SPL, woofer", pressure(87, 55, 0.75, 6500, flight=2.95e-3, bump=(4200, 3.0, 1.6)), True)
write("fairway-t.zma", "ohm, tweeter", impedance(5.2, 0.03e-3, 820, 2.8, 1.1), False)
write("fairway-t.frd", "dB SPL, tweeter", pressure(91, 900, 0.8, flight=2.915e-3), True)
write("beacon-w.frd", "dB SPL, woofer", pressure(86, 60, 0.7, 5000, ripple=1.0), True)
write("beacon-t.frd", "dB SPL, tweeter", pressure(90, 1000, 0.7, ripple=0.8), True)
write("lantern-w.zma", "ohm, woofer", impedance(5.5, 0.8e-3, 28, 5.0, 0.35, 8, 0.6e-3), False)
write("lantern-w.frd", "dB SPL, woofer", pressure(88, 38, 0.7, 2200), True)
write("lantern-m.zma", "ohm, midrange", impedance(5.9, 0.15e-3, 110, 3.5, 0.6), False)
write("lantern-m.frd", "dB SPL, midrange", pressure(90, 180, 0.8, 7000), True)
write("lantern-t.zma", "ohm, tweeter", impedance(5.3, 0.02e-3, 750, 2.5, 1.0), False)
write("lantern-t.frd", "dB SPL, tweeter", pressure(92, 850, 0.75), True)
