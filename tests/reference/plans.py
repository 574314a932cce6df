"""Writes plans.csv: whole plans, solved by exhaustive search (region_search.py) from their sets and levels.

Every bound of power (envelope) is found twice: from the form that the Neyman-Pearson lemma gives, exactly, and by a
general linear programme in doubles; both must agree to 1e-7 or the script stops.
"""

import mpmath
import scipy
from gmpy2 import mpq

from laws import digits, number, real
from region_search import (
    Line,
    Observation,
    attained,
    by_linear_programme,
    equal_tails,
    inner_region,
    inner_size,
    joint_tails,
    one_sided,
    peak,
    randomised_inner,
    randomised_tail,
)
from table import write

SPACES = {
    "binomial": "0 <= p <= 1",
    "negative_binomial": "0 <= p <= 1",
    "poisson": "lambda >= 0",
}
PARAMETER = {"binomial": "p", "negative_binomial": "p", "poisson": "lambda", "hypergeometric": "D"}


def setup(family, **parts):
    """The observation and its set-up as text."""
    if family == "hypergeometric":
        n, lot = parts["n"], parts["lot"]
        return Observation(family, units=n, lot=lot), f"n={n} lot={lot}"
    if family == "negative_binomial":
        return Observation(family, target=parts["r"]), f"r={parts['r']}"
    if family == "poisson":
        return Observation(family, units=number(parts["n"])), f"n={parts['n']}"
    return Observation(family, units=parts["n"]), f"n={parts['n']}"


def case(family, size, shape, ends, alpha, points, tails="", requirements=(), space=None, null=None, scale=1):
    """One problem. `ends` are the ends of the null next to the alternative, in the plan's own notation; `scale` turns
    that notation into the parameter of the law (the lot size, where a finite lot is described by p = D/N)."""
    parameter = "p" if scale != 1 else PARAMETER[family]
    observation, text = setup(family, **size)
    if space is None:
        space = f"0 <= D <= {size['lot']}" if family == "hypergeometric" else SPACES[family]
        space = "0 <= p <= 1" if scale != 1 else space
    forms = {
        "above": f"{parameter} >= {ends[0]}",
        "below": f"{parameter} <= {ends[0]}",
        "point": f"{parameter} = {ends[0]}",
        "interval": f"{ends[0]} <= {parameter} <= {ends[-1]}",
        "outside": f"{parameter} <= {ends[0]} or {parameter} >= {ends[-1]}",
    }
    return {
        "family": family,
        "observation": observation,
        "setup": text,
        "space": space,
        "null": null or forms[shape],
        "shape": shape,
        "ends": ends,
        "alpha": alpha,
        "tails": tails,
        "requirements": requirements,
        "points": points,
        "parameter": parameter,
        "scale": scale,
    }


def binomial():
    def b(n, *rest, **more):
        return case("binomial", {"n": n}, *rest, **more)

    yield b(59, "above", ["5 %"], "0.05", ["0", "0.1 %", "1 %", "5 %", "8 %"])
    yield b(58, "above", ["0.05"], "0.06", ["0.002", "0.01"])
    yield b(93, "above", ["5 %"], "0.05", ["0.4 %", "1 %", "4.9 %", "10 %"])
    yield b(299, "above", ["1 %"], "0.05", ["0.1 %", "0.5 %"])
    yield b(473, "above", ["1 %"], "0.05", ["0.1 %", "0.5 %"])
    yield b(628, "above", ["1 %"], "0.05", ["0.1 %", "0.5 %"])
    yield b(156, "above", ["4 %"], "0.05", ["0.5 %", "1 %"])
    yield b(208, "above", ["0.03"], "0.05", ["0.005"])
    yield b(221, "above", ["0.03"], "0.05", ["0.005"])
    yield b(257, "above", ["0.03"], "0.05", ["0.005"])
    yield b(30, "above", ["0.095"], "0.0502", ["0.01", "0.02"])
    yield b(400, "above", ["12000 ppm"], "0.1", ["1000 ppm", "5000 ppm"])
    yield b(20, "above", ["0.9"], "0.01", ["0.5", "0.7", "0.89"])
    yield b(75, "above", ["0.3333"], "0.2", ["0.2", "0.3"])
    yield b(100, "above", ["0.02"], "0.5", ["0.001"], null="p > 0.02")
    yield b(10, "above", ["0.5"], "0.0107421875", ["0.1", "0.3"])
    yield b(2, "above", ["0.9"], "0.01", ["0.5"])
    yield b(1, "above", ["0.95"], "0.05", ["0.2"])
    yield b(3, "above", ["0.5"], "0.125", ["0.25"])
    yield b(150, "above", ["0.06"], "0.025", ["0.01"], space="0 <= p <= 0.06", null="p = 0.06")
    yield b(150, "above", ["0.06"], "0.025", ["0.01"], space="0.001 <= p < 0.2", null="0.06 <= p < 0.2")
    yield b(50, "below", ["1 %"], "0.05", ["0.5 %", "2 %", "5 %", "20 %"])
    yield b(33, "below", ["0.5"], "0.05", ["0.75", "0.6"])
    yield b(34, "below", ["0.5"], "0.05", ["0.75"])
    yield b(35, "below", ["0.5"], "0.05", ["0.75"])
    yield b(10, "below", ["0.5"], "0.05", ["0.8"])
    yield b(10, "below", ["0.5"], "0.0546875", ["0.8"])
    yield b(20, "below", ["0.5"], "0.06", ["0.7"])
    yield b(20, "below", ["0.1"], "0.05", ["0.3", "1"])
    yield b(500, "below", ["0.001"], "0.1", ["0.005", "0.01"], null="p < 0.001")
    yield b(120, "below", ["0.02"], "0.001", ["0.1"], space="0.02 <= p <= 1", null="p = 0.02")
    yield b(800, "below", ["0.01"], "0.05", ["0.02", "0.03"])
    for n, p, alpha in [
        (10, "0.5", "0.109375"), (2, "0.5", "0.5"), (30, "0.2", "0.05"), (100, "0.5", "0.05"), (100, "0.03", "0.1"),
        (60, "0.05", "0.05"), (200, "0.1", "0.01"), (25, "0.9", "0.1"), (45, "0.02", "0.05"),
    ]:
        q = number(p)
        points = ["0.01" if q > mpq(1, 20) else "0.001", "0.95" if q > mpq(1, 2) else "0.6", p]
        yield b(n, "point", [p], alpha, points)
        yield b(n, "point", [p], alpha, points, tails="joint")
    for n, low, high, alpha in [
        (80, "0.1", "0.2", "0.05"), (50, "0.3", "0.35", "0.1"), (150, "2 %", "5 %", "0.05"), (40, "0.45", "0.55", "0.2"),
        (200, "0.01", "0.012", "0.01"), (12, "0.4", "0.6", "0.05"), (64, "0.25", "0.75", "0.1"), (100, "0.49", "0.51", "0.05"),
        (300, "0.05", "0.08", "0.05"),
    ]:
        a, c = number(low), number(high)
        points = [str(float(a / 2)), low, str(float((1 + c) / 2))]
        yield b(n, "interval", [low, high], alpha, points)
    yield b(90, "interval", ["0.2", "0.3"], "0.05", ["0.1", "0.45"], null="0.2 < p < 0.3")
    yield b(100, "outside", ["0.4", "0.6"], "0.05", ["0.5", "0.45", "0.58", "0.4", "0.3"])
    yield b(80, "outside", ["0.1", "0.4"], "0.05", ["0.2", "0.25"])
    yield b(81, "outside", ["0.1", "0.4"], "0.05", ["0.2"], requirements=[(["0.15", "0.2"], "0.2")])
    yield b(120, "outside", ["5 %", "20 %"], "0.05", ["10 %", "12 %"])
    yield b(120, "outside", ["5 %", "20 %"], "0.05", ["8 %"], requirements=[(["7 %", "9 %"], "0.1"), (["12 %", "13 %"], "0.7")])
    yield b(60, "outside", ["0.3", "0.7"], "0.01", ["0.5", "0.55"])
    yield b(150, "outside", ["0.02", "0.1"], "0.1", ["0.05"])
    yield b(200, "outside", ["0.35", "0.5"], "0.05", ["0.42"], requirements=[(["0.44", "0.44"], "0.5")])
    yield b(40, "outside", ["0.2", "0.8"], "0.1", ["0.5", "0.3"])
    yield b(100, "outside", ["0.45", "0.55"], "0.1", ["0.5"])


def poisson():
    def p(n, *rest, **more):
        return case("poisson", {"n": n}, *rest, **more)

    yield p("34", "above", ["0.5"], "0.05", ["0.2", "0.1", "0", "0.7"])
    yield p("33", "above", ["0.5"], "0.05", ["0.2"])
    yield p("6", "above", ["0.5"], "0.05", ["0.01"])
    yield p("12.5", "above", ["1.6"], "0.025", ["0.4", "0.8"])
    yield p("1", "above", ["20"], "0.1", ["10", "15"])
    yield p("0.75", "above", ["60"], "0.01", ["25"])
    yield p("250", "above", ["0.04"], "0.05", ["0.01"], null="lambda > 0.04")
    yield p("100", "below", ["0.02"], "0.05", ["0.05", "0.1", "0.01"])
    yield p("1", "below", ["3"], "0.05", ["9", "12"])
    yield p("7.25", "below", ["2"], "0.001", ["5"])
    yield p("40", "below", ["1.25"], "0.2", ["1.5", "2"])
    yield p("10", "below", ["0.3"], "0.05", ["1"], space="0.3 <= lambda <= 4", null="lambda = 0.3")
    for n, at, alpha in [("1", "10", "0.05"), ("20", "0.4", "0.1"), ("5.5", "6", "0.01"), ("1", "1.5", "0.05")]:
        points = [str(float(number(at) / 3)), str(float(number(at) * 2)), at]
        yield p(n, "point", [at], alpha, points)
        yield p(n, "point", [at], alpha, points, tails="joint")
    for n, low, high, alpha in [
        ("10", "1", "2", "0.05"), ("1", "8", "9", "0.1"), ("3.5", "4", "7", "0.02"), ("60", "0.5", "0.6", "0.05"),
    ]:
        yield p(n, "interval", [low, high], alpha, [str(float(number(low) / 2)), str(float(number(high) * 2)), high])
    yield p("20", "outside", ["1", "2"], "0.05", ["1.5", "1.3", "1.8"])
    yield p("1", "outside", ["10", "30"], "0.05", ["20", "18"])
    yield p("1", "outside", ["10", "30"], "0.05", ["17"], requirements=[(["16", "18"], "0.4")])
    yield p("8.5", "outside", ["2", "5"], "0.1", ["3", "3.5"])


def hypergeometric():
    def h(n, lot, *rest, **more):
        return case("hypergeometric", {"n": n, "lot": lot}, *rest, **more)

    yield h(52, 240, "above", ["12"], "0.05", ["0", "1", "2", "6", "12", "20"])
    yield h(51, 240, "above", ["12"], "0.06", ["1"])
    yield h(80, 240, "above", ["12"], "0.05", ["2", "1"])
    yield h(38, 60, "above", ["3"], "0.05", ["1", "2"])
    yield h(47, 120, "above", ["6"], "0.05", ["1"])
    yield h(56, 500, "above", ["25"], "0.05", ["1", "5"])
    yield h(240, 240, "above", ["12"], "0.05", ["11", "0", "12"])
    yield h(10, 10, "above", ["1"], "0.01", ["0"])
    yield h(125, 1000, "above", ["40"], "0.1", ["5", "10"], null="D > 39")
    yield h(30, 200, "above", ["150"], "0.05", ["120", "100"])
    yield h(100, 240, "above", ["5 %"], "0.05", ["0.0125", "0.025"], scale=240)
    # 4.9 % of 240 units is 11.76: the null begins at 12 units; above 5 % it begins at 13.
    yield h(60, 240, "above", ["0.05"], "0.05", ["0.0125"], scale=240, null="p >= 4.9 %")
    yield h(60, 240, "above", ["13"], "0.05", ["3"], null="D > 12")
    yield h(125, 800, "below", ["8"], "0.05", ["4", "16", "30", "60"])
    yield h(20, 100, "below", ["5"], "0.01", ["20", "40"])
    yield h(60, 90, "below", ["1"], "0.5", ["2", "6"])
    yield h(15, 30, "below", ["15"], "0.1", ["20", "25"])
    yield h(80, 1200, "below", ["12"], "0.05", ["36"], scale=1, null="D < 13")
    for n, lot, at, alpha in [(40, 200, "20", "0.05"), (50, 100, "50", "0.1"), (30, 500, "100", "0.05"), (80, 160, "8", "0.2")]:
        points = [str(int(at) // 4), str(int(at) * 2 - int(at) // 5), at]
        yield h(n, lot, "point", [at], alpha, points)
        yield h(n, lot, "point", [at], alpha, points, tails="joint")
    for n, lot, low, high, alpha in [(50, 300, "30", "45", "0.05"), (25, 80, "20", "24", "0.1"), (100, 400, "10", "12", "0.05")]:
        yield h(n, lot, "interval", [low, high], alpha, [str(int(low) // 3), str(int(high) * 3), low])
    yield h(60, 200, "outside", ["40", "90"], "0.05", ["60", "65", "70"])
    yield h(60, 200, "outside", ["40", "91"], "0.05", ["65"])
    yield h(70, 300, "outside", ["20", "70"], "0.05", ["45"], requirements=[(["40", "45"], "0.5")])
    yield h(50, 120, "outside", ["50", "70"], "0.1", ["60"])


def negative_binomial():
    def nb(r, *rest, **more):
        return case("negative_binomial", {"r": r}, *rest, **more)

    yield nb(1, "above", ["5 %"], "0.05", ["0.1 %", "1 %", "5 %"])
    yield nb(3, "above", ["5 %"], "0.05", ["1 %", "2 %", "0"])
    yield nb(2, "above", ["0.5"], "0.0625", ["0.2", "0.3"])
    yield nb(5, "above", ["0.1"], "0.05", ["0.03", "0.08"])
    yield nb(10, "above", ["0.2"], "0.1", ["0.1", "0.15"], null="p > 0.2")
    yield nb(4, "above", ["0.9"], "0.01", ["0.5"])
    yield nb(3, "below", ["0.1"], "0.05", ["0.3", "0.5", "0.05"])
    yield nb(5, "below", ["0.05"], "0.05", ["0.2"])
    yield nb(2, "below", ["0.5"], "0.25", ["0.8", "1"])
    yield nb(8, "below", ["0.3"], "0.01", ["0.7"])
    yield nb(1, "below", ["0.02"], "0.1", ["0.1"])
    yield nb(6, "below", ["0.1"], "0.2", ["0.15"], space="0.1 <= p <= 0.5", null="p = 0.1")
    for r, at, alpha in [(3, "0.2", "0.05"), (5, "0.5", "0.1"), (10, "0.1", "0.05"), (4, "0.3", "0.2")]:
        points = [str(float(number(at) / 4)), str(float((number(at) + 1) / 2)), at]
        yield nb(r, "point", [at], alpha, points)
        yield nb(r, "point", [at], alpha, points, tails="joint")
    for r, low, high, alpha in [(5, "0.2", "0.3", "0.05"), (8, "0.4", "0.5", "0.1"), (3, "0.1", "0.11", "0.05")]:
        yield nb(r, "interval", [low, high], alpha, [str(float(number(low) / 4)), str(float((number(high) + 1) / 2)), low])
    yield nb(10, "outside", ["0.2", "0.7"], "0.05", ["0.4", "0.45"])
    yield nb(6, "outside", ["0.1", "0.6"], "0.05", ["0.3"])
    yield nb(6, "outside", ["0.1", "0.6"], "0.05", ["0.3"], requirements=[(["0.2", "0.25"], "0.3")])


def value(problem, text):
    return number(text) * problem["scale"]


def is_null(problem, point):
    ends = [value(problem, end) for end in problem["ends"]]
    low, high = ends[0], ends[-1]
    return {
        "above": point >= low,
        "below": point <= low,
        "point": point == low,
        "interval": low <= point <= high,
        "outside": point <= low or point >= high,
    }[problem["shape"]]


def solve(problem):
    ends = [value(problem, end) for end in problem["ends"]]
    points = [value(problem, point) for point in problem["points"]]
    sets = [([value(problem, end) for end in where], number(at_least)) for where, at_least in problem["requirements"]]
    observation = problem["observation"]
    low, high = ends[0], ends[-1]
    midpoint = (low + high) / 2
    if observation.lattice:
        midpoint = mpq(int(midpoint))
    line = Line(observation, ends + [point for point in points if point > 0])
    alpha = number(problem["alpha"])
    level = line.comparable(alpha)
    shape = problem["shape"]
    if shape in ("above", "below"):
        region = one_sided(line, low, shape == "above", level)
    elif shape == "point" and problem["tails"] != "joint":
        region = equal_tails(line, low, level)
    elif shape in ("point", "interval"):
        region = joint_tails(line, low, high, level)
    else:
        wanted = [(where, line.comparable(at_least)) for where, at_least in sets]
        region = inner_region(line, low, high, level, wanted, midpoint)
    size, at = supremum(line, problem, region, low, high)
    assert real(size) <= real(level)
    assert line.observation.rational(line.last) or abs(real(size) - real(level)) > mpmath.mpf(10) ** -60
    row = {
        "family": problem["family"],
        "setup": problem["setup"],
        "parameter_space": problem["space"],
        "null_subset": problem["null"],
        "alpha": problem["alpha"],
        "tails": problem["tails"],
        "requirements": "; ".join(requirement(problem, *one) for one in problem["requirements"]),
        "region": line.text(region),
        "size": digits(size),
        "worst_at": digits(real(at) / problem["scale"], 15) if at is not None else "",
        "attained": "; ".join(digits(attained(line, region, where)) for where, _ in sets),
        "points": "; ".join(problem["points"]),
        "powers": "; ".join(digits(line.chance(point, region)) for point in points),
        "envelopes": "; ".join(envelope(line, problem, point, low, high, level) for point in points),
    }
    return row


def requirement(problem, where, at_least):
    low, high = where
    parameter = problem["parameter"]
    text = f"{parameter} = {low}" if low == high else f"{low} <= {parameter} <= {high}"
    return f"{text}: {at_least}"


def supremum(line, problem, region, low, high):
    """The largest probability of the region over the null, and the end where it is (empty if at both, or inside)."""
    if not region:
        return mpq(0), None
    if problem["shape"] == "outside":
        size, at = inner_size(line, low, high, *region[0])
        if size is None:
            return peak(line, *region[0]), None
        both = line.chance(low, region) == line.chance(high, region)
        return size, None if both else at
    at_low, at_high = line.chance(low, region), line.chance(high, region)
    if at_low == at_high:
        return at_low, low if low == high else None
    return (at_low, low) if at_low > at_high else (at_high, high)


def envelope(line, problem, point, low, high, level):
    """The greatest power at a point of the alternative; empty in the null."""
    if is_null(problem, point):
        return ""
    if problem["shape"] == "outside":
        bound, nulls = randomised_inner(line, low, high, point, level), [low, high]
        if bound is None:
            return ""
    else:
        nulls = [low if point < low else high]
        bound = randomised_tail(line, nulls[0], point, level, low=(point < nulls[0]) == line.observation.rising)
    other = by_linear_programme(line, nulls, point, level)
    assert abs(float(real(bound)) - other) < 1e-7, (problem["null"], problem["setup"], str(point), float(bound), other)
    return digits(bound)


if __name__ == "__main__":
    table = []
    for problems in (binomial(), hypergeometric(), poisson(), negative_binomial()):
        for problem in problems:
            row = {"id": f"R{len(table) + 1:03}"}
            row.update(solve(problem))
            print(row["id"], row["family"], row["setup"], row["null_subset"], row["alpha"], row["region"], row["size"][:10])
            table.append(row)
    write(
        "plans.csv",
        "Whole plans solved by exhaustive search: region, size, power, envelope.",
        [
            f"Exact rationals (gmpy2) for binomial, hypergeometric, negative_binomial; mpmath {mpmath.__version__} at 90 digits for poisson.",
            f"Envelopes also by a linear programme (SciPy {scipy.__version__}, HiGHS), agreeing to 1e-7.",
            "region: closed ranges of the statistic, an open end being the end of its support. worst_at: where the size is",
            "reached (empty where both ends tie). Lists are separated by `;`; an envelope is empty for a point in the null.",
            "All probabilities to 25 significant digits: an enclosure must hold them up to 1e-24 of their value.",
        ],
        table,
    )
