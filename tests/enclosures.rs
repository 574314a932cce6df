//! Enclosures held against exact rational arithmetic: probabilities from their textbook formulae, term by term, in
//! rational numbers without any rounding (num-rational). Source of the formulae: Johnson, Kemp and Kotz, "Univariate
//! Discrete Distributions" (from memory).

#![allow(clippy::unwrap_used)] // a failed unwrap fails the test

use assize::kernel::enclosure::Enclosure;
use assize::kernel::exact::Exact;
use assize::kernel::law::{self, Law};
use assize::kernel::ratio_sum;
use assize::kernel::region::Region;
use num_bigint::BigInt;
use num_rational::BigRational;
use num_traits::{One, Zero};
use proptest::prelude::*;

fn binomial_coefficient(n: u64, k: u64) -> BigInt {
    (0..k).fold(BigInt::one(), |product, i| product * (n - i) / (i + 1))
}

fn binomial_term(n: u64, k: u64, p: &BigRational) -> BigRational {
    let q = BigRational::one() - p;
    BigRational::from_integer(binomial_coefficient(n, k))
        * num_traits::pow(p.clone(), k as usize)
        * num_traits::pow(q, (n - k) as usize)
}

fn check(enclosure: Enclosure, truth: &BigRational, context: &str) -> Result<(), TestCaseError> {
    let bound = |value: f64| BigRational::from_float(value).unwrap();
    prop_assert!(
        bound(enclosure.lower()) <= *truth && *truth <= bound(enclosure.upper()),
        "{context}: {truth} outside {enclosure:?}"
    );
    if *truth > bound(1e-300) {
        let widest = if *truth < bound(1e-100) { 1e-10 } else { 1e-11 };
        prop_assert!(
            enclosure.relative_width() <= widest,
            "{context}: {enclosure:?} too wide"
        );
    }
    Ok(())
}

fn events(n: u64, a: u64, b: u64) -> [Region; 4] {
    let (low, high) = (a.min(b).min(n), a.max(b).min(n));
    [
        Region::at_most(Some(low)),
        Region::at_least(Some(high)),
        Region::between(low, high),
        Region::at_most(Some(low)).union(&Region::at_least(Some(high))),
    ]
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(1500))]

    #[test]
    fn binomial(n in 1u64..120, numerator in 1i64..10_000, power in 0u32..5, a in 0u64..120, b in 0u64..120) {
        let denominator = 10_000 * 10i64.pow(power);
        let p = Exact::fraction(numerator, denominator).unwrap();
        let law = law::binomial(n, &p);
        for event in events(n, a, b) {
            let truth: BigRational = (0..=n)
                .filter(|&k| event.contains(k))
                .map(|k| binomial_term(n, k, p.as_rational()))
                .fold(BigRational::zero(), |sum, term| sum + term);
            check(ratio_sum::probability(&law, &event), &truth, &format!("n={n} p={p} {event:?}"))?;
            check(ratio_sum::probability_in_double_doubles(&law, &event), &truth, &format!("dd n={n} p={p} {event:?}"))?;
        }
    }
}

#[test]
fn certain_and_impossible_events_are_exact() {
    let law = law::binomial(10, &Exact::fraction(1, 3).unwrap());
    assert_eq!(
        ratio_sum::probability(&law, &Region::between(0, 10)),
        Enclosure::ONE
    );
    assert_eq!(
        ratio_sum::probability(&law, &Region::at_least(Some(11))),
        Enclosure::ZERO
    );
    assert!(matches!(law::binomial(10, &Exact::one()), Law::Point(10)));
}
