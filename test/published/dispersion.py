"""Writes dispersion.json: dispersion of made-up windows, by a second, slow implementation.

Run: python3 test/published/dispersion.py   (needs numpy and scipy; made with scipy 1.17.1)

Written from the formulas alone (deviance equation, weights and rho alternating twice; successive
pairs trimmed at an F bound three times), with bisection by scipy.optimize.brentq.
"""

import json
import os

import numpy as np
import scipy
from scipy.optimize import brentq
from scipy.special import xlogy
from scipy.stats import chi2, f


def deviance(x, p):
    return 2 * np.sum(xlogy(x, x / x.sum()) - xlogy(x, p))


def root(total, target):
    if total(0.0) <= target:
        return 0.0
    return brentq(lambda r: total(r) - target, 0.0, 0.999, xtol=1e-15, rtol=1e-14)


def windows_rho(groups):
    groups = [np.array(g, float) for g in groups]
    target = sum((len(g) - 1) * (g.shape[1] - 1) for g in groups)
    rho = 0.0
    for _ in range(2):
        parts = []
        for g in groups:
            n = g.sum(axis=1)
            w = n / (1 + (n - 1) * rho)
            p = (w[:, None] * g / n[:, None]).sum(axis=0) / w.sum()
            parts += [(m, deviance(x, p)) for m, x in zip(n, g)]
        rho = root(lambda r: sum(d / (1 + (m - 1) * r) for m, d in parts), target)
    return rho, target


def pair_deviance(before, after, rho):
    q, p = after / after.sum(), before / before.sum()
    w = after.sum() / (1 + (after.sum() - 1) * rho)
    v = before.sum() / (1 + (before.sum() - 1) * rho)
    joint = (w * q + v * p) / (w + v)
    return 2 * np.sum(w * (xlogy(q, q) - xlogy(q, joint)) + v * (xlogy(p, p) - xlogy(p, joint)))


def successive_rho(windows):
    pairs = [(np.array(a, float), np.array(b, float)) for a, b in zip(windows, windows[1:])]
    h, k1 = len(pairs), len(windows[0]) - 1
    bound = f.isf(0.05 / h, k1, 0.6 * h * k1)
    rho = root(lambda r: np.median([pair_deviance(*x, r) for x in pairs]), chi2.median(k1))
    dropped = 0
    for _ in range(3):
        kept = [x for x in pairs if pair_deviance(*x, rho) / k1 <= bound]
        dropped = h - len(kept)
        rho = root(lambda r: sum(pair_deviance(*x, r) for x in kept), len(kept) * k1)
    return rho, k1 * 2 * h * h / (3 * h - 1), dropped


def make(rng, sizes, shares, rho):
    a = (1 - rho) / rho * np.array(shares)
    return [rng.multinomial(n, rng.dirichlet(a)).tolist() for n in sizes]


def main():
    rng = np.random.default_rng(41)
    shares = [0.4, 0.3, 0.2, 0.1]
    unequal = make(rng, [60, 220, 900, 150, 400, 75, 1200, 310], shares, 0.03)
    slots = [
        make(rng, [200, 260, 90], shares, 0.02),
        make(rng, [500, 120], shares[::-1], 0.02),
        make(rng, [80, 80, 80, 80], [0.25] * 4, 0.02),
    ]
    series = make(rng, [300] * 9, shares, 0.01) + make(rng, [300] * 9, [0.1, 0.2, 0.3, 0.4], 0.01)
    uneven = make(rng, [100, 500] * 6, shares, 0.01) + make(rng, [400, 90] * 6, shares[::-1], 0.01)
    document = {"madeWith": f"scipy {scipy.__version__}, test/published/dispersion.py"}
    rho, df2 = windows_rho([unequal])
    document["unequal"] = {"windows": unequal, "rho": rho, "df2": df2}
    rho, df2 = windows_rho(slots)
    document["slots"] = {"slots": slots, "rho": rho, "df2": df2}
    for name, windows in (("successive", series), ("successiveUnequal", uneven)):
        rho, df2, dropped = successive_rho(windows)
        document[name] = {"windows": windows, "rho": rho, "df2": df2, "dropped": dropped}
    path = os.path.join(os.path.dirname(os.path.abspath(__file__)), "dispersion.json")
    with open(path, "w", encoding="utf-8") as out:
        json.dump(document, out)
        out.write("\n")
    print({name: case["rho"] for name, case in document.items() if name != "madeWith"})


if __name__ == "__main__":
    main()
