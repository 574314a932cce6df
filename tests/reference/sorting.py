"""Average outgoing quality and average total inspection of a double sampling plan whose refused lots are sorted.

First sample 99, release at 0, refuse at 3 or more; 198 in all, release at 3 or fewer; lots of 10,000.
Writes sorting.csv. SciPy's binomial law, summed over the ways to be released at each stage.
"""

import scipy
from scipy.optimize import minimize_scalar
from scipy.stats import binom

LOT = 10_000


def released(p):
    first = binom.cdf(0, 99, p)
    second = sum(binom.pmf(x, 99, p) * binom.cdf(3 - x, 99, p) for x in (1, 2))
    return first, second


def outgoing(p):
    first, second = released(p)
    return p * (first * (LOT - 99) + second * (LOT - 198)) / LOT


def inspected(p):
    first, second = released(p)
    return first * 99 + second * 198 + (1 - first - second) * LOT


limit = minimize_scalar(lambda p: -outgoing(p), bounds=(0.005, 0.03), method="bounded", options={"xatol": 1e-12})
with open("sorting.csv", "w", encoding="utf-8") as out:
    print(f"# Written by sorting.py, SciPy {scipy.__version__}, 2026-12-01: double sampling 99/198, lots of 10,000", file=out)
    print("quality,outgoing,inspected", file=out)
    for p in (0.005, 0.01, 0.015, 0.02, 0.03):
        print(f"{p},{outgoing(p):.12g},{inspected(p):.12g}", file=out)
    print(f"# average outgoing quality limit, at {limit.x:.6f}", file=out)
    print(f"limit,{-limit.fun:.12g},", file=out)
