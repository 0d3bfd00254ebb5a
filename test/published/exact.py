"""Writes exact.json: exact tests by listing every outcome in exact fractions, and high-precision
values of closed forms.

Run: python3 test/published/exact.py   (needs mpmath; made with mpmath 1.3.0)

Nothing here shares a formula with the program beyond the definitions: outcomes are listed one by
one, probabilities are fractions of whole numbers, and G2 is compared at 40 digits.
"""

import json
import os
from fractions import Fraction
from math import factorial, prod

import mpmath as mp

mp.mp.dps = 40


def compositions(total, caps):
    if len(caps) == 1:
        if total <= caps[0]:
            yield (total,)
        return
    for x in range(min(total, caps[0]) + 1):
        for rest in compositions(total - x, caps[1:]):
            yield (x,) + rest


def multinomial(counts, shares):
    n = sum(counts)
    shares = [Fraction(s) for s in shares]

    def probability(xs):
        ways = Fraction(factorial(n), prod(factorial(x) for x in xs))
        return ways * prod(p**x for x, p in zip(xs, shares))

    def pearson(xs):
        return sum((x - n * p) ** 2 / (n * p) for x, p in zip(xs, shares))

    def g2(xs):
        # 2 sum x log(x / (n p)) as the log of one fraction, so that ties are exact.
        return prod((Fraction(x) / (n * p)) ** x for x, p in zip(xs, shares))

    p_observed, x_observed, g_observed = probability(counts), pearson(counts), g2(counts)
    sums = {"probability": Fraction(0), "pearson": Fraction(0), "likelihood-ratio": Fraction(0)}
    for xs in compositions(n, [n] * len(counts)):
        p = probability(xs)
        if p <= p_observed:
            sums["probability"] += p
        if pearson(xs) >= x_observed:
            sums["pearson"] += p
        if g2(xs) >= g_observed:
            sums["likelihood-ratio"] += p
    return {k: text(v) for k, v in sums.items()}


def tables(rows, columns):
    if len(columns) == 1:
        yield (tuple(rows),)
        return
    for column in compositions(columns[0], rows):
        for rest in tables([r - x for r, x in zip(rows, column)], columns[1:]):
            yield (column,) + rest


def freeman_halton(table):
    rows = [sum(r) for r in table]
    columns = [sum(c) for c in zip(*table)]
    n = sum(rows)
    top = prod(map(factorial, rows)) * prod(map(factorial, columns))

    def probability(cells):
        return Fraction(top, factorial(n) * prod(factorial(x) for c in cells for x in c))

    observed = probability(list(zip(*table)))
    total, listed, p = Fraction(0), 0, Fraction(0)
    for cells in tables(rows, columns):
        each = probability(cells)
        total += each
        listed += 1
        if each <= observed:
            p += each
    assert total == 1
    return {"table": table, "tables": listed, "p": text(p), "logP": text_log(p)}


def text(fraction):
    return mp.nstr(mp.mpf(fraction.numerator) / fraction.denominator, 20)


def text_log(fraction):
    return mp.nstr(mp.log(mp.mpf(fraction.numerator) / fraction.denominator), 20)


def goodman(counts, level):
    n, k = sum(counts), len(counts)
    b = mp.findroot(lambda x: mp.gammainc(mp.mpf(1) / 2, x / 2, mp.inf, regularized=True)
                    - (1 - mp.mpf(level)) / k, 6)
    out = []
    for x in counts:
        p = mp.mpf(x) / n
        # roots of (p - t)^2 = b t (1 - t) / n
        roots = sorted(mp.polyroots([1 + b / n, -(2 * p + b / n), p * p], maxsteps=200))
        out.append([float(roots[0]), float(roots[1])])
    return {"counts": counts, "level": level, "limits": out}


def noncentral_tail(x, df, lam):
    x, df, lam = mp.mpf(x), mp.mpf(df), mp.mpf(lam)

    def term(j):
        weight = mp.exp(-lam / 2) * (lam / 2) ** j / mp.factorial(j)
        return weight * mp.gammainc(df / 2 + j, x / 2, mp.inf, regularized=True)

    return mp.fsum(term(j) for j in range(400))


def minimum_effect(statistic, df, events, w):
    lam = mp.mpf(events) * mp.mpf(w) ** 2
    p = noncentral_tail(statistic, df, lam)
    return {"statistic": statistic, "df": df, "events": events, "w": w,
            "p": mp.nstr(p, 20), "logP": mp.nstr(mp.log(p), 20)}


MULTINOMIALS = [
    ([7, 1, 2, 0], ["1/4", "1/4", "1/4", "1/4"]),
    ([0, 9, 3, 8], ["1/2", "1/5", "1/5", "1/10"]),
    ([12, 3, 5], ["3/10", "3/10", "2/5"]),
    ([25, 0, 0, 1], ["1/10", "2/5", "3/10", "1/5"]),
    ([14, 6], ["1/3", "2/3"]),
    ([1, 3, 0, 6, 2], ["1/16", "3/16", "3/16", "1/2", "1/16"]),
]
TABLES = [
    [[3, 1, 0], [1, 4, 2], [0, 2, 5]],
    [[9, 1, 0], [1, 10, 2], [0, 2, 11]],
    [[4, 1, 0, 3], [0, 5, 1, 2], [3, 3, 6, 0]],
    [[2, 1, 0, 1], [0, 3, 1, 2], [1, 1, 1, 0], [2, 0, 3, 1]],
    [[4, 4, 4], [4, 4, 4], [4, 4, 4]],
]


def main():
    out = {
        "multinomial": [{"counts": c, "shares": [float(Fraction(x)) for x in s],
                         "p": multinomial(c, s)} for c, s in MULTINOMIALS],
        "freemanHalton": [freeman_halton(t) for t in TABLES],
        "goodman": [goodman([56, 72, 73, 59, 62, 87, 58], 0.95), goodman([0, 3, 17], 0.99)],
        "minimumEffect": [minimum_effect(30.0, 5, 1000, 0.1), minimum_effect(250.0, 11, 2000, 0.2),
                          minimum_effect(4.0, 3, 500, 0.125), minimum_effect(20.0, 4, 800, 0.0)],
    }
    path = os.path.join(os.path.dirname(os.path.abspath(__file__)), "exact.json")
    with open(path, "w", encoding="utf-8") as file:
        json.dump(out, file, indent=1)
        file.write("\n")


main()
