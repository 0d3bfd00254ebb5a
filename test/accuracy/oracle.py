"""Tails and statistics to 40 digits by mpmath.

Run after arguments.py:
  python3 oracle.py FOLDER tables   statistics of every table, log p of the first 200
  python3 oracle.py FOLDER tails    the first 500 rows of every function, of noncentral F 100
  python3 oracle.py FOLDER asked    every row of NAME.asked.f64, where two others disagree

Writes NAME.mp.f64 (asked: NAME.decided.f64), little-endian doubles: log of the upper tail, and of
the lower one where the function has two columns, each the double nearest to the value. Not 10,000
rows, because a tail takes up to .05 s, one of noncentral F .2 s. The central upper tails are those
of test/published/tails.py, the Poisson mixtures those of noncentral.py beside it.
Of a table: Pearson's statistic, its log p, G2, its log p; log p is NaN from the 201st on.
"""

import os
import struct
import sys
from multiprocessing import Pool

import mpmath as mp

sys.path.insert(0, os.path.join(os.path.dirname(os.path.abspath(__file__)), "..", "published"))
sys.dont_write_bytecode = True

import noncentral  # noqa: E402
import tails  # noqa: E402

mp.mp.dps = 40
ROWS = 500
ROWS_OF_SLOW = {"noncentralF": 100}
TABLES_WITH_P = 200
# Rows are shared out to this many processes; the values do not depend on it.
PROCESSES = 2
MOST_CELLS = 5 * 20


def read_rows(path, columns):
    with open(path, "rb") as file:
        data = file.read()
    return list(struct.iter_unpack(f"<{columns}d", data))


def write_rows(path, rows):
    with open(path, "wb") as out:
        for row in rows:
            out.write(struct.pack(f"<{len(row)}d", *map(float, row)))


def with_rest(log_tail):
    """log(1 - e^log_tail)"""
    return mp.log1p(-mp.exp(log_tail))


def chi_squared(x, df):
    if x < df:
        lower = mp.log(noncentral.gamma_lower(mp.mpf(df) / 2, mp.mpf(x) / 2))
        return with_rest(lower), lower
    upper = tails.chi_squared_log_sf(mp.mpf(x), mp.mpf(df))
    return upper, with_rest(upper)


def f(value, df1, df2):
    return (tails.f_log_sf(value, df1, df2),)


def t(value, df):
    half = tails.f_log_sf(mp.mpf(value) ** 2, 1, df) - mp.log(2)
    return (half if value > 0 else with_rest(half),)


def normal(z):
    return (tails.normal_log_sf(z),)


def sums(least, most, first, ratio, k):
    """log P(Y >= k) and log P(Y <= k) from the mass at least and the ratios of masses."""
    mass, below, above = first, mp.mpf(0), mp.mpf(0)
    for y in range(least, most + 1):
        if y < k:
            below += mass
        elif y == k:
            at = mass
        else:
            above += mass
        if y < most:
            mass *= ratio(y)
    return smaller_first(above + at, below)[0], smaller_first(above, below + at)[1]


def smaller_first(upper, lower):
    """Logs of two sums that make 1; the one that is smaller says what the other is."""
    if upper < lower:
        return (mp.log(upper), mp.log1p(-upper)) if upper > 0 else (mp.ninf, mp.mpf(0))
    return (mp.log1p(-lower), mp.log(lower)) if lower > 0 else (mp.mpf(0), mp.ninf)


def beta_binomial(n, alpha, beta, k):
    n, k, a, b = int(n), int(k), mp.mpf(alpha), mp.mpf(beta)
    first = mp.loggamma(b + n) - mp.loggamma(b) + mp.loggamma(a + b) - mp.loggamma(a + b + n)

    def ratio(y):
        return (n - y) * (y + a) / ((y + 1) * (n - y - 1 + b))

    return sums(0, n, mp.exp(first), ratio, k)


def log_choose(n, k):
    return mp.loggamma(n + 1) - mp.loggamma(k + 1) - mp.loggamma(n - k + 1)


def hypergeometric(total, marked, drawn, k):
    total, marked, drawn, k = int(total), int(marked), int(drawn), int(k)
    least, most = max(0, drawn + marked - total), min(drawn, marked)
    first = log_choose(marked, least) + log_choose(total - marked, drawn - least)
    rest = total - marked - drawn

    def ratio(y):
        return mp.mpf((marked - y) * (drawn - y)) / ((y + 1) * (rest + y + 1))

    return sums(least, most, mp.exp(first - log_choose(total, drawn)), ratio, k)


def noncentral_chi_squared(x, df, noncentrality):
    return rest_of_larger(noncentral.noncentral_chi_squared(x, df, noncentrality))


def noncentral_f(value, df1, df2, noncentrality):
    return rest_of_larger(noncentral.noncentral_f(value, df1, df2, noncentrality))


def rest_of_larger(logs):
    """Both log tails, the larger told by the smaller, so that it keeps its digits close to 0."""
    upper, lower = logs
    return (upper, with_rest(upper)) if upper < lower else (with_rest(lower), lower)


FUNCTIONS = {
    "chiSquared": (2, chi_squared),
    "f": (3, f),
    "t": (2, t),
    "normal": (1, normal),
    "betaBinomial": (4, beta_binomial),
    "hypergeometric": (4, hypergeometric),
    "noncentralChiSquared": (3, noncentral_chi_squared),
    "noncentralF": (4, noncentral_f),
}


def one(task):
    name, row = task
    return [float(value) for value in FUNCTIONS[name][1](*row)]


def evaluate(folder, read, written, all_rows):
    with Pool(PROCESSES) as pool:
        for name, (columns, _) in FUNCTIONS.items():
            path = f"{folder}/{name}.{read}.f64"
            if os.path.exists(path):
                most = None if all_rows else ROWS_OF_SLOW.get(name, ROWS)
                tasks = [(name, row) for row in read_rows(path, columns)[:most]]
                write_rows(f"{folder}/{name}.{written}.f64", pool.map(one, tasks, chunksize=5))


def statistics(cells):
    """Pearson's and G2, and df; rows and columns without events do not count."""
    rows = [sum(row) for row in cells]
    columns = [sum(column) for column in zip(*cells)]
    total, pearson, g2 = sum(rows), mp.mpf(0), mp.mpf(0)
    for row, of_row in zip(cells, rows):
        for count, of_column in zip(row, columns):
            if of_row > 0 and of_column > 0:
                expected = mp.mpf(of_row * of_column) / total
                pearson += (count - expected) ** 2 / expected
                g2 += 2 * count * mp.log(count / expected) if count > 0 else 0
    df = (sum(r > 0 for r in rows) - 1) * (sum(c > 0 for c in columns) - 1)
    return pearson, g2, df


def table(task):
    row, with_p = task
    rows, columns = int(row[0]), int(row[1])
    counts = [int(count) for count in row[2 : 2 + rows * columns]]
    pearson, g2, df = statistics([counts[i * columns :][:columns] for i in range(rows)])
    log_ps = [log_p(statistic, df) if with_p else mp.nan for statistic in (pearson, g2)]
    return [float(value) for value in (pearson, log_ps[0], g2, log_ps[1])]


def log_p(statistic, df):
    return chi_squared(statistic, df)[0] if df > 0 and statistic > 0 else mp.mpf(0)


def tables(folder):
    rows = read_rows(f"{folder}/tables.args.f64", 2 + MOST_CELLS)
    tasks = [(row, at < TABLES_WITH_P) for at, row in enumerate(rows)]
    with Pool(PROCESSES) as pool:
        write_rows(f"{folder}/tables.mp.f64", pool.map(table, tasks, chunksize=5))


def main(folder, part):
    if part == "tables":
        tables(folder)
    elif part == "tails":
        evaluate(folder, "args", "mp", all_rows=False)
    else:
        evaluate(folder, "asked", "decided", all_rows=True)


if __name__ == "__main__":
    main(sys.argv[1], sys.argv[2])
