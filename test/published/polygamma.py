"""Writes polygamma.json: digamma, trigamma and its inverse to 40 digits, as decimal text.

Run: python3 test/published/polygamma.py   (needs mpmath; made with mpmath 1.3.0)

Arguments are exact binary doubles (printed by repr), so a reader of the file tests at the very
point computed here. The inverse is found by bisection on mpmath's trigamma, to 45 digits.
"""

import json
import os

import mpmath as mp

mp.mp.dps = 60


def text(value):
    return mp.nstr(value, 40, min_fixed=0, max_fixed=0)


def points():
    wide = [10.0**e for e in range(-9, 10)]
    body = [0.3, 0.5, 0.75, 1.25, 1.4616321449683622, 1.5, 2.0, 2.5, 3.5, 4.0, 5.5]
    edge = [7.0, 11.5, 14.0, 14.999, 15.0, 15.5, 16.0, 20.0, 31.5, 126.5, 2047.5]
    return sorted(wide + body + edge)


def inverse(y):
    low, high = mp.mpf(10) ** -20, mp.mpf(10) ** 20
    for _ in range(400):
        middle = mp.sqrt(low * high)
        if mp.psi(1, middle) > y:
            low = middle
        else:
            high = middle
    return mp.sqrt(low * high)


def main():
    at = points()
    document = {
        "madeWith": f"mpmath {mp.__version__}, test/published/polygamma.py",
        "digamma": [{"x": x, "value": text(mp.psi(0, mp.mpf(x)))} for x in at],
        "trigamma": [{"x": x, "value": text(mp.psi(1, mp.mpf(x)))} for x in at],
        "inverseTrigamma": [
            {"x": y, "value": text(inverse(mp.mpf(y)))}
            for y in at + [1e12, 1e15, 9.9e16, 1.1e17, 1e18]
        ],
    }
    path = os.path.join(os.path.dirname(os.path.abspath(__file__)), "polygamma.json")
    with open(path, "w", encoding="utf-8") as out:
        json.dump(document, out, indent=1)
        out.write("\n")
    print({name: len(rows) for name, rows in document.items() if name != "madeWith"})


if __name__ == "__main__":
    main()
