//! Enclosures held against exact rational arithmetic: probabilities from their textbook formulae in whole numbers and
//! fractions without any rounding (num-bigint, num-rational). Source of the formulae: Johnson, Kemp and Kotz, "Univariate
//! Discrete Distributions", 3rd ed. (from memory).

#![allow(clippy::unwrap_used)] // a failed unwrap fails the test

use assize::family::{Settings, registration};
use assize::kernel::enclosure::Enclosure;
use assize::kernel::exact::Exact;
use assize::kernel::law::{self, Law};
use assize::kernel::region::Region;
use assize::kernel::{exact_sum, ratio_sum};
use num_bigint::BigInt;
use num_rational::BigRational;
use num_traits::{One, Zero, pow};
use proptest::prelude::*;

/// Weights of the counts from `first` on, and the weight of everything: each probability is a quotient of two whole
/// numbers, the second known between two bounds.
struct Truth {
    first: u64,
    weights: Vec<BigInt>,
    /// Weight of all counts: at least and at most. Equal where the support is finite.
    total: (BigInt, BigInt),
}

impl Truth {
    fn finite(first: u64, weights: Vec<BigInt>) -> Self {
        let total: BigInt = weights.iter().sum();
        Self {
            first,
            weights,
            total: (total.clone(), total),
        }
    }

    /// Lower and upper bound of an event's probability; they agree to far more digits than an enclosure has.
    fn of(&self, event: &Region) -> (BigRational, BigRational) {
        let inside: BigInt = (self.first..)
            .zip(&self.weights)
            .filter(|(count, _)| event.contains(*count))
            .map(|(_, weight)| weight)
            .sum();
        let listed: BigInt = self.weights.iter().sum();
        let (mut inside, mut most) = (inside.clone(), inside);
        if event.is_unbounded() {
            inside += &self.total.0 - &listed;
            most += &self.total.1 - &listed;
        }
        (
            BigRational::new(inside, self.total.1.clone()),
            BigRational::new(most, self.total.0.clone()),
        )
    }
}

/// C(n, k)·aᵏ·bⁿ⁻ᵏ for all k.
fn binomial_weights(n: u64, a: u64, b: u64) -> Vec<BigInt> {
    let mut choose = BigInt::one();
    (0..=n)
        .map(|k| {
            let weight =
                &choose * pow(BigInt::from(a), k as usize) * pow(BigInt::from(b), (n - k) as usize);
            choose = &choose * (n - k) / (k + 1);
            weight
        })
        .collect()
}

fn choose(n: u64, k: u64) -> BigInt {
    if k > n {
        return BigInt::zero();
    }
    (0..k).fold(BigInt::one(), |product, i| product * (n - i) / (i + 1))
}

fn check(
    enclosure: Enclosure,
    truth: &(BigRational, BigRational),
    context: &str,
) -> Result<(), TestCaseError> {
    let bound = |value: f64| BigRational::from_float(value).unwrap();
    prop_assert!(
        bound(enclosure.lower()) <= truth.1 && truth.0 <= bound(enclosure.upper()),
        "{context}: the truth lies outside {enclosure:?}"
    );
    if enclosure.upper() > 1e-300 {
        let widest = if enclosure.upper() < 1e-100 {
            1e-10
        } else {
            1e-11
        };
        prop_assert!(
            enclosure.relative_width() <= widest,
            "{context}: {enclosure:?} is too wide"
        );
    }
    Ok(())
}

fn events(a: u64, b: u64) -> [Region; 5] {
    let (low, high) = (a.min(b), a.max(b));
    [
        Region::at_most(Some(low)),
        Region::at_least(Some(high)),
        Region::between(low, high),
        Region::between(high, high),
        Region::at_most(Some(low)).union(&Region::at_least(Some(high))),
    ]
}

fn check_all(law: &Law, truth: &Truth, a: u64, b: u64, context: &str) -> Result<(), TestCaseError> {
    for event in events(a, b) {
        let exact = truth.of(&event);
        let context = format!("{context} {event:?}");
        check(ratio_sum::probability(law, &event), &exact, &context)?;
        check(
            ratio_sum::probability_in_double_doubles(law, &event),
            &exact,
            &context,
        )?;
        if let Some(value) = exact_sum::probability(law, &event) {
            prop_assert!(
                *value.as_rational() == exact.0 && exact.0 == exact.1,
                "{context}: exact sum {value}"
            );
        }
    }
    Ok(())
}

fn law_of(family: &str, lot_size: u64, at: Exact, amount: Exact) -> Law {
    let registration = registration(family).unwrap();
    let parameter = registration.parameters[0];
    let family = (registration.build)(&Settings {
        parameter,
        lot_size,
    });
    family.law(&at.into(), &amount)
}

fn fraction(numerator: u64, denominator: u64) -> Exact {
    Exact::fraction(numerator as i64, denominator as i64).unwrap()
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(1200))]

    #[test]
    fn binomial(n in 1u64..150, a in 1u64..10_000, zeros in 0u32..6, x in 0u64..160, y in 0u64..160) {
        let whole = 10_000 * 10u64.pow(zeros);
        let truth = Truth::finite(0, binomial_weights(n, a, whole - a));
        let law = law_of("binomial", 0, fraction(a, whole), Exact::from(n));
        check_all(&law, &truth, x, y, &format!("n={n} p={a}/{whole}"))?;
    }

    #[test]
    fn hypergeometric(lot in 1u64..400, d in 0u64..400, n in 1u64..400, x in 0u64..150, y in 0u64..150) {
        let (d, n) = (d.min(lot), n.min(lot));
        let weights = (0..=n).map(|k| choose(d, k) * choose(lot - d, n - k)).collect();
        let truth = Truth::finite(0, weights);
        let law = law_of("hypergeometric", lot, Exact::from(d), Exact::from(n));
        check_all(&law, &truth, x, y, &format!("N={lot} D={d} n={n}"))?;
    }

    #[test]
    fn poisson(a in 1u64..40_000, b in 1u64..1_000, x in 0u64..200, y in 0u64..200) {
        let (a, b) = if a > 40 * b { (a % (40 * b) + 1, b) } else { (a, b) };
        // Weights λᵏ/k! over the common denominator bᴷ·K!; what lies beyond K is at most the last term for K > 2λ.
        let last = 420u64;
        let mut weights = vec![BigInt::one(); last as usize + 1];
        let mut weight = pow(BigInt::from(b), last as usize) * (1..=last).product::<BigInt>();
        for k in 0..=last {
            weights[k as usize] = weight.clone();
            weight = weight * a / (b * (k + 1));
        }
        let listed: BigInt = weights.iter().sum();
        let most = &listed + &weights[last as usize];
        let truth = Truth { first: 0, weights, total: (listed, most) };
        let law = law_of("poisson", 0, fraction(a, b), Exact::one());
        check_all(&law, &truth, x, y, &format!("mean={a}/{b}"))?;
    }

    #[test]
    fn negative_binomial(r in 1u64..12, a in 1u64..100, x in 0u64..150, y in 0u64..150) {
        // P(N = m) = C(m−1, r−1)·pʳ·qᵐ⁻ʳ over the common denominator 100ᴹ.
        let last = 150u64;
        let q = 100 - a;
        let weights: Vec<BigInt> = (r..=last)
            .map(|m| {
                choose(m - 1, r - 1)
                    * pow(BigInt::from(a), r as usize)
                    * pow(BigInt::from(q), (m - r) as usize)
                    * pow(BigInt::from(100), (last - m) as usize)
            })
            .collect();
        let total = pow(BigInt::from(100), last as usize);
        let truth = Truth { first: r, weights, total: (total.clone(), total) };
        let law = law_of("negative_binomial", 0, fraction(a, 100), Exact::from(r));
        check_all(&law, &truth, x, y, &format!("r={r} p={a} %"))?;
    }
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(40))]

    /// Doubles against pairs of doubles where exact numbers would be too long: up to a million units, tails to 1e-300.
    #[test]
    fn large_samples(n in 10_000u64..1_000_000, a in 1u64..999_983, deviations in -37.0f64..37.0, width in 0u64..500) {
        let p = fraction(a, 999_983);
        let law = law::binomial(n, &p);
        let mean = n as f64 * p.to_f64();
        let spread = (mean * (1.0 - p.to_f64())).sqrt();
        let at = (mean + deviations * spread).clamp(0.0, n as f64) as u64;
        for event in events(at, (at + width).min(n)) {
            let quick = ratio_sum::probability(&law, &event);
            let fine = ratio_sum::probability_in_double_doubles(&law, &event);
            prop_assert!(quick.lower() <= fine.upper() && fine.lower() <= quick.upper());
            prop_assert!(quick.upper() < 1e-300 || quick.relative_width() <= 1e-11, "{quick:?}");
            prop_assert!(fine.upper() < 1e-300 || fine.relative_width() <= 1e-15, "{fine:?}");
        }
    }
}

#[test]
fn certain_and_impossible_events_are_exact() {
    let law = law::binomial(10, &fraction(1, 3));
    assert_eq!(
        ratio_sum::probability(&law, &Region::between(0, 10)),
        Enclosure::ONE
    );
    assert_eq!(
        ratio_sum::probability(&law, &Region::at_least(Some(11))),
        Enclosure::ZERO
    );
}

#[test]
fn degenerate_parameters_put_all_probability_on_one_count() {
    let one = Exact::one;
    assert!(matches!(law::binomial(10, &one()), Law::Point(10)));
    assert!(matches!(law::binomial(10, &Exact::zero()), Law::Point(0)));
    let law = law_of("poisson", 0, Exact::zero(), one());
    assert!(matches!(law, Law::Point(0)));
    let law = law_of("negative_binomial", 0, Exact::zero(), one());
    assert_eq!(
        ratio_sum::probability(&law, &Region::at_least(Some(9))),
        Enclosure::ONE
    );
    assert_eq!(
        ratio_sum::probability(&law, &Region::at_most(Some(9))),
        Enclosure::ZERO
    );
    for (d, count) in [(0, 0), (20, 7)] {
        let law = law_of("hypergeometric", 20, Exact::from(d), Exact::from(7));
        assert!(matches!(law, Law::Point(at) if at == count));
    }
}
