"""Derives every row of ../published/attribute_plans.csv again with SciPy; ends with 1 if one does not come out."""

import csv
import math
import sys

from scipy import optimize, stats

from laws import number
from table import HERE

PATH = HERE.parent / "published" / "attribute_plans.csv"


def parts(row):
    found = {}
    for part in row["plan"].split():
        name, value = part.split("=")
        found[name] = float(value) if "." in value else int(value)
    return found


def tail(row, plan, parameter, units=None):
    """P(X <= c)."""
    n = plan["n"] if units is None else units
    if row["family"] == "poisson":
        return stats.poisson.cdf(plan["c"], n * parameter)
    if row["family"] == "hypergeometric":
        return stats.hypergeom.cdf(plan["c"], int(row["lot"]), int(parameter), n)
    return stats.binom.cdf(plan["c"], n, parameter)


def second_look(plan, p, accept_last):
    """Chance of at most `accept_last` over both samples among those that go on after the first."""
    first, last = plan.get("c1", plan["r1"]) + 1, plan.get("c2", 10**9)
    stop = plan["r1"] if "c1" in plan else plan["n1"] + 1
    return sum(
        stats.binom.pmf(k, plan["n1"], p) * stats.binom.cdf(accept_last - k, plan["n2"], p)
        for k in range(first, min(stop, last + 1))
    )


def derived(row):
    plan, quantity = parts(row), row["quantity"]
    p = float(number(row["parameter"])) if row["parameter"] else None
    at = float(row["at"]) if row["at"] else None
    if quantity.startswith("acceptance") and quantity != "acceptance_number" or quantity.startswith("rejection") and quantity != "rejection_number":
        if "n1" in plan:
            value = stats.binom.cdf(plan["c1"], plan["n1"], p) + second_look(plan, p, plan["c2"])
        else:
            value = tail(row, plan, p)
        value = 1 - value if quantity.startswith("rejection") else value
        return 100 * value if quantity.endswith("percent") else value
    if quantity in ("quality_accepted", "mean_accepted"):
        root = optimize.brentq(lambda x: tail(row, plan, x) - at, 1e-12, 200 if row["family"] == "poisson" else 1 - 1e-12, xtol=1e-14)
        return root if quantity == "mean_accepted" else 100 * root
    if quantity == "smallest_n":
        return next(n for n in range(1, 10_000) if tail(row, plan, p, n) <= at)
    if quantity == "critical_count":
        return max(k for k in range(plan["n"]) if stats.binom.cdf(k, plan["n"], p) <= at)
    if quantity == "upper_tail":
        return stats.binom.sf(plan["from"] - 1, plan["n"], p)
    if quantity == "average_outgoing_quality":
        lot = int(row["lot"])
        return tail(row, plan, p) * p * (lot - plan["n"]) / lot
    if quantity == "average_total_inspection":
        return plan["n"] + (1 - tail(row, plan, p)) * (int(row["lot"]) - plan["n"])
    if quantity == "accepted_at_first":
        return stats.binom.cdf(plan["c1"], plan["n1"], p)
    if quantity == "rejected_at_first":
        return stats.binom.sf(plan["r1"] - 1, plan["n1"], p)
    if quantity == "stopped_at_first":
        return stats.binom.cdf(plan["r1"], plan["n1"], p)
    if quantity == "expected_size":
        return plan["n1"] + stats.binom.sf(plan["r1"], plan["n1"], p) * plan["n2"]
    return ratio_limit(row, plan, int(p))


def ratio_limit(row, plan, units):
    """Wald's limits for few against many nonconforming units: accept at or below, reject at or above."""
    low, high, alpha, beta = plan["p1"], plan["p2"], plan["alpha"], plan["beta"]
    bad, good = math.log(high / low), math.log((1 - low) / (1 - high))
    width = bad + good
    if row["quantity"] == "acceptance_number":
        return math.floor((-math.log((1 - alpha) / beta) + units * good) / width)
    return math.ceil((math.log((1 - beta) / alpha) + units * good) / width)


def main():
    with open(PATH, encoding="utf-8") as table:
        rows = list(csv.DictReader(line for line in table if not line.startswith("#")))
    wrong = 0
    for row in rows:
        value = derived(row)
        if abs(value - float(row["value"])) > float(row["tolerance"]):
            wrong += 1
            print(row["id"], row["quantity"], "printed", row["value"], "derived", value)
    print(f"{len(rows)} rows, {wrong} do not come out")
    return 1 if wrong else 0


if __name__ == "__main__":
    sys.exit(main())
