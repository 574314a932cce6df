"""The four laws of counted inspection, written for a reader and not for speed.

Two kinds of arithmetic are offered, because the scripts need both:

* exact rationals (gmpy2.mpq) for whole laws of moderate size: no rounding at all, ties are ties;
* mpmath at 90 significant digits for single events, whatever the sample size.

Formulae: textbook definitions of the laws (Johnson, Kemp and Kotz, "Univariate Discrete Distributions", from memory).
The program under test sums ratios outwards from the mode in doubles; nothing here is taken from it.
"""

from fractions import Fraction

import gmpy2
import mpmath
from gmpy2 import mpq

mpmath.mp.dps = 90

SIGNIFICANT = 25


def number(text):
    """The exact value of a decimal ("0.05"), a percentage ("5 %") or a fraction ("1/3")."""
    text = text.strip()
    if text.endswith("%"):
        return number(text[:-1]) / 100
    if text.endswith("ppm"):
        return number(text[:-3]) / 1_000_000
    return mpq(Fraction(text))


def real(value):
    """The value as an mpmath number."""
    if isinstance(value, type(mpq(0))):
        return mpmath.mpf(int(value.numerator)) / mpmath.mpf(int(value.denominator))
    return mpmath.mpf(value)


def digits(value, significant=SIGNIFICANT):
    """The value as text with 25 significant digits; zero and one where the value is exactly so."""
    if value == 0 or value == 1:
        return str(int(value))
    return mpmath.nstr(real(value), significant, min_fixed=-6, max_fixed=12)


class Binomial:
    """Nonconforming units among `units`, each nonconforming with probability `fraction`."""

    low = 0

    def __init__(self, units, fraction):
        self.units, self.fraction = units, mpq(fraction)
        self.high = units
        self.odds = None if self.fraction == 1 else real(self.fraction / (1 - self.fraction))

    def mean_and_deviation(self):
        p = real(self.fraction)
        return self.units * p, mpmath.sqrt(self.units * p * (1 - p))

    def term(self, count):
        """P(X = count) by logarithms of the gamma function."""
        n, p = self.units, real(self.fraction)
        if p == 0 or p == 1:
            return mpmath.mpf(count == (0 if p == 0 else n))
        choose = mpmath.loggamma(n + 1) - mpmath.loggamma(count + 1) - mpmath.loggamma(n - count + 1)
        return mpmath.exp(choose + count * mpmath.log(p) + (n - count) * mpmath.log1p(-p))

    def up(self, count):
        """P(X = count + 1) / P(X = count)."""
        return self.odds * (self.units - count) / (count + 1)

    def exact_terms(self, last=None):
        """All probabilities as rationals."""
        n, p = self.units, self.fraction
        return [mpq(gmpy2.comb(n, k)) * p**k * (1 - p) ** (n - k) for k in range(n + 1)]


class Hypergeometric:
    """Nonconforming units in a sample of `units` from a lot of `lot` that holds `nonconforming` such units."""

    def __init__(self, lot, nonconforming, units):
        self.lot, self.nonconforming, self.units = lot, nonconforming, units
        self.low = max(0, units - (lot - nonconforming))
        self.high = min(units, nonconforming)

    def mean_and_deviation(self):
        lot, n = mpmath.mpf(self.lot), self.units
        p = self.nonconforming / lot
        spread = n * p * (1 - p) * ((lot - n) / (lot - 1) if self.lot > 1 else 0)
        return n * p, mpmath.sqrt(spread)

    def term(self, count):
        def choose(n, k):
            return mpmath.loggamma(n + 1) - mpmath.loggamma(k + 1) - mpmath.loggamma(n - k + 1)

        good = self.lot - self.nonconforming
        return mpmath.exp(
            choose(self.nonconforming, count) + choose(good, self.units - count) - choose(self.lot, self.units)
        )

    def up(self, count):
        above = mpmath.mpf(self.nonconforming - count) * (self.units - count)
        return above / ((count + 1) * (self.lot - self.nonconforming - self.units + count + 1))

    def exact_terms(self, last=None):
        good = self.lot - self.nonconforming
        ways = gmpy2.comb(self.lot, self.units)
        return [
            mpq(gmpy2.comb(self.nonconforming, k) * gmpy2.comb(good, self.units - k), ways)
            if self.low <= k <= self.high
            else mpq(0)
            for k in range(self.units + 1)
        ]


class Poisson:
    """A count with mean `mean`."""

    low, high = 0, None

    def __init__(self, mean):
        self.mean = mpq(mean)
        self.real_mean = real(self.mean)

    def mean_and_deviation(self):
        return real(self.mean), mpmath.sqrt(real(self.mean))

    def term(self, count):
        m = real(self.mean)
        if m == 0:
            return mpmath.mpf(count == 0)
        return mpmath.exp(count * mpmath.log(m) - m - mpmath.loggamma(count + 1))

    def up(self, count):
        return self.real_mean / (count + 1)

    def exact_terms(self, last):
        """Not rational: 90 digits, up to `last`."""
        return [self.term(k) for k in range(last + 1)]


class NegativeBinomial:
    """Units inspected until `target` nonconforming ones are found."""

    high = None

    def __init__(self, target, fraction):
        self.target, self.fraction = target, mpq(fraction)
        self.low = target

    def mean_and_deviation(self):
        p = real(self.fraction)
        return self.target / p, mpmath.sqrt(self.target * (1 - p)) / p

    def term(self, count):
        r, p = self.target, real(self.fraction)
        if p == 0 or p == 1:
            return mpmath.mpf(p == 1 and count == r)
        choose = mpmath.loggamma(count) - mpmath.loggamma(r) - mpmath.loggamma(count - r + 1)
        return mpmath.exp(choose + r * mpmath.log(p) + (count - r) * mpmath.log1p(-p))

    def up(self, count):
        return (1 - real(self.fraction)) * count / (count - self.target + 1)

    def exact_terms(self, last):
        """Rational probabilities up to `last`; what lies beyond is one less their sum."""
        r, p = self.target, self.fraction
        terms = [mpq(0)] * (last + 1)
        for n in range(r, last + 1):
            terms[n] = mpq(gmpy2.comb(n - 1, r - 1)) * p**r * (1 - p) ** (n - r)
        return terms


def probability(law, first, last):
    """P(first <= X <= last), a missing end being the end of the support."""
    first = law.low if first is None else max(first, law.low)
    if law.high is not None:
        last = law.high if last is None else min(last, law.high)
    if last is not None and last < first:
        return mpmath.mpf(0)
    if isinstance(law, NegativeBinomial) and last != first:
        return waiting_probability(law, first, last)
    return summed(law, first, last)


def waiting_probability(law, first, last):
    """More than m units are inspected exactly if the first m hold fewer than r nonconforming ones."""

    def more_than(units):
        return summed(Binomial(units, law.fraction), 0, min(law.target - 1, units))

    def at_most(units):
        return summed(Binomial(units, law.fraction), law.target, units) if units >= law.target else mpmath.mpf(0)

    if last is None:
        return more_than(first - 1) if first > law.low else mpmath.mpf(1)
    mean, _ = law.mean_and_deviation()
    # Of the two differences, the one of the smaller tails: at 90 digits enough remain for every event of the tables.
    if last < mean:
        return at_most(last) - at_most(first - 1)
    return (more_than(first - 1) if first > law.low else mpmath.mpf(1)) - more_than(last)


def summed(law, first, last):
    """The largest term of the event from the gamma function, the others by ratios away from it.

    A sum stops where the terms have fallen below 1e-75 of it. The laws are log-concave: what is left out is below
    1e-60 of the sum.
    """
    mean, _ = law.mean_and_deviation()
    anchor = max(first, int(mpmath.floor(mean)))
    if last is not None:
        anchor = min(anchor, last)
    head = law.term(anchor)
    total, negligible = head, mpmath.mpf(10) ** -75
    term, at = head, anchor
    while last is None or at < last:
        term *= law.up(at)
        at += 1
        total += term
        if term < negligible * total:
            break
    term, at = head, anchor
    while at > first:
        at -= 1
        term /= law.up(at)
        total += term
        if term < negligible * total:
            break
    return total
