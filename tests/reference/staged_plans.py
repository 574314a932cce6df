"""Writes staged_plans.csv: figures of plans with more than one look, of retests, sorted lots and imperfect inspection.

A staged plan is followed unit by unit in exact rationals: the probability of every count that keeps inspection going,
and what is accepted, rejected or undecided at every look. Nothing is approximated but the limits of Wald's ratio test,
whose logarithms are taken at 90 digits.
"""

import mpmath
from gmpy2 import comb, mpq

from laws import digits, number, real
from table import write


def binomial_terms(units, p):
    return [mpq(comb(units, k)) * p**k * (1 - p) ** (units - k) for k in range(units + 1)]


def staged(looks, p):
    """Chance that the null is rejected, chance that it is retained, and units inspected on average.

    A look is (units so far, highest count that retains or None, ...): given as two predicates of the count.
    """
    going, seen = {0: mpq(1)}, 0
    rejected = retained = expected = mpq(0)
    for units, retain, reject in looks:
        further = units - seen
        terms = binomial_terms(further, p)
        expected += further * sum(going.values(), mpq(0))
        after = {}
        for count, chance in going.items():
            for more, term in enumerate(terms):
                after[count + more] = after.get(count + more, mpq(0)) + chance * term
        rejected += sum((chance for count, chance in after.items() if reject(count)), mpq(0))
        retained += sum((chance for count, chance in after.items() if retain(count)), mpq(0))
        going = {count: chance for count, chance in after.items() if not reject(count) and not retain(count)}
        seen = units
    assert rejected + retained == 1 and not going
    return rejected, retained, expected


def at_most(limit):
    return lambda count: limit is not None and count <= limit


def at_least(limit):
    return lambda count: limit is not None and count >= limit


# name, null, alpha, stages as (size of the stage, retain_null, reject_null), points; limits are (sign, count)
DOUBLE = [
    ("double 99/99", "p >= 4 %", [(99, (">=", 3), ("<=", 0)), (99, (">=", 4), ("<=", 3))], ["4 %", "0.5 %", "1 %", "2 %", "8 %"]),
    ("double 50/100", "p >= 10 %", [(50, (">=", 7), ("<=", 2)), (100, (">=", 7), ("<=", 6))], ["10 %", "6 %", "1 %", "3 %"]),
    ("double 77/154", "p >= 5 %", [(77, (">=", 5), ("<=", 1)), (154, (">=", 5), ("<=", 4))], ["5 %", "1 %", "2.5 %"]),
    ("two stages 9/8", "p <= 5 %", [(9, ("<=", 0), None), (8, ("<=", 2), (">=", 3))], ["5 %", "25 %"]),
    ("two stages 10/19", "p <= 10 %", [(10, ("<=", 1), None), (19, ("<=", 5), (">=", 6))], ["10 %", "30 %"]),
    ("two stages 15/10", "p <= 10 %", [(15, ("<=", 1), None), (10, ("<=", 5), (">=", 6))], ["10 %", "30 %"]),
    ("two stages 13/30", "p <= 20 %", [(13, ("<=", 3), None), (30, ("<=", 12), (">=", 13))], ["20 %", "40 %"]),
    ("two stages 15/31", "p <= 30 %", [(15, ("<=", 5), None), (31, ("<=", 18), (">=", 19))], ["30 %", "50 %"]),
    ("two stages 13/14", "p <= 5 %", [(13, ("<=", 0), None), (14, ("<=", 3), (">=", 4))], ["5 %", "20 %"]),
    ("three stages", "p >= 5 %", [(40, (">=", 3), None), (40, (">=", 4), ("<=", 0)), (60, (">=", 4), ("<=", 3))], ["5 %", "1 %", "0.2 %"]),
    ("extension of 59/0", "p >= 5 %", [(59, (">=", 2), ("<=", 0)), (34, (">=", 2), ("<=", 1))], ["5 %", "1 %"]),
]

RATIO_TESTS = [
    # null boundary, against, alpha, beta, stop_by, points
    ("6 %", "1 %", "0.05", "0.1", 150, ["6 %", "1 %", "3 %", "0.1 %"]),
    ("10 %", "2 %", "0.05", "0.1", 80, ["10 %", "2 %", "5 %"]),
    ("5 %", "0.5 %", "0.1", "0.1", 120, ["5 %", "0.5 %"]),
]


def predicate(limit):
    if limit is None:
        return at_most(None)
    sign, count = limit
    return at_most(count) if sign == "<=" else at_least(count)


def double_rows():
    for name, null, stages, points in DOUBLE:
        seen, looks, text = 0, [], []
        for size, retain, reject in stages:
            seen += size
            looks.append((seen, predicate(retain), predicate(reject)))
            limits = [f"size {size}"]
            limits += [f"retain x {retain[0]} {retain[1]}"] if retain else []
            limits += [f"reject x {reject[0]} {reject[1]}"] if reject else []
            text.append(", ".join(limits))
        for point in points:
            rejected, _, expected = staged(looks, number(point))
            yield base("stages", null, "; ".join(text), point, "rejection", rejected, name)
            yield base("stages", null, "; ".join(text), point, "expected_sample_size", expected, name)


def ratio_limits(p0, p1, alpha, beta, stop_by):
    """Wald: reject the null when the likelihood ratio of p1 against p0 reaches (1 - beta)/alpha, retain it when it falls to
    beta/(1 - alpha); whoever is undecided at the end retains the null."""
    up = mpmath.log((1 - real(beta)) / real(alpha))
    down = mpmath.log(real(beta) / (1 - real(alpha)))
    per_bad = mpmath.log(real(p1) / real(p0))
    per_good = mpmath.log((1 - real(p1)) / (1 - real(p0)))

    def ratio(units, count):
        return count * per_bad + (units - count) * per_good

    for units in range(1, stop_by + 1):
        last = units == stop_by

        def reject(count, units=units):
            return ratio(units, count) >= up

        def retain(count, units=units, last=last):
            return ratio(units, count) <= down or (last and ratio(units, count) < up)

        yield units, retain, reject


def ratio_rows():
    for null, against, alpha, beta, stop_by, points in RATIO_TESTS:
        looks = list(ratio_limits(number(null), number(against), number(alpha), number(beta), stop_by))
        setup = f"against p = {against}, beta {beta}, stop_by {stop_by}, alpha {alpha}"
        for point in points:
            rejected, _, expected = staged(looks, number(point))
            yield base("sequential", f"p >= {null}", setup, point, "rejection", rejected, "")
            yield base("sequential", f"p >= {null}", setup, point, "expected_sample_size", expected, "")


def single(units, accept, p):
    return sum(binomial_terms(units, p)[: accept + 1], mpq(0))


def retest_rows():
    for units, accept, times in [(59, 0, 1), (59, 0, 2), (93, 1, 1), (299, 0, 3)]:
        for point in ["5 %", "1 %", "0.1 %"] if units < 200 else ["1 %", "0.1 %"]:
            once = single(units, accept, number(point))
            ever = 1 - (1 - once) ** (times + 1)
            null = "p >= 1 %" if units == 299 else "p >= 5 %"
            setup = f"n {units}, reject x <= {accept}, times {times}"
            yield base("retest", null, setup, point, "rejection", ever, "")


def sorted_lots(units, accept, lot, p):
    """Average outgoing quality and average total inspection: every nonconforming unit that is found is replaced."""
    passed = single(units, accept, p)
    return passed * p * (lot - units) / lot, units + (1 - passed) * (lot - units)


def rectification_rows():
    for units, accept, lot, null, points in [
        (52, 3, 10_000, "p >= 12 %", ["1 %", "2 %", "4 %", "5 %", "6 %", "8 %", "10 %", "12 %"]),
        (93, 1, 1_000, "p >= 5 %", ["0.5 %", "1 %", "2 %", "5 %"]),
        (65, 3, 5_000, "p >= 11 %", ["1 %", "3 %"]),
    ]:
        setup = f"n {units}, reject x <= {accept}, lot_size {lot}"
        for point in points:
            quality, inspected = sorted_lots(units, accept, lot, number(point))
            yield base("rectification", null, setup, point, "aoq", quality, "")
            yield base("rectification", null, setup, point, "ati", inspected, "")

        def passed(p, units=units, accept=accept):
            return sum(mpmath.binomial(units, k) * p**k * (1 - p) ** (units - k) for k in range(accept + 1))

        # Between 0 and 1 the outgoing quality rises to one peak: the slope of p * passed(p) has one root there.
        def slope(p, units=units, accept=accept):
            return passed(p) - p * units * mpmath.binomial(units - 1, accept) * p**accept * (1 - p) ** (units - 1 - accept)

        where = mpmath.findroot(slope, (mpmath.mpf("0.001"), mpmath.mpf("0.5")), solver="anderson", tol=1e-100, maxsteps=300)
        limit = where * passed(where) * (lot - units) / lot
        yield base("rectification", null, setup, digits(where, 15), "aoql", limit, "the point is where the limit is reached")


def inspection_rows():
    for units, accept, null, misses, alarms, points in [
        (299, 0, "p >= 1 %", "20 %", "0 %", ["1 %", "0.1 %"]),
        (373, 0, "p >= 1 %", "20 %", "0 %", ["1 %", "0.1 %"]),
        (372, 0, "p >= 1 %", "20 %", "0 %", ["1 %"]),
        (299, 0, "p >= 1 %", "5 %", "0.5 %", ["1 %", "0.1 %"]),
        (93, 1, "p >= 5 %", "2 %", "0.1 %", ["5 %", "1 %", "0.4 %"]),
    ]:
        for point in points:
            p, missed, alarm = number(point), number(misses), number(alarms)
            observed = p * (1 - missed) + (1 - p) * alarm
            setup = f"n {units}, reject x <= {accept}, misses {misses}, false_alarms {alarms}"
            yield base("inspection", null, setup, point, "rejection", single(units, accept, observed), "")


def base(kind, null, setup, point, quantity, value, note):
    return {
        "kind": kind,
        "null_subset": null,
        "setup": setup,
        "point": point,
        "quantity": quantity,
        "value": digits(value),
        "note": note,
    }


if __name__ == "__main__":
    table = []
    for source in (double_rows, ratio_rows, retest_rows, rectification_rows, inspection_rows):
        for line in source():
            row = {"id": f"S{len(table) + 1:03}"}
            row.update(line)
            table.append(row)
            print(*list(row.values())[:7])
    write(
        "staged_plans.csv",
        "Staged plans, ratio tests, retests, sorted lots, imperfect inspection: all binomial.",
        [
            f"Exact rationals (gmpy2); limits of ratio tests and the outgoing quality limit by mpmath {mpmath.__version__} at 90 digits.",
            "rejection: chance that the null is rejected; a stage's counts run over all stages so far. aoq, ati, aoql: average",
            "outgoing quality, average total inspection, outgoing quality limit, found nonconforming units replaced.",
            "25 significant digits.",
        ],
        table,
    )
