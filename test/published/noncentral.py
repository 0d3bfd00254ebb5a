"""Writes noncentral.json: discrete and noncentral tails and their logs to 40 digits.

Run: python3 test/published/noncentral.py   (needs mpmath; made with mpmath 1.3.0,
in some minutes)

Beta-binomial, hypergeometric and binomial tails are plain sums of masses, each mass from exact
integers or from log-gammas of 60 digits. Noncentral tails are Poisson mixtures of central ones,
summed term by term over every j that counts for either tail (no peak is looked for): upper tails
upwards from the first, lower tails downwards from the last, so that only positive numbers are
added. Central tails to start from come from tails.py beside this file and, for the lower side,
from all-positive series. Required noncentralities are roots of those sums by secant steps.
Arguments are exact binary doubles, so a reader of the file tests at the very point computed here.
"""

import json
import os
from math import comb

import mpmath as mp

from tails import chi_squared_log_sf, f_log_sf, log_beta_lower

mp.mp.dps = 60


def text(value):
    return mp.nstr(value, 40, min_fixed=0, max_fixed=0)


def both_tails(masses, k):
    """log P(Y >= k) and log P(Y <= k) from a function giving the mass at every y."""
    upper = mp.fsum(m for y, m in masses if y >= k)
    lower = mp.fsum(m for y, m in masses if y <= k)
    return text(mp.log(upper)), text(mp.log(lower))


def beta_binomial_masses(n, alpha, beta):
    a, b = mp.mpf(alpha), mp.mpf(beta)
    start = mp.loggamma(b + n) - mp.loggamma(b) + mp.loggamma(a + b) - mp.loggamma(a + b + n)
    mass, masses = mp.exp(start), []
    for y in range(n + 1):
        masses.append((y, mass))
        mass *= (n - y) * (y + a) / ((y + 1) * (n - y - 1 + b)) if y < n else 0
    return masses


def beta_binomial_rows():
    cases = [
        (1, 0.3, 2.0, (0, 1)),
        (100, 0.43223, 398.9, (0, 1, 4, 20, 100)),
        (60, 1e-5, 3e-3, (1, 30, 60)),
        (500, 0.05, 0.02, (1, 250, 499)),
        (1000, 53.7, 445.3, (0, 1, 50, 107, 108, 200, 600, 1000)),
        (20000, 1e-3, 1e3, (1, 5, 400)),
        (20000, 53.7, 445.3, (0, 900, 2150, 2152, 5000, 16000)),
        (20000, 2.5, 0.5, (1, 100, 16000, 19999, 20000)),
        (30000, 4e7, 6e7, (9000, 11900, 12000, 12001, 12400, 18000, 26000, 30000)),
        (30000, 1e-6, 5.0, (1, 2, 29000)),
    ]
    rows = []
    for n, alpha, beta, ks in cases:
        masses = beta_binomial_masses(n, alpha, beta)
        for k in ks:
            upper, lower = both_tails(masses, k)
            rows.append({"n": n, "alpha": alpha, "beta": beta, "k": k, "sf": upper, "cdf": lower})
    return rows


def hypergeometric_rows():
    cases = [
        (8, 4, 4, (1, 3, 4)),
        (50, 5, 10, (1, 2, 5)),
        (1000, 300, 200, (1, 30, 60, 61, 90, 180, 200)),
        (5000, 4990, 4000, (3992, 3999, 4000)),
        (48000, 5136, 2000, (0, 150, 214, 215, 400, 1200, 2000)),
        (60000, 30000, 30000, (12000, 14900, 15000, 15001, 15300, 20000, 29000)),
    ]
    rows = []
    for total, marked, drawn, ks in cases:
        least, most = max(0, drawn + marked - total), min(drawn, marked)
        mass = mp.mpf(comb(marked, least) * comb(total - marked, drawn - least))
        mass /= comb(total, drawn)
        masses = []
        for y in range(least, most + 1):
            masses.append((y, mass))
            mass *= mp.mpf((marked - y) * (drawn - y))
            mass /= (y + 1) * (total - marked - drawn + y + 1)
        for k in ks:
            upper, lower = both_tails(masses, k)
            row = {"total": total, "marked": marked, "drawn": drawn, "k": k}
            rows.append({**row, "sf": upper, "cdf": lower})
    return rows


def binomial_rows():
    cases = [
        (5, 0.3, (1, 3, 5)),
        (100, 1e-10, (1, 2, 100)),
        (925, 0.75, (1, 682, 693, 694, 900)),
        (20000, 0.107, (0, 1000, 2139, 2141, 2500, 6000, 20000)),
        (20000, 0.999, (19000, 19979, 19980, 20000)),
    ]
    rows = []
    for n, p, ks in cases:
        q = 1 - mp.mpf(p)
        mass, masses = q**n, []
        for y in range(n + 1):
            masses.append((y, mass))
            mass *= (n - y) * mp.mpf(p) / ((y + 1) * q)
        for k in ks:
            upper, lower = both_tails(masses, k)
            rows.append({"n": n, "p": p, "k": k, "sf": upper, "cdf": lower})
    return rows


def gamma_lower(a, h):
    """P(a, h), the lower regularised gamma function, by its all-positive series."""
    total, term, n = mp.mpf(1), mp.mpf(1), 1
    while term > total * mp.mpf(10) ** -55 or n < h - a:
        term *= h / (a + n)
        total += term
        n += 1
    return mp.exp(a * mp.log(h) - h - mp.loggamma(a + 1)) * total


def chi_squared_lower_rows():
    rows = []
    for df in (0.3, 1, 2, 9.3, 63, 1000, 20000):
        for scale in (1e-8, 1e-3, 0.3, 0.8, 0.97, 1.0, 1.03, 1.4, 3.0):
            x = scale * df
            cdf = mp.log(gamma_lower(mp.mpf(df) / 2, mp.mpf(x) / 2))
            rows.append({"x": x, "df": df, "cdf": text(cdf)})
    return rows


def mixture(mean, last, upper0, lower_last, step0, ratio):
    """Both tails of sum_j Poisson(j; mean) central(j), j = 0..last."""
    weights, steps = [mp.exp(-mean)], [step0]
    for j in range(last):
        weights.append(weights[-1] * mean / (j + 1))
        steps.append(steps[-1] * ratio(j))
    uppers, lowers = [upper0], [lower_last]
    for j in range(last):
        uppers.append(uppers[-1] + steps[j])
        lowers.append(lowers[-1] + steps[last - 1 - j])
    lowers.reverse()
    upper = mp.fsum(w * t for w, t in zip(weights, uppers))
    lower = mp.fsum(w * t for w, t in zip(weights, lowers))
    return mp.log(upper), mp.log(lower)


def last_term(mean, reach):
    """Beyond it both the weights and what deep tails make of them are far below 1e-60."""
    peak = mean + mp.sqrt(mean * reach)
    return int(peak + 30 * mp.sqrt(peak) + 250)


def noncentral_chi_squared(x, df, lam):
    a, h, mean = mp.mpf(df) / 2, mp.mpf(x) / 2, mp.mpf(lam) / 2
    last = last_term(mean, h)
    step0 = mp.exp(a * mp.log(h) - h - mp.loggamma(a + 1))
    upper0 = mp.exp(chi_squared_log_sf(mp.mpf(x), mp.mpf(df)))
    return mixture(mean, last, upper0, gamma_lower(a + last, h), step0, lambda j: h / (a + j + 1))


def noncentral_f(f, df1, df2, lam):
    a, b, mean = mp.mpf(df1) / 2, mp.mpf(df2) / 2, mp.mpf(lam) / 2
    whole = 2 * b + 2 * a * mp.mpf(f)
    y, z = 2 * b / whole, 2 * a * mp.mpf(f) / whole
    last = last_term(mean, min(a * mp.mpf(f), b))
    log_beta = mp.loggamma(a) + mp.loggamma(b) - mp.loggamma(a + b)
    step0 = mp.exp(b * mp.log(y) + a * mp.log(z) - mp.log(a) - log_beta)
    upper0 = mp.exp(f_log_sf(mp.mpf(f), df1, df2))
    lower = mp.exp(log_beta_lower(z, y, a + last, b))
    return mixture(mean, last, upper0, lower, step0, lambda j: z * (a + j + b) / (a + j + 1))


def noncentral_chi_squared_rows():
    rows = []
    for df in (0.3, 1, 11, 63, 1000):
        for lam in (1e-6, 0.7, 9.0, 32.5, 400.0, 4000.0):
            mean, sd = df + lam, (2 * df + 4 * lam) ** 0.5
            xs = [mean + sd * k for k in (-6, -3, -1, 0, 0.5, 2, 5, 12)]
            xs += [mean * 1e-3, (200**0.5 + lam**0.5) ** 2, (4000**0.5 + lam**0.5) ** 2]
            xs += [(20000**0.5 + lam**0.5) ** 2]
            for x in xs:
                if x > 0:
                    upper, lower = noncentral_chi_squared(x, df, lam)
                    row = {"x": x, "df": df, "lambda": lam}
                    rows.append({**row, "sf": text(upper), "cdf": text(lower)})
    return rows


def noncentral_f_rows():
    rows = []
    for df1 in (0.7, 1, 11, 63):
        for df2 in (2.5, 20, 253, 20000):
            for lam in (1e-6, 8.0, 32.5, 300.0, 2000.0):
                fs = [scale * (df1 + lam) / df1 for scale in (0.02, 0.5, 0.97, 1.3, 4.0, 60.0)]
                # where y is e^-depth; the tail is then near -depth df2/2
                depths = (0.2, 0.4, 0.9, 1.02) if df2 == 20000 else (9.0, 60.0)
                fs += [df2 / df1 * (2.718281828459045**depth - 1) for depth in depths]
                for f in fs:
                    upper, lower = noncentral_f(f, df1, df2, lam)
                    if upper < -11000 or lower < -11000:
                        continue
                    row = {"f": f, "df1": df1, "df2": df2, "lambda": lam}
                    rows.append({**row, "sf": text(upper), "cdf": text(lower)})
    return rows


def f_quantile(alpha, df1, df2, start):
    target = mp.log(mp.mpf(alpha))
    return mp.findroot(lambda f: f_log_sf(f, df1, df2) - target, start, tol=1e-40)


def required_rows():
    """lambda with P(F'(lambda) > F_alpha) = power; the starts only say near which root to look."""
    cases = [
        (11, 253, 1e-3, 0.8, 3.0, 32.5),
        (11, 77, 1e-3, 0.8, 3.2, 37.3),
        (11, 253, 1e-5, 0.8, 4.2, 48.2),
        (1, 23, 0.05, 0.8, 4.3, 8.6),
        (29, 2755, 1e-5, 0.95, 2.5, 75.0),
        (3, 69, 1e-3, 0.5, 6.0, 16.0),
        (11, 253, 1e-3, 0.999, 3.0, 70.0),
        (2, 40, 0.05, 0.06, 3.2, 0.2),
    ]
    rows = []
    for df1, df2, alpha, power, f_start, start in cases:
        f = f_quantile(alpha, df1, df2, (mp.mpf(f_start), mp.mpf(f_start) * 1.01))
        target = mp.log(1 - mp.mpf(power))
        root = mp.findroot(
            lambda lam: noncentral_f(f, df1, df2, lam)[1] - target,
            (mp.mpf(start), mp.mpf(start) * 1.01),
            tol=1e-40,
        )
        row = {"df1": df1, "df2": df2, "alpha": alpha, "power": power}
        rows.append({**row, "lambda": text(root)})
    return rows


def main():
    document = {
        "madeWith": f"mpmath {mp.__version__}, {mp.mp.dps} digits, test/published/noncentral.py",
        "betaBinomial": beta_binomial_rows(),
        "hypergeometric": hypergeometric_rows(),
        "binomial": binomial_rows(),
        "chiSquaredLower": chi_squared_lower_rows(),
        "noncentralChiSquared": noncentral_chi_squared_rows(),
        "noncentralF": noncentral_f_rows(),
        "required": required_rows(),
    }
    path = os.path.join(os.path.dirname(os.path.abspath(__file__)), "noncentral.json")
    with open(path, "w", encoding="utf-8") as out:
        json.dump(document, out, indent=1)
        out.write("\n")
    print({key: len(value) for key, value in document.items() if key != "madeWith"})


if __name__ == "__main__":
    main()
