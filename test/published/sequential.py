"""Writes sequential.json: creep, wander, absence and the end rule, by a second implementation.

Run: python3 test/published/sequential.py   (needs mpmath and scipy; made with mpmath 1.3.0 and
scipy 1.17.1, 50 digits). Written from the formulas alone: log-gammas for the beta-binomial, R_j
itself and not its logarithm, the incomplete beta function for tails, scipy for the F and
chi-squared quantiles of the trimming, which only decide what is kept.
"""

import json
import os
import random

import mpmath
from mpmath import mpf
from scipy.stats import chi2, f as f_law

mpmath.mp.dps = 50


def log_beta(a, b):
    return mpmath.loggamma(a) + mpmath.loggamma(b) - mpmath.loggamma(a + b)


def log_ratio(y, n, p0, p1, rho):
    y, n, p0, p1, rho = map(mpf, (y, n, p0, p1, rho))
    if rho == 0:
        return y * mpmath.log(p1 / p0) + (n - y) * mpmath.log((1 - p1) / (1 - p0))
    a = (1 - rho) / rho

    def law(p):
        return log_beta(y + a * p, n - y + a * (1 - p)) - log_beta(a * p, a * (1 - p))

    return law(p1) - law(p0)


def ratios():
    rows = []
    for n in (1, 20, 500, 20_000, 1_000_000):
        for p0, p1 in ((0.1075, 0.1475), (0.5, 0.34), (1e-6, 0.010001), (0.985, 0.9925)):
            for part in (0.0, 0.01, 0.12, 0.5, 1.0):
                y = round(n * part)
                for rho in (0.0, 1e-12, 1e-7, 1e-4, 0.002, 0.05, 0.5):
                    rows.append([y, n, p0, p1, rho, float(log_ratio(y, n, p0, p1, rho))])
    return rows


def guard(p, weight, z, least, wander):
    terms = [mpf(least)]
    if weight is not None:
        terms.append(mpf(z) * mpmath.sqrt(p * (1 - p) / mpf(weight)))
    if wander is not None:
        terms.append(5 * mpmath.sqrt(max(mpf(0), mpf(wander[0]) - mpf(wander[1])) * p * (1 - p)))
    return max(terms)


def alternatives(shares, weight, z, least, wander):
    found = []
    for k, share in enumerate(shares):
        p = mpf(share)
        g = guard(p, weight, z, least[k], wander)
        for size in (0.01, 0.02, 0.04, 0.08, 0.16):
            if p + g <= mpf(0.999):
                p0 = max(mpf(1e-6), p + g)
                found.append([k, 1, size, p0, min(p0 + mpf(size), (1 + p0) / 2)])
        for size in (0.01, 0.02, 0.04, 0.08, 0.16):
            if p - g >= mpf(1e-6) and size < 0.95 * share:
                p0 = min(mpf(0.999), p - g)
                found.append([k, -1, size, p0, max(p0 - mpf(size), p0 / 50)])
    return found


def path(rng, shares, after, windows, rho, **anchor):
    ways = alternatives(shares, anchor["weight"], anchor["z"], anchor["least"], anchor["wander"])
    r = [mpf(0)] * len(ways)
    tables, logs, leading = [], [], []
    for t in range(windows):
        now = shares if t < windows // 2 else after
        size = rng.choice([0, 40, 500, 900]) if t > 0 else 500
        counts = [0] * len(shares)
        for k in rng.choices(range(len(shares)), weights=now, k=size):
            counts[k] += 1
        tables.append(counts)
        if size > 0:
            for j, (k, _, _, p0, p1) in enumerate(ways):
                step = max(mpf(-60), min(mpf(60), log_ratio(counts[k], size, p0, p1, rho)))
                r[j] = (1 + r[j]) * mpmath.exp(step)
        logs.append(float(mpmath.log(sum(r) / len(r))))
        leading.append(max(range(len(r)), key=lambda j: r[j]))
    plain = [[k, sign, size, float(p0), float(p1)] for k, sign, size, p0, p1 in ways]
    known = {"shares": shares, "rho": rho, **anchor, "alternatives": plain}
    return {**known, "counts": tables, "logD": logs, "leading": leading}


def xlog(x, m):
    return x * mpmath.log(x / m) if x > 0 else mpf(0)


def pair_g(q, w, p, big_w):
    joint = p if big_w is None else [(w * a + big_w * b) / (w + big_w) for a, b in zip(q, p)]
    total = sum(w * xlog(a, j) for a, j in zip(q, joint))
    if big_w is not None:
        total += sum(big_w * xlog(b, j) for b, j in zip(p, joint))
    return 2 * total


def f_log_sf(f, d1, d2):
    d1, d2 = mpf(d1), mpf(d2)
    return mpmath.log(mpmath.betainc(d2 / 2, d1 / 2, 0, d2 / (d2 + d1 * f), regularized=True))


def multi_window(windows, shares, weight, rho, df2):
    tests = []
    p = [mpf(x) for x in shares]
    for length in (4, 16, 64):
        sw, q = mpf(0), [mpf(0)] * len(shares)
        for row in windows[-length:]:
            n = mpf(sum(row))
            if n == 0:
                continue
            w = n / (1 + (n - 1) * mpf(rho))
            sw += w
            q = [a + w * x / n for a, x in zip(q, row)]
        g = pair_g([a / sw for a in q], sw, p, mpf(weight))
        d1 = len(shares) - 1
        tests.append([length, float(sw), float(g), float(f_log_sf(g / d1, d1, df2))])
    return {"shares": shares, "weight": weight, "rho": rho, "df2": df2, "windows": windows,
            "tests": tests}


def table_g(rows):
    columns = [mpf(sum(row[k] for row in rows)) for k in range(len(rows[0]))]
    total = sum(columns)
    return 2 * sum(xlog(mpf(x), sum(row) * c / total) for row in rows for x, c in zip(row, columns))


def n0(sizes):
    total = mpf(sum(sizes))
    return (total - sum(mpf(n) ** 2 for n in sizes) / total) / (len(sizes) - 1)


def wander(windows):
    filled = [row for row in windows if sum(row) > 0]
    b, k1 = len(filled), len(windows[0]) - 1
    phi_b = table_g(filled) / ((b - 1) * k1)
    pairs = [(x, y) for x, y in zip(windows, windows[1:]) if sum(x) > 0 and sum(y) > 0]
    parts = [(table_g([x, y]) / k1, n0([sum(x), sum(y)])) for x, y in pairs]
    h = len(parts)
    bound = mpf(f_law.isf(0.05 / h, k1, 0.6 * h * k1))
    ordered = sorted(g for g, _ in parts)
    middle = (ordered[(h - 1) // 2] + ordered[h // 2]) / 2
    phi_s = middle / mpf(chi2.median(k1) / k1)
    kept = parts
    for _ in range(3):
        kept = [part for part in parts if part[0] <= bound * phi_s]
        phi_s = sum(g for g, _ in kept) / len(kept)
    size_b, size_s = n0([sum(x) for x in filled]), sum(n for _, n in kept) / len(kept)
    v = phi_s / (1 + (phi_b - 1) * min(mpf(1), (size_s - 1) / (size_b - 1)))
    return {
        "windows": windows,
        "v": float(v),
        "phiBaseline": float(phi_b),
        "phiSuccessive": float(phi_s),
        "rhoBaseline": float((phi_b - 1) / (size_b - 1)),
        "rhoSuccessive": float((phi_s - 1) / (size_s - 1)),
        "dropped": h - len(kept),
    }


def series(rng, sizes, swing, step):
    rows, level = [], 0.0
    for n in sizes:
        level = 0.9 * level + rng.gauss(0, swing)
        shares = [0.4 * 2.718281828 ** level, 0.3, 0.2, 0.1]
        if step and len(rows) > len(sizes) // 2:
            shares = shares[::-1]
        row = [0] * 4
        for k in rng.choices(range(4), weights=shares, k=n):
            row[k] += 1
        rows.append(row)
    return rows


def t_upper(alpha, df):
    def gap(t):
        return mpmath.betainc(mpf(df) / 2, mpf(1) / 2, 0, df / (df + t * t), regularized=True) / 2

    return mpmath.findroot(lambda t: mpmath.log(gap(t)) - mpmath.log(mpf(alpha)), mpf(3))


def bounds(raise_, since, weight, df2):
    (q0, w0, p0), (q, sw, p) = ([mpf(x) for x in side] for side in (raise_, since))
    first = q0 - p0
    left = (q - p) * (1 if first >= 0 else -1)
    t = t_upper("0.001", df2)
    inverse = mpf(0) if weight is None else 1 / mpf(weight)
    joint = p if weight is None else (sw * q + weight * p) / (sw + weight)
    joint0 = p0 if weight is None else (w0 * q0 + weight * p0) / (w0 + weight)
    s, s0 = joint * (1 - joint), joint0 * (1 - joint0)
    remainder = left + t * mpmath.sqrt(s / sw + s0 / (9 * w0) + 4 * s * inverse / 9)
    distance = left + t * mpmath.sqrt(s / sw + s * inverse)
    return {"raise": raise_, "since": since, "weight": weight, "df2": df2, "t": float(t),
            "remainder": float(remainder), "distance": float(distance),
            "allowed": float(abs(first) / 3)}


def evidences():
    rows = []
    for k in (1e-9, 0.03, 1.9113300492610836, 400.0, 1e12):
        for means in ([4, 10, 10, 4], [0, 0.001, 3], [250.5] * 12):
            total = sum(mpf(k) * mpmath.log(1 + mpf(m) / mpf(k)) for m in means)
            rows.append([k, means, float(total)])
    return rows


def main():
    rng = random.Random(5)
    declared = {"weight": None, "z": 2, "least": [0.005, 0.01, 0.01, 0.0], "wander": None}
    sampled = {"weight": 555.1, "z": 1.5, "least": [0.01] * 5, "wander": None}
    restless = {"weight": 9000, "z": 1.5, "least": [0.01] * 3, "wander": [0.0034, -0.0002]}
    even = series(rng, [300] * 40, 0.0, False)
    uneven = [rng.choice([60, 200, 1500]) for _ in range(40)]
    many = series(rng, [rng.choice([0, 90, 400]) for _ in range(70)], 0.05, True)
    document = {
        "madeWith": f"mpmath {mpmath.__version__}, test/published/sequential.py",
        "ratios": ratios(),
        "paths": [
            path(rng, [0.62, 0.25, 0.129, 0.001], [0.6, 0.25, 0.129, 0.021], 24, 0.0, **declared),
            path(rng, [0.4, 0.3, 0.2, 0.06, 0.04], [0.3, 0.3, 0.2, 0.1, 0.1], 24, 0.002, **sampled),
            path(rng, [0.9, 0.07, 0.03], [0.6, 0.3, 0.1], 12, 0.05, **restless),
        ],
        "multiWindow": multi_window(many, [0.4, 0.3, 0.2, 0.1], 4100.25, 0.004, 188),
        "wander": [
            wander(even),
            wander(series(rng, [300] * 40, 0.25, False)),
            wander(series(rng, uneven, 0.25, True)),
            wander(series(rng, uneven[:20] + [0] + uneven[20:], 0.0, True)),
        ],
        "evidences": evidences(),
        "bounds": [
            bounds([0.207, 2000, 0.107], [0.11, 6000, 0.107], 48000, 253),
            bounds([0.207, 2000, 0.107], [0.13, 6000, 0.107], 48000, 253),
            bounds([0.2, 61.5, 0.55], [0.6, 12.25, 0.5], 900.5, 21),
            bounds([0.03, 400, 0.01], [0.0, 1200, 0.01], None, 60.5),
        ],
    }
    path_out = os.path.join(os.path.dirname(os.path.abspath(__file__)), "sequential.json")
    with open(path_out, "w", encoding="utf-8") as out:
        json.dump(document, out)
        out.write("\n")
    print(len(document["ratios"]), [(w["v"], w["dropped"]) for w in document["wander"]])


if __name__ == "__main__":
    main()
