//! The law of a count, given by the ratios of its neighbouring probabilities.
//!
//! Every discrete family of the program has P(X = k+1) / P(X = k) = scale · Π(linear in k) / Π(linear in k), falling in
//! k (the laws are log-concave). With these ratios all probabilities follow from + − × ÷ alone.

use num_bigint::BigInt;
use num_rational::BigRational;
use num_traits::{One, ToPrimitive, Zero};

use super::arithmetic::{Arithmetic, DoubleDouble};
use super::exact::Exact;

/// `offset + slope · k` with a slope of −1, 0 or 1: a whole number that is never negative on the support.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Linear {
    offset: i64,
    slope: i64,
}

impl Linear {
    /// `offset + k`.
    pub fn rising(offset: i64) -> Self {
        Self { offset, slope: 1 }
    }

    /// `offset − k`.
    pub fn falling(offset: i64) -> Self {
        Self { offset, slope: -1 }
    }

    /// The constant one.
    pub fn one() -> Self {
        Self {
            offset: 1,
            slope: 0,
        }
    }

    /// Its value at `k`.
    pub fn at(self, k: u64) -> i64 {
        self.offset + self.slope * k as i64
    }

    fn largest(self, low: u64, high: u64) -> i64 {
        self.at(low).max(self.at(high))
    }
}

/// P(X = k+1) / P(X = k).
#[derive(Clone, Debug)]
pub struct Ratio {
    /// Factors above the line.
    pub above: [Linear; 2],
    /// Factors below the line.
    pub below: [Linear; 2],
    /// Constant factor, positive.
    pub scale: Exact,
}

/// The ratio prepared for one precision.
#[derive(Clone, Copy, Debug)]
pub struct PreparedRatio<T> {
    above: [Linear; 2],
    below: [Linear; 2],
    scale_above: T,
    scale_below: T,
    /// Roundings in one value of the ratio, and one more for the product that uses it.
    pub roundings: f64,
}

impl<T: Arithmetic> PreparedRatio<T> {
    /// P(k+1)/P(k).
    #[inline]
    pub fn up(&self, k: u64) -> T {
        let (above, below) = self.sides(k);
        above.over(below)
    }

    /// P(k)/P(k+1).
    #[inline]
    pub fn down(&self, k: u64) -> T {
        let (above, below) = self.sides(k);
        below.over(above)
    }

    #[inline]
    fn sides(&self, k: u64) -> (T, T) {
        let factor = |linear: Linear| T::of(linear.at(k) as f64);
        (
            factor(self.above[0])
                .times(factor(self.above[1]))
                .times(self.scale_above),
            factor(self.below[0])
                .times(factor(self.below[1]))
                .times(self.scale_below),
        )
    }
}

impl Ratio {
    /// Prepares for doubles. Where both sides of the fraction are whole numbers below 2⁵³ on the whole stretch, they are
    /// exact, and one value of the ratio carries a single rounding.
    pub fn in_doubles(&self, low: u64, high: u64) -> PreparedRatio<f64> {
        const EXACT: f64 = 9_007_199_254_740_992.0;
        let rational = self.scale.as_rational();
        let magnitude = |sides: &[Linear; 2], scale: f64| {
            sides
                .iter()
                .map(|side| side.largest(low, high).max(1) as f64)
                .product::<f64>()
                * scale
        };
        if let (Some(above), Some(below)) = (rational.numer().to_u64(), rational.denom().to_u64()) {
            let (above, below) = (above as f64, below as f64);
            if magnitude(&self.above, above) < EXACT && magnitude(&self.below, below) < EXACT {
                return self.prepared(above, below, 2.0);
            }
        }
        // Two products above (with the rounding of the scale itself three), two below, the quotient, the use.
        self.prepared(self.scale.to_f64(), 1.0, 7.0)
    }

    /// Prepares for pairs of doubles.
    pub fn in_double_doubles(&self) -> PreparedRatio<DoubleDouble> {
        let high = self.scale.to_f64();
        let low = Exact::from_f64(high).map_or(0.0, |head| (&self.scale - &head).to_f64());
        self.prepared(DoubleDouble::new(high, low), DoubleDouble::ONE, 7.0)
    }

    fn prepared<T: Arithmetic>(&self, above: T, below: T, roundings: f64) -> PreparedRatio<T> {
        PreparedRatio {
            above: self.above,
            below: self.below,
            scale_above: above,
            scale_below: below,
            roundings,
        }
    }

    /// Both sides of the fraction at `k` as whole numbers.
    pub fn whole_sides(&self, k: u64) -> (BigInt, BigInt) {
        let product =
            |sides: &[Linear; 2]| BigInt::from(sides[0].at(k)) * BigInt::from(sides[1].at(k));
        (
            product(&self.above) * self.scale.as_rational().numer(),
            product(&self.below) * self.scale.as_rational().denom(),
        )
    }
}

/// The law of a count.
#[derive(Clone, Debug)]
pub enum Law {
    /// All probability on one count.
    Point(u64),
    /// All probability beyond every count: inspection that never ends, or a rate without bound.
    Beyond,
    /// A log-concave law by its ratios.
    Ratios(RatioLaw),
    /// The number of units inspected until a target number of nonconforming ones is found.
    Waiting(WaitingLaw),
}

/// The number of units inspected until `target` nonconforming ones are found.
#[derive(Clone, Debug)]
pub struct WaitingLaw {
    /// The number at which inspection stops, at least one.
    pub target: u64,
    /// Probability that a unit is nonconforming, within (0, 1).
    pub fraction: Exact,
    /// The same law by the ratios of its terms.
    pub ratios: RatioLaw,
}

impl WaitingLaw {
    /// The law of the number of nonconforming units among the first `units`.
    pub fn count_in(&self, units: u64) -> Law {
        binomial(units, &self.fraction)
    }
}

/// The binomial law of the number of nonconforming units among `units`; `fraction` within [0, 1].
pub fn binomial(units: u64, fraction: &Exact) -> Law {
    let (above, below) = (
        fraction.as_rational().numer(),
        fraction.as_rational().denom(),
    );
    let rest = below - above;
    if units == 0 || above.is_zero() {
        return Law::Point(0);
    }
    if rest.is_zero() {
        return Law::Point(units);
    }
    let mode = (above * (units + 1)) / below;
    // With a/b in lowest terms, so are a/(b − a) and (b − a)/b: nothing needs to be reduced.
    let odds = Exact::from_rational(BigRational::new_raw(above.clone(), rest.clone()));
    let rest = Exact::from_rational(BigRational::new_raw(rest, below.clone()));
    Law::Ratios(RatioLaw {
        low: 0,
        high: Some(units),
        start: mode.to_u64().unwrap_or(0).min(units),
        ratio: Ratio {
            above: [Linear::falling(units as i64), Linear::one()],
            below: [Linear::rising(1), Linear::one()],
            scale: odds,
        },
        first: Some((rest, units)),
    })
}

/// A log-concave law on `low..=high` (or without end).
#[derive(Clone, Debug)]
pub struct RatioLaw {
    /// Smallest possible count.
    pub low: u64,
    /// Largest possible count.
    pub high: Option<u64>,
    /// A count near the mode: sums start there. Any count of the support is correct; the mode is fast.
    pub start: u64,
    /// Ratios of neighbouring probabilities.
    pub ratio: Ratio,
    /// The probability of the smallest count as base and exponent, where it is a rational power: what makes an endless
    /// law rational.
    pub first: Option<(Exact, u64)>,
}

impl Law {
    /// Smallest and largest possible count.
    pub fn support(&self) -> (u64, Option<u64>) {
        match self {
            Self::Point(at) => (*at, Some(*at)),
            Self::Beyond => (u64::MAX, None),
            Self::Ratios(law) => (law.low, law.high),
            Self::Waiting(law) => (law.target, None),
        }
    }
}

/// The law of the number of nonconforming units in a sample drawn without replacement from a lot:
/// P(X = k+1)/P(X = k) = (D−k)(n−k) / ((k+1)(N−D−n+k+1)). `nonconforming` and `sample` are at most `lot`.
pub fn hypergeometric(lot: u64, nonconforming: u64, sample: u64) -> Law {
    let low = (nonconforming + sample).saturating_sub(lot);
    let high = nonconforming.min(sample);
    if low >= high {
        return Law::Point(high);
    }
    let mode = (u128::from(nonconforming) + 1) * (u128::from(sample) + 1) / (u128::from(lot) + 2);
    let conforming_unseen = lot as i64 - nonconforming as i64 - sample as i64;
    Law::Ratios(RatioLaw {
        low,
        high: Some(high),
        start: (mode as u64).clamp(low, high),
        ratio: Ratio {
            above: [
                Linear::falling(nonconforming as i64),
                Linear::falling(sample as i64),
            ],
            below: [Linear::rising(1), Linear::rising(conforming_unseen + 1)],
            scale: Exact::one(),
        },
        first: None,
    })
}

/// `base` to a whole power, exactly.
pub fn power(base: &Exact, exponent: u64) -> Exact {
    let mut result = BigInt::one();
    let mut bottom = BigInt::one();
    let exponent = exponent.min(u64::from(u32::MAX)) as u32;
    result *= base.as_rational().numer().pow(exponent);
    bottom *= base.as_rational().denom().pow(exponent);
    Exact::from_rational(BigRational::new(result, bottom))
}
