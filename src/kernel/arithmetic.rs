//! The two precisions in which sums of probabilities are carried: doubles, and pairs of doubles where a double's rounding
//! would show.

/// Positive floating-point arithmetic whose every operation has a known relative error bound.
pub trait Arithmetic: Copy {
    /// Bound on the relative error of one `times`, `over` or `plus` of positive operands, far from under- and overflow.
    const UNIT: f64;
    /// Zero.
    const ZERO: Self;
    /// One.
    const ONE: Self;
    /// The double itself, exactly.
    fn of(value: f64) -> Self;
    /// Product.
    fn times(self, other: Self) -> Self;
    /// Quotient.
    fn over(self, other: Self) -> Self;
    /// Sum.
    fn plus(self, other: Self) -> Self;
    /// The leading double, within relative error `UNIT` or half a unit in the last place, whichever is larger.
    fn lead(self) -> f64;
    /// Multiplies by a power of two, exactly.
    fn scaled(self, power_of_two: f64) -> Self;
}

impl Arithmetic for f64 {
    const UNIT: f64 = f64::EPSILON / 2.0;
    const ZERO: Self = 0.0;
    const ONE: Self = 1.0;

    #[inline]
    fn of(value: f64) -> Self {
        value
    }
    #[inline]
    fn times(self, other: Self) -> Self {
        self * other
    }
    #[inline]
    fn over(self, other: Self) -> Self {
        self / other
    }
    #[inline]
    fn plus(self, other: Self) -> Self {
        self + other
    }
    #[inline]
    fn lead(self) -> f64 {
        self
    }
    #[inline]
    fn scaled(self, power_of_two: f64) -> Self {
        self * power_of_two
    }
}

/// An unevaluated sum of two doubles, the second at most half a unit in the last place of the first.
///
/// The algorithms and their error bounds are those of Joldes, Muller and Popescu, "Tight and rigorous error bounds for
/// basic building blocks of double-word arithmetic", ACM TOMS 44 (2017): for positive operands 3u² for the sum, 7u² for
/// the product and 15u² for the quotient, with u = 2⁻⁵³. `UNIT` takes 2⁻¹⁰¹ = 32u² for all of them.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct DoubleDouble {
    high: f64,
    low: f64,
}

/// Error-free sum (Knuth): `a + b = sum + error`.
#[inline]
fn two_sum(a: f64, b: f64) -> (f64, f64) {
    let sum = a + b;
    let b_part = sum - a;
    let error = (a - (sum - b_part)) + (b - b_part);
    (sum, error)
}

/// Error-free sum for `|a| >= |b|` (Dekker).
#[inline]
fn fast_two_sum(a: f64, b: f64) -> (f64, f64) {
    let sum = a + b;
    (sum, b - (sum - a))
}

/// Splits a double into two halves of 26 bits (Veltkamp).
#[inline]
fn split(a: f64) -> (f64, f64) {
    const SPLITTER: f64 = 134_217_729.0; // 2^27 + 1
    let c = SPLITTER * a;
    let high = c - (c - a);
    (high, a - high)
}

/// Error-free product (Dekker), without a fused operation: the same bits on every platform.
#[inline]
fn two_product(a: f64, b: f64) -> (f64, f64) {
    let product = a * b;
    let (a_high, a_low) = split(a);
    let (b_high, b_low) = split(b);
    let error = ((a_high * b_high - product) + a_high * b_low + a_low * b_high) + a_low * b_low;
    (product, error)
}

impl DoubleDouble {
    /// The normalised sum of two doubles.
    pub fn new(high: f64, low: f64) -> Self {
        let (high, low) = two_sum(high, low);
        Self { high, low }
    }

    /// The trailing double.
    pub fn low(self) -> f64 {
        self.low
    }
}

impl Arithmetic for DoubleDouble {
    const UNIT: f64 = 1.0 / (1u128 << 101) as f64;
    const ZERO: Self = Self {
        high: 0.0,
        low: 0.0,
    };
    const ONE: Self = Self {
        high: 1.0,
        low: 0.0,
    };

    #[inline]
    fn of(value: f64) -> Self {
        Self {
            high: value,
            low: 0.0,
        }
    }

    #[inline]
    fn times(self, other: Self) -> Self {
        let (product, error) = two_product(self.high, other.high);
        let cross = self.high * other.low + self.low * other.high;
        let (high, low) = fast_two_sum(product, error + cross);
        Self { high, low }
    }

    #[inline]
    fn over(self, other: Self) -> Self {
        let first = self.high / other.high;
        let back = other.times(Self::of(first));
        let rest = (self.high - back.high) + (self.low - back.low);
        let (high, low) = fast_two_sum(first, rest / other.high);
        Self { high, low }
    }

    #[inline]
    fn plus(self, other: Self) -> Self {
        let (sum, error) = two_sum(self.high, other.high);
        let (low_sum, low_error) = two_sum(self.low, other.low);
        let (sum, error) = fast_two_sum(sum, error + low_sum);
        let (high, low) = fast_two_sum(sum, error + low_error);
        Self { high, low }
    }

    #[inline]
    fn lead(self) -> f64 {
        self.high
    }

    #[inline]
    fn scaled(self, power_of_two: f64) -> Self {
        Self {
            high: self.high * power_of_two,
            low: self.low * power_of_two,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use num_rational::BigRational;
    use proptest::prelude::*;

    fn exact(value: DoubleDouble) -> BigRational {
        BigRational::from_float(value.high).unwrap() + BigRational::from_float(value.low).unwrap()
    }

    fn within_unit(computed: DoubleDouble, truth: &BigRational) -> bool {
        let error = exact(computed) / truth - BigRational::from_integer(1.into());
        let unit = BigRational::from_float(DoubleDouble::UNIT).unwrap();
        error <= unit && -error <= unit
    }

    proptest! {
        #[test]
        fn operations_keep_their_bound(a in 1e-30f64..1e30, b in 1e-30f64..1e30, c in -1.0f64..1.0, d in -1.0f64..1.0) {
            let x = DoubleDouble::new(a, a * c * 1e-17);
            let y = DoubleDouble::new(b, b * d * 1e-17);
            prop_assert!(within_unit(x.times(y), &(exact(x) * exact(y))));
            prop_assert!(within_unit(x.over(y), &(exact(x) / exact(y))));
            prop_assert!(within_unit(x.plus(y), &(exact(x) + exact(y))));
        }
    }
}
