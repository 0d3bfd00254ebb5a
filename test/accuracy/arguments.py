"""Draws the arguments at which the tails are compared. Run: python3 arguments.py FOLDER

Writes FOLDER/NAME.args.f64 for every function and FOLDER/tables.args.f64: rows of little-endian
doubles, so that R, mpmath and the program start from the very same bits. 10,000 rows a function
and 2,000 tables, from one seeded Mersenne Twister each. Real arguments are rounded to 24 bits,
which hides the last bit in which the logarithms of two machines may differ.

Four in ten arguments lie in the body. The others aim at a tail whose log is L, e^0 to e^9.21 =
10,000 (log-uniform), two thirds of them upper and one third lower, by bisection of the rate
function of large deviations (Chernoff 1952, from memory); how deep they truly go is measured.
The first two rows aim at 10,000 itself, of the discrete functions the first is a fixed deep one.
"""

import math
import random
import struct
import sys

SEED = 20260311
ROWS = 10000
TABLES = 2000
DEEPEST = 10000.0
# A table is written as its rows, its columns, and this many cells, filled up with zeros.
MOST_CELLS = 5 * 20


def rounded(value):
    mantissa, exponent = math.frexp(value)
    return math.ldexp(round(mantissa * 2**24), exponent - 24)


class Draw:
    def __init__(self, salt):
        self.chance = random.Random(SEED + salt)
        self.first_sides = [-DEEPEST, DEEPEST]

    def uniform(self, low, high):
        return low + (high - low) * self.chance.random()

    def log_uniform(self, low, high):
        return math.exp(self.uniform(math.log(low), math.log(high)))

    def whole(self, low, high):
        return min(high, low + int(self.chance.random() * (high - low + 1)))

    def side(self):
        """0 for the body, else the log depth to aim at: above zero upper, below it lower."""
        if self.first_sides:
            return self.first_sides.pop()
        pick, depth = self.chance.random(), self.log_uniform(1, DEEPEST)
        return 0 if pick < 0.4 else depth if pick < 0.8 else -depth


def solve(rate, depth):
    """The log ratio s with rate(s) = |depth|, on the side of depth; |s| at most 600."""
    sign = 1 if depth > 0 else -1
    low, high = 0.0, 600.0
    for _ in range(60):
        middle = (low + high) / 2
        if rate(sign * middle) < abs(depth):
            low = middle
        else:
            high = middle
    return sign * low


def chi_ratio(draw, df):
    """x / df"""
    depth = draw.side()
    if depth == 0:
        return max(1e-6, 1 + draw.uniform(-6, 10) * math.sqrt(2 / df))
    return math.exp(solve(lambda s: df / 2 * (math.expm1(s) - s), depth))


def f_ratio(draw, df1, df2):
    a, b = df2 / 2, df1 / 2

    def rate(s):
        # log(1 + (e^s - 1) share) without overflow, for the shares of both kinds of freedom
        excess = math.log((a + b * math.exp(s)) / (a + b))
        return (a + b) * excess - b * s

    depth = draw.side()
    if depth == 0:
        spread = math.sqrt(2 / df1 + 2 / df2)
        return math.exp(max(-50.0, min(50.0, draw.uniform(-5, 6) * spread)))
    return math.exp(solve(rate, depth))


def chi_squared(draw):
    df = rounded(draw.log_uniform(0.3, 1e6))
    return [rounded(df * chi_ratio(draw, df)), df]


def f(draw):
    df1 = rounded(draw.log_uniform(0.3, 1000))
    df2 = rounded(draw.log_uniform(0.3, 1e6))
    return [rounded(f_ratio(draw, df1, df2)), df1, df2]


def t(draw):
    # R takes the normal for t above 400,000 degrees of freedom
    df = rounded(draw.log_uniform(0.3, 3e5))
    sign = 1 if draw.chance.random() < 0.8 else -1
    return [rounded(sign * math.sqrt(f_ratio(draw, 1, df))), df]


def normal(draw):
    depth = draw.side()
    if depth > 0:
        return [rounded(math.sqrt(2 * depth))]
    return [rounded(draw.uniform(-10, 10))]


def middle_or_anywhere(draw, mean, sd, low, high):
    if draw.chance.random() < 0.5:
        return draw.whole(low, high)
    return max(low, min(high, round(mean + draw.uniform(-6, 8) * sd)))


def beta_binomial(draw):
    n = round(draw.log_uniform(1, 10000))
    mu = 1 / (1 + math.exp(draw.uniform(-6, 6)))
    rho = draw.log_uniform(1e-6, 0.5)
    alpha, beta = rounded(mu * (1 - rho) / rho), rounded((1 - mu) * (1 - rho) / rho)
    sd = math.sqrt(n * mu * (1 - mu) * (1 + (n - 1) * rho))
    return [n, alpha, beta, middle_or_anywhere(draw, n * mu, sd, 0, n)]


def hypergeometric(draw):
    while True:
        total = round(draw.log_uniform(2, 60000))
        marked, drawn = draw.whole(0, total), draw.whole(0, total)
        least, most = max(0, drawn + marked - total), min(drawn, marked)
        if least < most:
            break
    mean = drawn * marked / total
    sd = math.sqrt(mean * (1 - marked / total) * (total - drawn) / (total - 1))
    return [total, marked, drawn, middle_or_anywhere(draw, mean, sd, least, most)]


def noncentral_chi_squared(draw):
    df = rounded(draw.log_uniform(0.3, 1000))
    noncentrality = rounded(draw.log_uniform(1e-3, 300))
    ratio = chi_ratio(draw, df)
    if ratio < 1:
        return [rounded((df + noncentrality) * ratio), df, noncentrality]
    x = (math.sqrt(df * ratio) + math.sqrt(noncentrality)) ** 2
    return [rounded(x), df, noncentrality]


def noncentral_f(draw):
    df1 = rounded(draw.log_uniform(0.3, 100))
    df2 = rounded(draw.log_uniform(1, 20000))
    noncentrality = rounded(draw.log_uniform(1e-3, 300))
    scale = (df1 + noncentrality) / df1
    return [rounded(scale * f_ratio(draw, df1, df2)), df1, df2, noncentrality]


def table(draw):
    """Rows of one mix or of two; from a handful of events to a million a cell; some zeros."""
    rows, columns = draw.whole(2, 5), draw.whole(2, 20)
    size, drift = draw.log_uniform(3, 1e6), draw.log_uniform(1e-4, 1)
    shares = [draw.log_uniform(0.01, 1) for _ in range(columns)]
    cells = []
    for _ in range(rows):
        scale = size * draw.uniform(0.2, 1)
        for share in shares:
            noise = draw.uniform(-1, 1) * math.sqrt(3 * scale * share)
            moved = scale * share * (1 + drift * draw.uniform(-1, 1))
            cells.append(max(0, round(moved + noise)))
    # a column of a handful of events always, so that the table is never empty
    cells[:: columns] = [cell + 1 for cell in cells[:: columns]]
    return [rows, columns] + cells + [0] * (MOST_CELLS - rows * columns)


FUNCTIONS = {
    "chiSquared": chi_squared,
    "f": f,
    "t": t,
    "normal": normal,
    "betaBinomial": beta_binomial,
    "hypergeometric": hypergeometric,
    "noncentralChiSquared": noncentral_chi_squared,
    "noncentralF": noncentral_f,
    "tables": table,
}


DEEP = {
    "betaBinomial": [10000, 4000, 36000, 8200],
    "hypergeometric": [60000, 20000, 20000, 14400],
}


def main(folder):
    for salt, (name, function) in enumerate(FUNCTIONS.items()):
        draw, first = Draw(salt), DEEP.get(name)
        with open(f"{folder}/{name}.args.f64", "wb") as out:
            for _ in range(TABLES if name == "tables" else ROWS):
                row, first = first or function(draw), None
                out.write(struct.pack(f"<{len(row)}d", *row))


if __name__ == "__main__":
    main(sys.argv[1])
