"""Writes tails.json: upper tails and their logarithms to 40 digits, as decimal text.

Run: python3 test/published/tails.py   (needs mpmath; made with mpmath 1.3.0)

Every value comes from mpmath's arbitrary precision functions: the chi-squared tail from the
upper incomplete gamma function, the F and t tails from the incomplete beta function (a
hypergeometric series with positive terms, or the integral where that series is slow), the
normal tail from erfc. Arguments are exact binary
doubles (printed by repr), so a reader of the file tests at the very point computed here.
"""

import json
import os

import mpmath as mp

mp.mp.dps = 50
MOST_TERMS = 20000


def text(value):
    return mp.nstr(value, 40, min_fixed=0, max_fixed=0)


def chi_squared_log_sf(x, df):
    a, h = mp.mpf(df) / 2, mp.mpf(x) / 2
    if h < a:
        # lower tail by its all-positive series, then the complement
        log_term = a * mp.log(h) - h - mp.loggamma(a + 1)
        total, term, n = mp.mpf(1), mp.mpf(1), 1
        while term > total * mp.mpf(10) ** -45:
            term *= h / (a + n)
            total += term
            n += 1
        return mp.log1p(-mp.exp(log_term) * total)
    # Gamma(a, h) = integral; substitution keeps the integrand near 1 and free of overflow:
    # Gamma(a,h) e^h h^(1-a) = int_0^inf e^-u (1+u/h)^(a-1) du
    width = 1 / (1 - (a - 1) / h) if h > a else mp.sqrt(h)
    width = min(max(width, mp.mpf(1) / 10), 3 * mp.sqrt(h) + 1)
    points = [0] + [width * k for k in (1, 2, 4, 8, 16, 32, 64, 128, 256)]
    value = mp.quad(lambda u: mp.exp(-u + (a - 1) * mp.log1p(u / h)), points)
    return (a - 1) * mp.log(h) - h - mp.loggamma(a) + mp.log(value)


def log_beta_lower(y, z, a, b):
    """log I_y(a, b), z = 1 - y: y^a z^b / (a B(a,b)) 2F1(a+b, 1; a+1; y), all terms positive."""
    log_beta = mp.loggamma(a) + mp.loggamma(b) - mp.loggamma(a + b)
    if 120 / z > MOST_TERMS:
        return a * mp.log(y) + (b - 1) * mp.log(z) - log_beta - mp.log(a) + mp.log(
            beta_integral(y, z, a, b)
        )
    log_front = a * mp.log(y) + b * mp.log(z) - mp.log(a) - log_beta
    total, term, n = mp.mpf(1), mp.mpf(1), 0
    while True:
        ratio = (a + b + n) / (a + 1 + n) * y
        term *= ratio
        total += term
        n += 1
        if ratio < 1 and term * ratio / (1 - ratio) < total * mp.mpf(10) ** -45:
            return log_front + mp.log(total)


def beta_integral(y, z, a, b):
    """int_0^inf e^-u (1 + (y/z)(1 - e^(-u/a)))^(b-1) du: I_y(a, b) with its front taken out."""

    def integrand(u):
        return mp.exp(-u + (b - 1) * mp.log1p(-(y / z) * mp.expm1(-u / a)))

    return mp.quad(integrand, [0] + [mp.mpf(2) ** k for k in range(-4, 11)])


def f_log_sf(f, df1, df2):
    f, df1, df2 = mp.mpf(f), mp.mpf(df1), mp.mpf(df2)
    y, z = df2 / (df2 + df1 * f), df1 * f / (df2 + df1 * f)
    a, b = df2 / 2, df1 / 2
    if y < a / (a + b):
        return log_beta_lower(y, z, a, b)
    return mp.log1p(-mp.exp(log_beta_lower(z, y, b, a)))


def t_log_sf(t, df):
    half = f_log_sf(mp.mpf(t) ** 2, 1, df) - mp.log(2)
    return half if t > 0 else mp.log1p(-mp.exp(half))


def normal_log_sf(z):
    return mp.log(mp.erfc(mp.mpf(z) / mp.sqrt(2)) / 2)


def spread(mean, sd, steps):
    return [float(mean + sd * k) for k in steps if mean + sd * k > 0]


def chi_rows():
    rows = []
    for df in (0.3, 0.7, 1, 1.5, 2, 3, 5, 9.3, 10, 31, 63, 100.5, 999, 1820, 20000, 250000, 1e6):
        mean, sd = df, (2 * df) ** 0.5
        xs = spread(mean, sd, (-3, -1.5, -0.9, -0.5, -0.01, 0, 0.01, 0.5, 1, 2, 3, 5, 8, 15, 40))
        xs += [df + 2 * t + 2 * (t * df) ** 0.5 for t in (100.0, 700.0, 2500.0, 10000.0)]
        xs += [df * 1e-3, df * 1e-8]
        rows += [{"x": x, "df": df, "logSf": text(chi_squared_log_sf(x, df))} for x in xs]
    return rows


def f_rows():
    rows = []
    for df1 in (0.3, 1, 2.7, 11, 63, 400):
        for df2 in (0.3, 1, 4.5, 20, 253, 5000, 258237, 1e6):
            fs = [1e-6, 0.01, 0.3, 0.8, 1.001, 1.2, 2.0, 4.5, 20.0, 300.0, 5e3, 1e6]
            for f in fs:
                value = f_log_sf(f, df1, df2)
                if value >= -11000:
                    rows.append({"f": f, "df1": df1, "df2": df2, "logSf": text(value)})
    return rows


def main():
    ts = (-40.0, -3.0, -1.0, -1e-3, 1e-6, 0.1, 1.0, 1.96, 4.0, 12.0, 60.0, 141.0, 1e4)
    t_dfs = (0.3, 1, 2, 3.5, 8, 30, 253, 10000, 1e6)
    t_rows = [{"t": t, "df": df, "logSf": text(t_log_sf(t, df))} for df in t_dfs for t in ts]
    zs = (-38.0, -8.0, -2.5, -1.0, -1e-4, 1e-9, 0.2, 0.7, 1.0, 1.2, 1.96, 3.0, 6.0, 12.0)
    zs += (40.0, 141.0)
    gammas = (1e-6, 0.15, 0.5, 0.99, 1.0, 1.5, 2.0, 2.01, 3.7, 14.99, 15.0, 100.5, 12345.6, 1e8)
    document = {
        "madeWith": f"mpmath {mp.__version__}, {mp.mp.dps} digits, test/published/tails.py",
        "logGamma": [{"x": x, "value": text(mp.loggamma(mp.mpf(x)))} for x in gammas],
        "chiSquared": chi_rows(),
        "f": f_rows(),
        "t": [row for row in t_rows if mp.mpf(row["logSf"]) >= -11000],
        "normal": [{"z": z, "logSf": text(normal_log_sf(z))} for z in zs],
    }
    path = os.path.join(os.path.dirname(os.path.abspath(__file__)), "tails.json")
    with open(path, "w", encoding="utf-8") as out:
        json.dump(document, out, indent=1)
        out.write("\n")
    print({key: len(value) for key, value in document.items() if key != "madeWith"})


if __name__ == "__main__":
    main()
