//! Nonconforming units among n independent ones: X ~ Binomial(n, p).

use super::{AmountKind, Family, Registration, Settings, quotient, scaled};
use crate::kernel::enclosure::Enclosure;
use crate::kernel::exact::Exact;
use crate::kernel::law::{self, Law};
use crate::kernel::ratio_sum;
use crate::kernel::region::Region;
use crate::kernel::second_route::{self, SecondFigure};
use crate::space::{LineSet, Value};

pub(super) const REGISTRATION: Registration = Registration {
    name: "binomial",
    parameters: &["p"],
    finite_lot: false,
    amount_kind: AmountKind::Units,
    statistic: "x",
    build: |_: &Settings| Box::new(Binomial),
};

#[derive(Debug)]
struct Binomial;

impl Family for Binomial {
    fn registration(&self) -> &'static Registration {
        &REGISTRATION
    }

    fn parameter(&self) -> &'static str {
        "p"
    }

    fn statistic_in_words(&self) -> &'static str {
        "nonconforming units in the sample"
    }

    fn domain(&self) -> LineSet {
        LineSet::between(Exact::zero().into(), Exact::one().into())
    }

    fn law(&self, at: &Value, amount: &Exact) -> Law {
        law::binomial(super::count(amount), &super::fraction(at))
    }

    /// dP(X ≤ c)/dp = −n · P(Binomial(n−1, p) = c), by differentiation.
    fn slope(&self, count: u64, at: &Value, amount: &Exact) -> Option<Enclosure> {
        let units = super::count(amount);
        let law = law::binomial(units.checked_sub(1)?, &super::fraction(at));
        let term = ratio_sum::probability(&law, &Region::between(count, count));
        Some(scaled(term, units as f64))
    }

    fn steepest(&self, count: u64, amount: &Exact) -> Value {
        quotient(count, &(amount - &Exact::one())).min(Exact::one().into())
    }

    fn most_likely(&self, count: u64, amount: &Exact) -> Value {
        quotient(count, amount)
    }

    fn expected_count(&self, at: &Value, amount: &Exact) -> f64 {
        amount.to_f64() * at.to_f64()
    }

    fn second_route(&self, at: &Value, amount: &Exact, event: &Region) -> SecondFigure {
        let p = super::fraction(at);
        let q = &Exact::one() - &p;
        second_route::binomial(super::count(amount), p.to_f64(), q.to_f64(), event)
    }

    /// Of n units with x nonconforming ones every order is equally likely: the first m are a random sample.
    fn earlier(&self, count: u64, later: &Exact, earlier: &Exact) -> Option<Law> {
        Some(law::hypergeometric(
            super::count(later),
            count,
            super::count(earlier),
        ))
    }

    /// x · [ln(p₁/p₀) − ln(q₁/q₀)] + n · ln(q₁/q₀).
    fn log_likelihood_ratio(&self, one: &Value, other: &Value) -> Option<(f64, f64)> {
        let (p, other_p) = (super::fraction(one), super::fraction(other));
        let rest = |p: &Exact| (&Exact::one() - p).to_f64();
        let of_units = libm::log(rest(&p) / rest(&other_p));
        let of_count = libm::log(p.to_f64() / other_p.to_f64()) - of_units;
        (of_units.is_finite() && of_count.is_finite()).then_some((of_count, of_units))
    }

    /// t ln(t/p) + (1−t) ln((1−t)/(1−p)).
    fn divergence(&self, mean: f64, at: &Value) -> Option<f64> {
        let p = super::fraction(at);
        let q = (&Exact::one() - &p).to_f64();
        Some(super::relative_entropy(mean, p.to_f64()) + super::relative_entropy(1.0 - mean, q))
    }

    fn total_positivity(&self) -> &'static str {
        "binomial laws are a one-parameter exponential family in x (Karlin 1968, ch. 1)"
    }
}
