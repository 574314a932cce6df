"""Writes sample_sizes.csv: smallest sample sizes, found by trying every size in turn.

For each size the region is the one that the level allows at that size, and every requirement is looked at. Double
precision (SciPy) does the work; a comparison within 1e-9 of its limit is decided at 90 digits. `every_from` is the size
from which all larger ones work: every size is tried as far as `tried_to`, and beyond it Chernoff's bound proves both the
level and the power, for the size `tried_to` and all beyond (finite lots are tried to the whole lot).
"""

import math

import mpmath
import scipy
from gmpy2 import mpq
from scipy import special, stats

from laws import Binomial, Hypergeometric, NegativeBinomial, Poisson, digits, number, probability, real
from table import write

CLOSE = 1e-9


class Family:
    """Tail probabilities of the statistic at a parameter for an amount of inspection."""

    def __init__(self, name, lot=None):
        self.name, self.lot = name, lot

    def law(self, amount, parameter):
        if self.name == "binomial":
            return Binomial(int(amount), parameter)
        if self.name == "poisson":
            return Poisson(amount * parameter)
        if self.name == "hypergeometric":
            return Hypergeometric(self.lot, int(parameter), int(amount))
        return NegativeBinomial(int(amount), parameter)

    def tail(self, amount, parameter, low, count):
        """P(X <= count) or P(X >= count) in doubles."""
        p = float(parameter)
        if self.name == "hypergeometric":
            law = stats.hypergeom
            settings = (self.lot, int(parameter), int(amount))
            return law.cdf(count, *settings) if low else law.sf(count - 1, *settings)
        if count < 0:
            return 0.0 if low else 1.0
        if self.name == "binomial":
            n = int(amount)
            return special.bdtr(count, n, p) if low else (special.bdtrc(count - 1, n, p) if count > 0 else 1.0)
        if self.name == "poisson":
            mean = float(amount * parameter)
            return special.pdtr(count, mean) if low else (special.pdtrc(count - 1, mean) if count > 0 else 1.0)
        r = int(amount)
        if count < r:
            return 0.0 if low else 1.0
        return special.nbdtr(count - r, r, p) if low else (special.nbdtrc(count - r - 1, r, p) if count > r else 1.0)

    def exact_tail(self, amount, parameter, low, count):
        law = self.law(amount, parameter)
        if low:
            return probability(law, None, count) if count >= law.low else mpmath.mpf(0)
        return probability(law, count, None)

    def at_most(self, amount, parameter, low, count, limit):
        """Whether a tail is at most the limit."""
        value = self.tail(amount, parameter, low, count)
        if abs(value - float(limit)) > CLOSE * float(limit):
            return value <= float(limit)
        return self.exact_tail(amount, parameter, low, count) <= real(limit)

    def at_least(self, amount, parameter, low, count, limit):
        value = self.tail(amount, parameter, low, count)
        if abs(value - float(limit)) > CLOSE:
            return value >= float(limit)
        return self.exact_tail(amount, parameter, low, count) >= real(limit)


def edge(family, amount, boundary, low, alpha, start):
    """The last count of the low tail (first of the high tail) of size at most alpha; nothing if even one count is too much.

    `start` is the edge of the size before: edges move slowly with the size.
    """
    floor = int(amount) if family.name == "negative_binomial" else 0
    top = int(amount) if family.name in ("binomial", "hypergeometric") else None
    if low:
        count = max(floor - 1, start)
        while (top is None or count < top) and family.at_most(amount, boundary, True, count + 1, alpha):
            count += 1
        while count >= floor and not family.at_most(amount, boundary, True, count, alpha):
            count -= 1
        return count if count >= floor else None
    count = start if top is None else min(start, top + 1)
    while count > floor and family.at_most(amount, boundary, False, count - 1, alpha):
        count -= 1
    while not family.at_most(amount, boundary, False, count, alpha):
        count += 1
    return count if top is None or count <= top else None


def failing(family, amount, low, region, boundary, alpha, wants):
    """Why an amount fails: `level`, a requirement's number, or nothing."""
    if region is None:
        return "level"
    for index, (parameter, at_least) in enumerate(wants):
        if not family.at_least(amount, parameter, low, region, at_least):
            return f"requirement {index + 1}"
    return ""


def chernoff(family, low, boundary, alpha, wants, amount):
    """Whether level and power hold for this amount and all larger ones, by Chernoff's bound.

    A threshold t between the boundary and the requirement is fixed; the tail of all counts beyond t times the amount has
    size at most exp(-amount D(t, boundary)) and misses with at most exp(-(amount D(t', requirement))), where t' allows for
    one count of rounding. Both fall with the amount.
    """
    if family.name == "hypergeometric":
        return None

    def divergence(t, p):
        if family.name == "poisson":
            return t * math.log(t / p) - t + p
        return t * math.log(t / p) + (1 - t) * math.log((1 - t) / (1 - p))

    b, n = float(boundary), float(amount)
    for step in range(1, 100):
        good = True
        for parameter, at_least in wants:
            p = float(parameter)
            if p == 0:
                continue
            t = b + (p - b) * step / 100
            t_count = t - 1 / n if low else t + 1 / n
            inside = (p < t_count) if low else (p > t_count)
            level = math.exp(-n * divergence(t, b)) <= float(alpha)
            good = good and inside and level and math.exp(-n * divergence(t_count, p)) <= 1 - float(at_least)
        if good:
            return True
    return False


def search(family, null, boundary, alpha, wants, step="1", given=None, tried_to=None):
    """The first amount that works, the amount from which all larger ones work, and what happens between."""
    low = (null == "above") == (family.name != "negative_binomial")
    grain = number(step)
    last = family.lot if family.lot else tried_to
    outcomes, start = [], (-1 if low else 1)
    amounts = int(mpq(last) / grain)
    for index in range(1, amounts + 1):
        amount = grain * index
        if given is None:
            region = edge(family, amount, boundary, low, alpha, start)
            if region is not None:
                start = region
        else:
            fits = family.at_most(amount, boundary, low, given, alpha)
            region = given if fits else None
        outcomes.append((amount, region, failing(family, amount, low, region, boundary, alpha, wants)))
    works = [not reason for _, _, reason in outcomes]
    if True not in works:
        return None
    first = works.index(True)
    failures = [index for index, good in enumerate(works) if not good]
    from_on = failures[-1] + 1 if failures else 0
    return outcomes, first, from_on, low


def between(outcomes, first, from_on):
    """The stretches between the first amount and the last failure that fail."""
    parts, begin = [], None
    for amount, _, reason in outcomes[first:from_on + 1]:
        if reason and begin is None:
            begin = amount
        if not reason and begin is not None:
            parts.append(f"{shown(begin)}-{shown(previous)}" if begin != previous else shown(begin))
            begin = None
        previous = amount
    return " ".join(parts)


def shown(amount):
    return str(int(amount)) if amount.denominator == 1 else repr(float(amount))


def sets(name, null, boundary):
    parameter = {"poisson": "lambda", "hypergeometric": "D"}.get(name, "p")
    return parameter, f"{parameter} {'>=' if null == 'above' else '<='} {boundary}"


CASES = [
    # family, lot, null side, boundary, alpha, requirements, extra
    ("binomial", None, "above", "1 %", "0.05", [], {"given": 0}),
    ("binomial", None, "above", "1 %", "0.05", [], {"given": 1}),
    ("binomial", None, "above", "1 %", "0.05", [], {"given": 2}),
    ("binomial", None, "above", "5 %", "0.05", [], {"given": 0}),
    ("binomial", None, "above", "5 %", "0.05", [], {"given": 3}),
    ("binomial", None, "above", "10 %", "0.1", [], {"given": 5}),
    ("binomial", None, "above", "50 %", "0.125", [], {"given": 0}),
    ("binomial", None, "above", "1 %", "0.05", [], {}),
    ("binomial", None, "above", "0.2 %", "0.01", [], {}),
    ("binomial", None, "above", "1 %", "0.05", [("0.1 %", "0.74")], {"tried_to": 3000}),
    ("binomial", None, "above", "1 %", "0.05", [("0.1 %", "0.90")], {"tried_to": 6000}),
    ("binomial", None, "above", "3 %", "0.05", [("0.5 %", "0.90")], {"tried_to": 2500}),
    ("binomial", None, "above", "4 %", "0.05", [("0.5 %", "0.95")], {"tried_to": 2500}),
    ("binomial", None, "above", "5 %", "0.05", [("0.4 %", "0.90")], {"tried_to": 2000}),
    ("binomial", None, "above", "10 %", "0.1", [("5 %", "0.9")], {"tried_to": 4000}),
    ("binomial", None, "above", "20 %", "0.01", [("10 %", "0.8"), ("5 %", "0.99")], {"tried_to": 4000}),
    ("binomial", None, "above", "0.0002", "0.05", [("0.00005", "0.95")], {"tried_to": 150_000}),
    ("binomial", None, "below", "0.5", "0.05", [("0.75", "0.90")], {"tried_to": 1000}),
    ("binomial", None, "below", "0.5", "0.05", [("0.6", "0.8")], {"tried_to": 4000}),
    ("binomial", None, "below", "1 %", "0.05", [("5 %", "0.90")], {"tried_to": 3000}),
    ("binomial", None, "below", "0.1", "0.05", [("0.2", "0.90")], {"tried_to": 4000}),
    ("binomial", None, "below", "0.2", "0.025", [("0.35", "0.95"), ("0.5", "0.999")], {"tried_to": 3000}),
    ("hypergeometric", 240, "above", "12", "0.05", [], {"given": 0}),
    ("hypergeometric", 240, "above", "12", "0.05", [], {"given": 1}),
    ("hypergeometric", 240, "above", "12", "0.05", [], {}),
    ("hypergeometric", 240, "above", "12", "0.05", [("1", "0.78")], {}),
    ("hypergeometric", 240, "above", "12", "0.05", [("2", "0.89")], {}),
    ("hypergeometric", 240, "above", "12", "0.05", [("2", "0.95")], {}),
    ("hypergeometric", 60, "above", "3", "0.05", [], {}),
    ("hypergeometric", 500, "above", "25", "0.05", [("5", "0.95")], {}),
    ("hypergeometric", 1000, "above", "50", "0.05", [("10", "0.9")], {}),
    ("hypergeometric", 800, "below", "8", "0.05", [("40", "0.9")], {}),
    ("hypergeometric", 100, "above", "1", "0.05", [], {}),
    ("poisson", None, "above", "0.5", "0.05", [("0.2", "0.90")], {"tried_to": 500}),
    ("poisson", None, "above", "0.5", "0.05", [("0.2", "0.90")], {"tried_to": 500, "step": "0.5"}),
    ("poisson", None, "above", "2", "0.01", [("1", "0.95")], {"tried_to": 300, "step": "0.25"}),
    ("poisson", None, "above", "0.04", "0.1", [], {"given": 2}),
    ("poisson", None, "below", "0.02", "0.05", [("0.08", "0.9")], {"tried_to": 6000}),
    ("poisson", None, "below", "3", "0.05", [("4", "0.8")], {"tried_to": 400, "step": "0.1"}),
    ("negative_binomial", None, "above", "5 %", "0.05", [("2 %", "0.90")], {"tried_to": 60}),
    ("negative_binomial", None, "below", "10 %", "0.05", [("25 %", "0.90")], {"tried_to": 60}),
    ("negative_binomial", None, "above", "50 %", "0.1", [("30 %", "0.8")], {"tried_to": 60}),
]


def row(case):
    name, lot, null, boundary, alpha, wants, extra = case
    family = Family(name, lot)
    wanted = [(number(p), number(least)) for p, least in wants]
    level, end = number(alpha), number(boundary)
    tried_to = extra.get("tried_to", 3000)
    found = search(family, null, end, level, wanted, extra.get("step", "1"), extra.get("given"), tried_to)
    outcomes, first, from_on, low = found
    amount, region, _ = outcomes[first]
    parameter, null_text = sets(name, null, boundary)
    if wants and not lot and name != "negative_binomial":
        assert chernoff(family, low, end, level, wanted, mpq(tried_to)), case
    sign = "<=" if low else ">="
    statistic = "n" if name == "negative_binomial" else "x"
    return {
        "family": name,
        "setup": f"lot={lot}" if lot else "",
        "null_subset": null_text,
        "alpha": alpha,
        "requirements": "; ".join(f"{parameter} {'<=' if null == 'above' else '>='} {p}: {least}" for p, least in wants),
        "given_region": f"{statistic} {sign} {extra['given']}" if "given" in extra else "",
        "step": extra.get("step", ""),
        "smallest": shown(amount),
        "region": f"{statistic} {sign} {region}",
        "size": digits(family.exact_tail(amount, end, low, region)),
        "one_less_fails": outcomes[first - 1][2] if first else "nothing is less",
        "every_from": shown(outcomes[from_on][0]) if from_on < len(outcomes) else "",
        "failing_between": between(outcomes, first, from_on),
        "tried_to": shown(outcomes[-1][0]),
        "powers": "; ".join(digits(family.exact_tail(amount, p, low, region)) for p, _ in wanted),
    }


if __name__ == "__main__":
    table = []
    for case in CASES:
        line = {"id": f"N{len(table) + 1:03}"}
        line.update(row(case))
        print(" ".join(str(part) for part in list(line.values())[:14]), flush=True)
        table.append(line)
    write(
        "sample_sizes.csv",
        "Smallest sample sizes, every size tried.",
        [
            f"SciPy {scipy.__version__} in doubles, comparisons within 1e-9 of a limit and all printed figures by mpmath {mpmath.__version__} at 90 digits.",
            "smallest: the first amount that meets the level and every requirement; every_from: from here on all do. Up to tried_to",
            "each amount was tried; for requirements outside finite lots the rest is Chernoff's bound, asserted by the script",
            "(negative_binomial: tried only). failing_between: amounts between the two that fail.",
        ],
        table,
    )
