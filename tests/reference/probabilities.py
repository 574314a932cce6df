"""Writes probabilities.csv: probabilities of events under the four laws, to 25 significant digits.

Every value is computed at 90 digits (laws.py). A second witness is SciPy in double precision, kept where it agrees to
1e-9; a third is mpmath's incomplete beta and gamma function, held against a part of the rows here and not written.
"""

import mpmath
import scipy
from scipy import stats

from laws import Binomial, Hypergeometric, NegativeBinomial, Poisson, digits, number, probability, real
from table import write

SMALLEST = mpmath.mpf(10) ** -300

BINOMIAL = [
    (1, "0.5"), (1, "0.000001"), (2, "1/3"), (5, "0.01"), (10, "0.5"), (13, "2/7"), (30, "0.095"), (59, "0.05"),
    (93, "0.05"), (100, "0.5"), (299, "0.01"), (500, "0.004"), (628, "0.01"), (1000, "0.5"), (1000, "0.999"),
    (4321, "0.123"), (10_000, "0.0001"), (10_000, "0.5"), (60_000, "0.0002"), (60_000, "0.00005"), (100_000, "0.03"),
    (250_000, "1/3"), (1_000_000, "0.000001"), (1_000_000, "0.00002"), (1_000_000, "0.02"), (1_000_000, "0.5"),
    (1_000_000, "0.6"), (1_000_000, "0.9999"),
]
HYPERGEOMETRIC = [
    (1, 1, 1), (2, 1, 1), (10, 3, 4), (60, 3, 38), (240, 12, 52), (240, 12, 80), (240, 1, 52), (500, 250, 250),
    (1000, 50, 57), (3200, 80, 125), (5000, 2500, 59), (10_000, 400, 9_900), (10_000, 9_900, 200),
    (100_000, 200, 5_000), (1_000_000, 30, 60_000), (1_000_000, 500_000, 10_000), (1_000_000, 20_000, 500_000),
]
POISSON = [
    "0.000001", "0.02", "0.5", "1", "2.302585", "6.8", "17", "1/3", "50", "99.5", "250", "1000", "2718.28", "12345.678",
    "100000", "600000", "1000000",
]
NEGATIVE_BINOMIAL = [
    (1, "0.5"), (1, "0.01"), (1, "0.000005"), (2, "0.05"), (3, "0.02"), (3, "1/7"), (5, "0.9"), (10, "0.004"),
    (10, "0.1"), (25, "0.5"), (50, "0.001"), (100, "0.01"), (200, "0.995"), (500, "0.25"), (1000, "0.002"),
    (5000, "0.5"),
]


def laws():
    """(family, set-up, parameter, law, the same law in SciPy, what SciPy's count must be shifted by)."""
    for n, p in BINOMIAL:
        yield "binomial", f"n={n}", p, Binomial(n, number(p)), stats.binom(n, float(number(p))), 0
    for lot, bad, n in HYPERGEOMETRIC:
        yield "hypergeometric", f"n={n} lot={lot}", str(bad), Hypergeometric(lot, bad, n), stats.hypergeom(lot, bad, n), 0
    for mean in POISSON:
        yield "poisson", "n=1", mean, Poisson(number(mean)), stats.poisson(float(number(mean))), 0
    for r, p in NEGATIVE_BINOMIAL:
        yield "negative_binomial", f"r={r}", p, NegativeBinomial(r, number(p)), stats.nbinom(r, float(number(p))), r


def events(law):
    """Lower tails, upper tails and inner ranges, from the middle of the law into its far tails."""
    mean, deviation = law.mean_and_deviation()

    def at(standard):
        count = int(mpmath.nint(mean + standard * deviation))
        count = max(count, law.low)
        return count if law.high is None else min(count, law.high)

    found = [(None, at(z)) for z in (-36.5, -20, -9, -4, -1.6, 0, 2)]
    found += [(at(z), None) for z in (-2, 0, 1.7, 4, 9, 20, 34)]
    found += [(at(low), at(high)) for low, high in ((-1, 1), (-3, 2), (3, 6), (-15, -7), (12, 13))]
    found += [(None, law.low), (at(0), at(0))]
    if law.high is not None:
        found.append((law.high, None))
    kept = {}
    for first, last in found:
        ends = (law.low if first is None else first, law.high if last is None else last)
        if ends != (law.low, law.high):
            kept.setdefault(ends, (first, last))
    return list(kept.values())


def by_scipy(frozen, shift, first, last):
    """The same event in double precision; a range as a difference of the smaller tails where it is no single term."""
    if first is None:
        return float(frozen.cdf(last - shift))
    if last is None:
        return float(frozen.sf(first - 1 - shift))
    if first == last:
        return float(frozen.pmf(first - shift))
    if last - first <= 2_000:
        return float(sum(frozen.pmf(k - shift) for k in range(first, last + 1)))
    below = frozen.cdf(last - shift) - frozen.cdf(first - 1 - shift)
    above = frozen.sf(first - 1 - shift) - frozen.sf(last - shift)
    return float(below if frozen.cdf(last - shift) < 0.5 else above)


def closed_form(law, first, last):
    """A one-sided tail by the incomplete beta or gamma function; nothing for other events and long arguments."""
    if (first is None) == (last is None):
        return None
    with mpmath.workdps(60):
        if isinstance(law, Binomial) and law.units <= 1_000:
            n, p = law.units, real(law.fraction)
            if last is not None:
                return mpmath.betainc(n - last, last + 1, 0, 1 - p, regularized=True)
            return mpmath.betainc(first, n - first + 1, 0, p, regularized=True)
        if isinstance(law, Poisson) and law.mean <= 1_000:
            if last is not None:
                return mpmath.gammainc(last + 1, real(law.mean), regularized=True)
            return mpmath.gammainc(first, 0, real(law.mean), regularized=True)
    return None


def rows():
    checked = 0
    for family, setup, parameter, law, frozen, shift in laws():
        for first, last in events(law):
            value = probability(law, first, last)
            if value < SMALLEST or value >= 1:
                continue
            other = closed_form(law, first, last)
            if other is not None:
                assert abs(other / value - 1) < mpmath.mpf(10) ** -30, (family, setup, parameter, first, last)
                checked += 1
            witness = by_scipy(frozen, shift, first, last)
            agrees = abs(witness / value - 1) <= 1e-9
            yield {
                "family": family,
                "setup": setup,
                "parameter": parameter,
                "from": "" if first is None else first,
                "to": "" if last is None else last,
                "probability": digits(value),
                "scipy": repr(witness) if agrees else "",
            }
    print(f"{checked} rows also held against incomplete beta and gamma functions at 60 digits")


if __name__ == "__main__":
    found = list(rows())
    without = sum(not row["scipy"] for row in found)
    for index, row in enumerate(found, 1):
        row_id = {"id": f"P{index:03}"}
        row_id.update(row)
        found[index - 1] = row_id
    write(
        "probabilities.csv",
        "Probabilities of events under the four counting laws.",
        [
            f"probability: mpmath {mpmath.__version__} at 90 digits, 25 printed; the true value lies within 1e-24 of it, relatively.",
            f"scipy: SciPy {scipy.__version__}, double precision; left empty in the {without} rows where it differs by more than 1e-9.",
            "An empty `from` or `to` is the end of the support. The parameter is p, D or the mean count; for",
            "negative_binomial the event is about the number of units inspected until r are nonconforming.",
        ],
        found,
    )
