"""Gathers what the oracles said into one small file. Run: python3 sample.py FOLDER

Writes FOLDER/sample.json from the files of arguments.py, oracle.py and oracle.R: of every function
the first 200 rows that mpmath evaluated (arguments, mpmath's values, R's), and of all the rows the
digests of the arguments and of mpmath's values. R's values have none: their last bits depend on
the machine's mathematical library.
"""

import hashlib
import json
import math
import sys

from oracle import FUNCTIONS, MOST_CELLS, read_rows

ROWS = 200
TWO_TAILS = {"chiSquared", "betaBinomial", "hypergeometric"}
TWO_TAILS |= {"noncentralChiSquared", "noncentralF"}


def digest(path):
    with open(path, "rb") as file:
        return hashlib.sha256(file.read()).hexdigest()


def plain(value):
    """JSON has no word for what is not finite."""
    if not math.isfinite(value):
        return str(value).replace("inf", "Infinity").replace("nan", "NaN")
    return int(value) if value == int(value) and abs(value) < 1e15 else value


def part(folder, name, columns, tails):
    args = read_rows(f"{folder}/{name}.args.f64", columns)
    exact = read_rows(f"{folder}/{name}.mp.f64", tails)
    by_r = read_rows(f"{folder}/{name}.r.f64", tails)
    rows = []
    for arg, mp_row, r_row in list(zip(args, exact, by_r))[:ROWS]:
        if name == "tables":
            arg = arg[: 2 + int(arg[0] * arg[1])]
        rows.append([[plain(value) for value in values] for values in (arg, mp_row, r_row)])
    names = ("arguments", "mpmath"), ("args", "mp")
    digests = {word: digest(f"{folder}/{name}.{kind}.f64") for word, kind in zip(*names)}
    return {"digests": digests, "rows": rows}


def main(folder):
    parts = {
        name: part(folder, name, columns, 2 if name in TWO_TAILS else 1)
        for name, (columns, _) in FUNCTIONS.items()
    }
    parts["tables"] = part(folder, "tables", 2 + MOST_CELLS, 4)
    body = []
    for name, document in parts.items():
        rows = ",\n".join(json.dumps(row, separators=(",", ":")) for row in document["rows"])
        digests = json.dumps(document["digests"])
        body.append(f'"{name}": {{"digests": {digests}, "rows": [\n{rows}\n]}}')
    with open(f"{folder}/sample.json", "w", encoding="utf-8") as out:
        out.write("{\n" + ",\n".join(body) + "\n}\n")


if __name__ == "__main__":
    main(sys.argv[1])
