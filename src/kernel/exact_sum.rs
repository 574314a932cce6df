//! Probabilities as exact rational numbers: the last court for a question that enclosures leave open, such as whether a
//! size equals its level.

use std::cmp::Ordering;

use num_bigint::BigInt;
use num_rational::BigRational;
use num_traits::{One, Zero};

use super::exact::Exact;
use super::law::{Law, RatioLaw, power};
use super::region::Region;

/// Most word operations one exact sum may cost: about a second.
const BUDGET: u64 = 1_500_000_000;

/// The probability of an event, exactly; `None` where the law is not rational (a Poisson law) or the sum would take more
/// than about a second.
pub fn probability(law: &Law, event: &Region) -> Option<Exact> {
    let holds = |answer: bool| Some(if answer { Exact::one() } else { Exact::zero() });
    match law {
        Law::Point(at) => holds(event.contains(*at)),
        Law::Beyond => holds(event.is_unbounded()),
        Law::Ratios(law) => of_ratio_law(law, &event.within(law.low, law.high)),
        Law::Waiting(law) => of_ratio_law(&law.ratios, &event.within(law.target, None)),
    }
}

fn of_ratio_law(law: &RatioLaw, event: &Region) -> Option<Exact> {
    if event.is_empty() {
        return Some(Exact::zero());
    }
    match (law.high, &law.first) {
        (Some(high), None) => {
            let sums = nested_sums(law, event, high)?;
            Some(Exact::from_rational(BigRational::new(
                sums.inside,
                sums.total,
            )))
        }
        (high, Some((base, exponent))) => {
            let bits = base.as_rational().denom().bits().max(1) * exponent;
            if bits > 4_000_000 {
                return None;
            }
            let (event, complemented) = match event.ranges().last().and_then(|range| range.to) {
                Some(_) => (event.clone(), false),
                None => (event.complement().within(law.low, high), true),
            };
            let last = event.ranges().last().and_then(|range| range.to);
            let inside = match last {
                None => Exact::zero(),
                Some(last) => {
                    let sums = nested_sums(law, &event, last)?;
                    let relative = BigRational::new(sums.inside, sums.unit);
                    &Exact::from_rational(relative) * &power(base, *exponent)
                }
            };
            Some(if complemented {
                &Exact::one() - &inside
            } else {
                inside
            })
        }
        (None, None) => None,
    }
}

/// Sums of terms relative to the first, over a common denominator `unit`.
struct NestedSums {
    inside: BigInt,
    total: BigInt,
    unit: BigInt,
}

/// Σ over `low..=last` by Horner's nesting, 1 + r₀(1 + r₁(1 + …)), over one common denominator and without division.
fn nested_sums(law: &RatioLaw, event: &Region, last: u64) -> Option<NestedSums> {
    let steps = last - law.low;
    let (above, below) = law.ratio.whole_sides(law.low + steps / 2);
    let words_a_step = (above.bits().max(below.bits()) + 64) / 64 + 1;
    let cost = (steps as u128).pow(2) * u128::from(words_a_step) * 3;
    if cost > u128::from(BUDGET) {
        return None;
    }
    let indicator = |k: u64| u8::from(event.contains(k));
    let mut sums = NestedSums {
        inside: BigInt::from(indicator(last)),
        total: BigInt::one(),
        unit: BigInt::one(),
    };
    for k in (law.low..last).rev() {
        let (above, below) = law.ratio.whole_sides(k);
        sums.unit *= below;
        sums.total = sums.total * &above + &sums.unit;
        sums.inside *= &above;
        if indicator(k) == 1 {
            sums.inside += &sums.unit;
        }
    }
    (!sums.unit.is_zero()).then_some(sums)
}

/// Compares the probability of an event with a level, exactly where the law is rational.
pub fn compare(law: &Law, event: &Region, level: &Exact) -> Option<Ordering> {
    probability(law, event).map(|value| value.cmp(level))
}
