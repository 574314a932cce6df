"""Critical regions by exhaustive search: every candidate region is looked at, its size computed exactly.

The rules are those of the design ("Which region"): a one-sided null gets the largest tail of size at most alpha, a
point two tails of half the level each or a joint choice, an interval the joint choice, a null outside an interval an
inner range. Nothing is optimised and nothing is approximated: n is small and every region is tried.

A law is a list of probabilities by count, the last entry of an endless law holding all that lies beyond.
"""

import functools

import gmpy2
import mpmath
from gmpy2 import mpq

from laws import Binomial, Hypergeometric, NegativeBinomial, Poisson, real


class Observation:
    """A family with its set-up: gives the law of the statistic at a parameter value, exactly.

    Poisson probabilities are not rational; there 90 digits stand for exact ones (no tie can occur: e is transcendental).
    So they do for long waiting times, whose rational probabilities have thousands of digits; a comparison nearer than
    1e-60 would stop the script.
    """

    def __init__(self, family, units=None, lot=None, target=None):
        self.family, self.units, self.lot, self.target = family, units, lot, target
        self.cache = {}

    @property
    def lattice(self):
        return self.family == "hypergeometric"

    @property
    def rising(self):
        """Whether the statistic grows with the parameter."""
        return self.family != "negative_binomial"

    @property
    def endless(self):
        return self.family in ("poisson", "negative_binomial")

    def rational(self, last):
        """Whether the law is given in rationals."""
        return self.family in ("binomial", "hypergeometric") or (self.family == "negative_binomial" and last <= 300)

    def last(self, parameters):
        """A count beyond which nothing matters at any of the parameters (for endless laws, 1e-40 is left)."""
        if not self.endless:
            return self.units
        largest = 0
        for parameter in parameters:
            if self.family == "poisson":
                mean = self.units * parameter
                largest = max(largest, int(mean + 15 * float(mean + 30) ** 0.5 + 40))
            elif parameter > 0:
                mean = self.target / parameter
                largest = max(largest, int(mean * 8 + 60))
        return largest

    def law(self, parameter, last):
        """P(X = k) for k = 0..last, and for endless laws P(X > last) as one entry more."""
        key = (parameter, last)
        if key not in self.cache:
            if self.family == "binomial":
                terms = Binomial(int(self.units), parameter).exact_terms()
            elif self.family == "hypergeometric":
                terms = Hypergeometric(self.lot, int(parameter), int(self.units)).exact_terms()
            elif self.family == "poisson":
                terms = Poisson(self.units * parameter).exact_terms(last)
                terms.append(1 - sum(terms))
            elif parameter == 0:
                zero = mpq(0) if self.rational(last) else mpmath.mpf(0)
                terms = [zero] * (last + 1) + [zero + 1]
            else:
                law = NegativeBinomial(self.target, parameter)
                if self.rational(last):
                    terms = law.exact_terms(last)
                else:
                    terms = [law.term(k) if k >= self.target else mpmath.mpf(0) for k in range(last + 1)]
                terms.append(1 - sum(terms))
            self.cache[key] = terms
        return self.cache[key]


def running(terms):
    """Sums of the first k entries, k = 0, 1, …"""
    sums = [terms[0] * 0]
    for term in terms:
        sums.append(sums[-1] + term)
    return sums


class Line:
    """The laws at the points that matter, over counts 0..last (and one entry for all beyond)."""

    def __init__(self, observation, parameters):
        self.observation = observation
        self.last = observation.last(parameters)
        self.top = self.last + (1 if observation.endless else 0)
        self.low = observation.target or 0
        self.cumulated = {}

    def sums(self, parameter):
        if parameter not in self.cumulated:
            self.cumulated[parameter] = running(self.terms(parameter))
        return self.cumulated[parameter]

    def comparable(self, level):
        """A level in the arithmetic of the probabilities."""
        return level if self.observation.rational(self.last) else real(level)

    def terms(self, parameter):
        return self.observation.law(parameter, self.last)

    def text(self, region):
        """`..1 90..` and the like; a range that reaches the end of the support is left open there."""
        parts = []
        for first, last in region:
            left = "" if first <= self.low else str(first)
            right = "" if last >= self.top else str(last)
            parts.append(f"{left}..{right}")
        return " ".join(parts) if parts else "none"

    def chance(self, parameter, region):
        sums = self.sums(parameter)
        return sum((sums[last + 1] - sums[first] for first, last in region), sums[0])


def low_tail(line, parameter, level):
    """The largest k with P(X < k) <= level: counts 0..k-1 form the tail."""
    sums = line.sums(parameter)
    held = max(k for k, value in enumerate(sums) if value <= level)
    return [] if held <= line.low else [(line.low, held - 1)]


def high_tail(line, parameter, level):
    sums = line.sums(parameter)
    whole = sums[-1]
    first = min(k for k, value in enumerate(sums) if whole - value <= level)
    return [] if first > line.top else [(first, line.top)]


def one_sided(line, boundary, null_above, level):
    """The largest tail, at the end of the null next to the alternative."""
    if null_above == line.observation.rising:
        return low_tail(line, boundary, level)
    return high_tail(line, boundary, level)


def equal_tails(line, point, level):
    return low_tail(line, point, level / 2) + high_tail(line, point, level / 2)


def joint_tails(line, below, above, level):
    """Null from `below` to `above`: of all two-tailed regions of size <= level that no larger one contains, the one
    whose tail sizes, each at its own end, differ least; then the smaller size; then the larger lower tail.

    The power of a two-tailed region falls and then rises again in the parameter (the laws are totally positive), so
    the supremum over the null is at one of its ends.
    """
    # The low tail of the statistic belongs to small parameters, unless the statistic falls with the parameter.
    low_end, high_end = (below, above) if line.observation.rising else (above, below)
    at_low, at_high = line.sums(low_end), line.sums(high_end)
    whole_low, whole_high = at_low[-1], at_high[-1]

    def size(held, first):
        return max(at_low[held] + whole_low - at_low[first], at_high[held] + whole_high - at_high[first])

    # For every low tail the largest high tail that fits: the others are contained in it.
    fits = []
    first = line.low
    for held in range(line.low, line.top + 2):
        first = max(first, held)
        while first <= line.top + 1 and size(held, first) > level:
            first += 1
        if first > line.top + 1:
            break
        fits.append((held, first))
    maximal = [
        (held, first) for held, first in fits if not any(h > held and f <= first for h, f in fits)
    ]
    best = min(
        maximal,
        key=lambda pair: (
            abs(at_low[pair[0]] - (whole_high - at_high[pair[1]])),
            size(*pair),
            -at_low[pair[0]],
            -pair[0],
        ),
    )
    held, first = best
    region = [] if held <= line.low else [(line.low, held - 1)]
    return region + ([] if first > line.top else [(first, line.top)])


@functools.cache
def binomial_terms(units, fraction):
    return Binomial(units, fraction).exact_terms()


def slope_sign(line, parameter, first, last):
    """The sign of the derivative of P(first <= X <= last) in the parameter, times a positive factor."""
    observation = line.observation
    if observation.family == "binomial":
        n = int(observation.units)
        smaller = binomial_terms(n - 1, parameter) if n > 1 else [mpq(1)]
        return (smaller[first - 1] if first > 0 else 0) - (smaller[last] if last < n else 0)
    if observation.family == "poisson":
        terms = line.terms(parameter)
        return (terms[first - 1] if first > 0 else 0) - (terms[last] if last < line.top else 0)
    # P(N <= m) = P(Bin(m, p) >= r) has the derivative m P(Bin(m - 1, p) = r - 1).
    r = observation.target

    def slope(units):
        if units < r:
            return mpmath.mpf(0)
        p = real(parameter)
        return units * mpmath.binomial(units - 1, r - 1) * p ** (r - 1) * (1 - p) ** (units - r)

    rise = slope(last) if last < line.top else mpmath.mpf(0)
    return rise - slope(first - 1)


def inner_size(line, below, above, first, last):
    """The supremum of P(first <= X <= last) over parameters <= below and >= above, and where it is.

    The probability of an inner range rises to one peak and falls again. Where the peak lies between the two limits, the
    supremum is at one of them. Where it lies beyond a limit, nothing is returned and `peak` gives the supremum.
    """
    region = [(first, last)]
    at_below, at_above = line.chance(below, region), line.chance(above, region)
    if line.observation.lattice:
        lot = line.observation.lot
        inside = [(line.chance(mpq(d), region), mpq(d)) for d in range(0, int(below) + 1)]
        inside += [(line.chance(mpq(d), region), mpq(d)) for d in range(int(above), lot + 1)]
        return max(inside, key=lambda entry: (entry[0], -entry[1]))
    if slope_sign(line, below, first, last) < 0 or slope_sign(line, above, first, last) > 0:
        return None, None
    return (at_below, below) if at_below >= at_above else (at_above, above)


def inner_region(line, below, above, level, requirements, midpoint):
    """Null outside (below, above): of all inner ranges of size <= level that no larger one contains, the one with the
    greatest smallest (attained - at_least); then the greatest power at the midpoint; then the smallest `from`.
    """
    def fits(first, last):
        if max(line.chance(below, [(first, last)]), line.chance(above, [(first, last)])) > level:
            return False
        size, _ = inner_size(line, below, above, first, last)
        return peak(line, first, last) <= real(level) if size is None else size <= level

    # A part of a range that fits also fits. So the farthest end grows with the start, only the farthest end of a start
    # counts, and that only if no earlier start reaches as far.
    maximal, reached = [], -1
    for first in range(line.low, line.top + 1):
        last = max(first - 1, reached)
        while last < line.top and fits(first, last + 1):
            last += 1
        if last > reached and last >= first:
            maximal.append((first, last))
            reached = last
    if not maximal:
        return []

    def margin(region):
        return min((attained(line, region, where) - at_least for where, at_least in requirements), default=0)

    first, last = min(
        maximal, key=lambda pair: (-margin([pair]), -line.chance(midpoint, [pair]), pair[0])
    )
    return [(first, last)]


def attained(line, region, where):
    """The infimum over a closed interval of the parameter: the power rises and falls, so it is at an end."""
    return min(line.chance(point, region) for point in where)


def peak(line, first, last):
    """The largest probability of an inner range over all parameters."""
    observation = line.observation
    if first <= line.low or last >= line.top:
        return mpmath.mpf(1)
    length = last - first + 1
    if observation.family == "poisson":
        # mu^length = last! / (first - 1)!
        mean = mpmath.exp((mpmath.loggamma(last + 1) - mpmath.loggamma(first)) / length)
        return sum(mpmath.exp(k * mpmath.log(mean) - mean - mpmath.loggamma(k + 1)) for k in range(first, last + 1))
    if observation.family == "binomial":
        n = int(observation.units)
        # odds^length = C(n-1, first-1) / C(n-1, last)
        odds = mpmath.power(mpmath.binomial(n - 1, first - 1) / mpmath.binomial(n - 1, last), mpmath.mpf(1) / length)
        p = odds / (1 + odds)
        return sum(mpmath.binomial(n, k) * p**k * (1 - p) ** (n - k) for k in range(first, last + 1))
    r = observation.target
    # (1-p)^length = (first-1) C(first-2, r-1) / (last C(last-1, r-1))
    ratio = mpmath.mpf(first - 1) * mpmath.binomial(first - 2, r - 1) / (last * mpmath.binomial(last - 1, r - 1))
    q = mpmath.power(ratio, mpmath.mpf(1) / length)
    return sum(mpmath.binomial(k - 1, r - 1) * (1 - q) ** r * q ** (k - r) for k in range(first, last + 1))


def randomised_tail(line, null_point, point, level, low):
    """The greatest power at `point` of any test of level `level` at `null_point`: Neyman and Pearson's tail, the
    probability of its last count split so that the size is exact."""
    at_null, at_point = line.terms(null_point), line.terms(point)
    counts = range(len(at_null)) if low else range(len(at_null) - 1, -1, -1)
    size = power = at_null[0] * 0
    for count in counts:
        if size + at_null[count] > level:
            return power + at_point[count] * (level - size) / at_null[count]
        size += at_null[count]
        power += at_point[count]
    return power


def randomised_inner(line, below, above, point, level):
    """The greatest power at `point` of any test of level `level` at both null points: an inner range, its first and
    last count split so that both sizes are exact (generalised Neyman-Pearson lemma)."""
    f, g, h = line.terms(below), line.terms(above), line.terms(point)
    sums = [running(terms) for terms in (f, g, h)]
    best = None
    for first in range(line.low, line.top):
        for last in range(first + 1, line.top + 1):
            if min(sums[0][last + 1] - sums[0][first], sums[1][last + 1] - sums[1][first]) < level:
                continue
            inner = [s[last] - s[first + 1] for s in sums]
            if inner[0] > level or inner[1] > level:
                break
            spare = (level - inner[0], level - inner[1])
            determinant = f[first] * g[last] - f[last] * g[first]
            if determinant == 0:
                continue
            left = (spare[0] * g[last] - spare[1] * f[last]) / determinant
            right = (f[first] * spare[1] - g[first] * spare[0]) / determinant
            if 0 <= left <= 1 and 0 <= right <= 1:
                power = inner[2] + left * h[first] + right * h[last]
                best = power if best is None else max(best, power)
    return best


def by_linear_programme(line, null_points, point, level):
    """The same bound by a general linear programme in doubles: a witness, good to about 1e-8."""
    from scipy.optimize import linprog

    def doubles(parameter):
        return [float(real(term)) for term in line.terms(parameter)]

    found = linprog(
        [-value for value in doubles(point)],
        A_ub=[doubles(null) for null in null_points],
        b_ub=[float(level)] * len(null_points),
        bounds=(0, 1),
        method="highs",
    )
    return -found.fun
