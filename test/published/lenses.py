"""Writes lenses.json: Box epsilon, moderated t, rare tails, gate, peers, by a second implementation.

Run: python3 test/published/lenses.py   (needs mpmath; made with mpmath 1.3.0)

Written from the formulas alone, in 50 digits: plain double loops, p-values from mpmath's
incomplete beta function, beta-binomial tails as plain sums of masses, roots by bisection.
"""

import json
import os

import mpmath as mp

mp.mp.dps = 50

BASELINE = [
    [52, 18, 12, 9, 6, 3],
    [47, 22, 13, 8, 7, 3],
    [55, 17, 10, 10, 5, 3],
    [44, 21, 15, 9, 6, 5],
    [50, 20, 11, 8, 8, 3],
    [61, 14, 9, 8, 5, 3],
    [46, 23, 12, 11, 5, 3],
    [49, 19, 14, 9, 6, 3],
]
UNEQUAL = [
    [310, 220, 140, 80, 9],
    [150, 130, 60, 31, 4],
    [620, 380, 330, 150, 21],
    [280, 260, 110, 90, 3],
    [450, 210, 205, 77, 12],
    [90, 85, 40, 22, 1],
    [505, 333, 260, 101, 15],
    [260, 205, 99, 70, 7],
    [333, 280, 150, 64, 5],
]
EQUAL = [
    [180, 120, 60, 32, 8],
    [201, 99, 66, 30, 4],
    [170, 133, 55, 36, 6],
    [190, 118, 58, 29, 5],
    [155, 140, 70, 30, 5],
    [188, 110, 64, 31, 7],
    [176, 125, 61, 33, 5],
    [199, 108, 57, 28, 8],
]
NOW = [[52, 18, 30], [47, 22, 31], [55, 17, 28], [40, 35, 25]]
PEERS_PAST = [
    [[60, 20, 20], [30, 40, 30], [50, 30, 20], [45, 25, 30]],
    [[110, 50, 40], [55, 85, 60], [28, 12, 10], [50, 20, 30]],
]
HISTORY = [
    [[70, 20, 30], [30, 52, 38], [66, 32, 22], [40, 30, 35]],
    [[150, 50, 60], [44, 66, 40], [50, 40, 20], [0, 0, 0]],
    [[48, 26, 20], [70, 60, 70], [90, 30, 40], [60, 20, 50]],
    [[90, 20, 44], [22, 40, 30], [44, 36, 12], [70, 44, 40]],
]


def text(value):
    return mp.nstr(value, 30, min_fixed=0, max_fixed=0)


def shares(row):
    return [mp.mpf(x) / sum(row) for x in row]


def weight(n, rho):
    return mp.mpf(n) / (1 + (n - 1) * rho)


def xlog(a, b):
    return a * mp.log(a / b) if a > 0 else mp.mpf(0)


def f_log_sf(f, df1, df2):
    y = mp.mpf(df2) / (df2 + df1 * f)
    return mp.log(mp.betainc(mp.mpf(df2) / 2, mp.mpf(df1) / 2, 0, y, regularized=True))


def box(windows, rho):
    k, n = len(windows[0]), len(windows) - 1
    w = [weight(sum(row), rho) for row in windows]
    s = [
        [mp.sqrt((x + mp.mpf("0.375")) / (sum(row) + mp.mpf("0.375") * k)) for x in row]
        for row in windows
    ]
    m = [sum(wb * row[i] for wb, row in zip(w, s)) / sum(w) for i in range(k)]
    z = [[2 * mp.sqrt(wb) * (row[i] - m[i]) for i in range(k)] for wb, row in zip(w, s)]
    cov = [[sum(row[i] * row[j] for row in z) / n for j in range(k)] for i in range(k)]
    tr = sum(cov[i][i] for i in range(k))
    tr2 = sum(cov[i][j] ** 2 for i in range(k) for j in range(k))
    t2 = mp.mpf(n * n) / ((n - 1) * (n + 2)) * (tr2 - tr * tr / n)
    t1 = tr * tr - 2 * t2 / n
    return {"epsilon": text(t1 / (t2 * (k - 1))), "trace": text(tr), "traceOfSquare": text(tr2)}


def inverse_trigamma(y):
    low, high = mp.mpf(10) ** -10, mp.mpf(10) ** 10
    for _ in range(300):
        middle = mp.sqrt(low * high)
        low, high = (middle, high) if mp.psi(1, middle) > y else (low, middle)
    return mp.sqrt(low * high)


def squeeze(u, d):
    e = [mp.log(x) - mp.psi(0, mp.mpf(d) / 2) + mp.log(mp.mpf(d) / 2) for x in u]
    mean = sum(e) / len(e)
    v = sum((x - mean) ** 2 for x in e) / (len(e) - 1) - mp.psi(1, mp.mpf(d) / 2)
    if v <= mp.mpf("1e-6"):
        return mp.inf, mp.exp(mean), [mp.exp(mean)] * len(u)
    half = inverse_trigamma(v)
    s0 = mp.exp(mean + mp.psi(0, half) - mp.log(half))
    return 2 * half, s0, [(2 * half * s0 + d * x) / (2 * half + d) for x in u]


def stable(c, n):
    return mp.sqrt((c + mp.mpf("0.375")) / (n + mp.mpf("0.75")))


def moderated(windows, now, rho, equal):
    """The two forms as written in the specification, each by its own formulas."""
    n_now, d = sum(now), len(windows) - 1
    w = [weight(sum(row), rho) for row in windows]
    p = [sum(wb * shares(row)[i] for wb, row in zip(w, windows)) / sum(w) for i in range(len(now))]
    kept = [i for i in range(len(now)) if n_now * p[i] >= 25]
    found = []
    for i in kept:
        f = [stable(row[i], sum(row)) for row in windows]
        if equal:
            m = sum(f) / len(f)
            v = (1 - p[i]) / (4 * n_now)
            u = sum((x - m) ** 2 for x in f) / d / v
            scale = v * (1 + mp.mpf(1) / len(f))
        else:
            m = sum(wb * x for wb, x in zip(w, f)) / sum(w)
            z = [(x - m) / mp.sqrt((1 - p[i]) / (4 * wb)) for wb, x in zip(w, f)]
            u = sum(x * x for x in z) / d
            scale = (1 - p[i]) / 4 * (1 / weight(n_now, rho) + 1 / sum(w))
        found.append((i, m, u, scale))
    d0, s0, squeezed = squeeze([u for _, _, u, _ in found], d)
    bins = []
    for (i, m, u, scale), shrunk in zip(found, squeezed):
        t = (stable(now[i], n_now) - m) / mp.sqrt(max(mp.mpf(1), shrunk) * scale)
        # two-sided t is F on 1 and df
        log_p = f_log_sf(t * t, 1, d0 + d) if d0 != mp.inf else mp.log(mp.erfc(abs(t) / mp.sqrt(2)))
        bins.append({"index": i, "ratio": text(u), "t": text(t), "logP": text(log_p)})
    return {
        "windows": windows,
        "now": now,
        "rho": rho,
        "priorDf": text(d0) if d0 != mp.inf else "inf",
        "priorVariance": text(s0),
        "bins": bins,
    }


def rare(count, events, share, w, rho):
    share, w, rho = mp.mpf(share), mp.mpf(w), mp.mpf(rho)
    mu = (w * share + mp.mpf("0.5")) / (w + 1)
    rt = rho + (1 - rho) / (w + 1)
    a = (1 - rt) / rt

    def mass(y):
        return mp.binomial(events, y) * mp.beta(y + a * mu, events - y + a * (1 - mu)) / mp.beta(
            a * mu, a * (1 - mu)
        )

    upper = mp.log(sum(mass(y) for y in range(count, events + 1)))
    lower = mp.log(sum(mass(y) for y in range(count + 1)))
    return {"share": text(mu), "correlation": text(rt), "upper": text(upper), "lower": text(lower)}


def pair_g(q, w, p, v):
    joint = [(w * a + v * b) / (w + v) for a, b in zip(q, p)]
    return 2 * sum(w * xlog(a, j) + v * xlog(b, j) for a, b, j in zip(q, p, joint))


def base_of(past):
    k, g = len(past[0][0]), [sum(sum(row) for row in window) for window in past]
    bases = []
    for s in range(len(past[0])):
        m = sum(sum(window[s]) for window in past)
        raw = [
            sum(gb * shares(window[s])[i] for gb, window in zip(g, past)) / sum(g)
            for i in range(k)
        ]
        bases.append([(m * x + mp.mpf("0.5")) / (m + mp.mpf("0.5") * k) for x in raw])
    return g, bases


def own_weight(past, g, s, rho):
    return sum(g) ** 2 / sum(gb**2 / weight(sum(row[s]), rho) for gb, row in zip(g, past))


def carried(now, past, rho, j):
    k, half = len(now[0]), mp.mpf("0.5")
    g, bases = base_of(past)
    others = [s for s in range(len(now)) if s != j and sum(now[s]) > 0]
    w = {s: weight(sum(now[s]), rho) for s in others}
    seen = [sum(w[s] * shares(now[s])[i] for s in others) for i in range(k)]
    due = [sum(w[s] * bases[s][i] for s in others) for i in range(k)]
    whole = sum(w.values())
    mix = [(x + half) / (whole + half * k) for x in seen]
    raw = [bases[j][i] * (seen[i] + half) / (due[i] + half) for i in range(k)]
    r = [x / sum(raw) for x in raw]
    c = max(mp.mpf("0.2"), (sum(a / b for a, b in zip(r, mix)) - 1) / (k - 1))
    open_ = sum(w[s] ** 2 / own_weight(past, g, s, rho) for s in others) / whole**2
    return r, c, 1 / (1 / own_weight(past, g, j, rho) + c * (1 / whole + open_))


def test_of(q_row, rho, p, v, df2):
    w, k = weight(sum(q_row), rho), len(q_row)
    g = pair_g(shares(q_row), w, p, v)
    return {"weightNow": text(w), "weight": text(v), "g": text(g)} | {
        "logP": text(f_log_sf(g / (k - 1), k - 1, df2)),
        "shares": [text(x) for x in p],
    }


def bisect(total, target):
    low, high = mp.mpf(0), mp.mpf("0.999")
    for _ in range(120):
        middle = (low + high) / 2
        low, high = (middle, high) if total(middle) > target else (low, middle)
    return (low + high) / 2


def rho_carried(history, past):
    k = len(history[0][0])

    def total(rho):
        value = mp.mpf(0)
        for now in history:
            for j, row in enumerate(now):
                if sum(row) > 0:
                    r, _, v = carried(now, past, rho, j)
                    value += pair_g(shares(row), weight(sum(row), rho), r, v)
        return value

    strands = sum(1 for now in history for row in now if sum(row) > 0)
    return bisect(total, strands * (k - 1))


def peers():
    rho, j = mp.mpf("0.001"), 3
    w = [weight(sum(row), rho) for row in NOW]
    v = sum(w[:3])
    pool = [sum(w[s] * shares(NOW[s])[i] for s in range(3)) / v for i in range(3)]
    r, c, carried_weight = carried(NOW, PEERS_PAST, rho, j)
    return {
        "now": NOW,
        "past": PEERS_PAST,
        "history": HISTORY,
        "pooled": test_of(NOW[j], rho, pool, v, 96),
        "carried": test_of(NOW[j], rho, r, carried_weight, 96) | {"spread": text(c)},
        "rho": text(rho_carried(HISTORY, PEERS_PAST)),
    }


RARE = [
    (4, 100, 1 / 1200, 2003.338898163606, 0.002),
    (12, 200, 0.0, 48000.0, 0.0),
    (0, 400, 0.05, 9000.0, 0.001),
    (3, 60, 0.0, 1440.0, 0.0),
    (60, 400, 0.01, 30000.0, 0.0005),
    (200, 200, 0.001, 5000.0, 0.01),
    (7, 50, 0.1, 8.0, 0.3),
    (3, 100, 0.0, 2003.338898163606, 0.002),
    (9, 100, 0.03, 1e9, 0.0),
    (60, 20000, 0.001, 2e7, 0.0),
]
GATE = [(60, 20000, 480, 480000), (12, 200, 0, 48000)]


def wilson(q, n, z):
    a = z * z / n
    root = z * mp.sqrt(q * (1 - q) / n + a / (4 * n))
    return (q + a / 2 - root) / (1 + a), (q + a / 2 + root) / (1 + a)


def gate(y, n, x, m):
    """Wilson's lower limit of y/n and the one-sided bound of its rise over x/m, at z(.95)."""
    z = mp.sqrt(2) * mp.erfinv(mp.mpf(9) / 10)
    q, p = mp.mpf(y) / n, mp.mpf(x) / m
    low, high = wilson(q, n, z)[0], wilson(p, m, z)[1]
    bound = q - p - mp.sqrt((q - low) ** 2 + (high - p) ** 2)
    return {"count": y, "events": n, "lower": text(low), "bound": text(bound)}


def main():
    document = {
        "madeWith": f"mpmath {mp.__version__}, test/published/lenses.py",
        "box": [
            {"windows": windows, "rho": rho} | box(windows, mp.mpf(rho))
            for windows, rho in ((BASELINE, 0.0), (UNEQUAL, 0.0), (UNEQUAL, 0.004))
        ],
        "moderated": {
            "equal": moderated(EQUAL, [150, 135, 80, 30, 5], 0.0, True),
            "unequal": moderated(UNEQUAL, [270, 300, 160, 60, 10], 0.0005, False),
        },
        "rare": [
            {"count": c, "events": n, "of": p, "weight": w, "rho": rho} | rare(c, n, p, w, rho)
            for c, n, p, w, rho in RARE
        ],
        "gate": [gate(*row) for row in GATE],
        "peers": peers(),
    }
    path = os.path.join(os.path.dirname(os.path.abspath(__file__)), "lenses.json")
    with open(path, "w", encoding="utf-8") as out:
        json.dump(document, out)
        out.write("\n")
    print(document["moderated"]["equal"]["priorDf"], document["moderated"]["unequal"]["priorDf"])
    print(document["peers"]["rho"], [row["epsilon"] for row in document["box"]])


if __name__ == "__main__":
    main()
