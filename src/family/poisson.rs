//! Nonconformities on an amount of opportunity t (area, length, time): X ~ Poisson(λt).

use super::{AmountKind, Family, Registration, Settings, quotient, scaled};
use crate::kernel::enclosure::Enclosure;
use crate::kernel::exact::Exact;
use crate::kernel::law::{self, Law, Linear, Ratio, RatioLaw};
use crate::kernel::ratio_sum;
use crate::kernel::region::Region;
use crate::kernel::second_route::{self, SecondFigure};
use crate::space::{End, LineSet, Value};

pub(super) const REGISTRATION: Registration = Registration {
    name: "poisson",
    parameters: &["lambda"],
    finite_lot: false,
    amount_kind: AmountKind::Opportunity,
    statistic: "x",
    build: |_: &Settings| Box::new(Poisson),
};

#[derive(Debug)]
struct Poisson;

impl Family for Poisson {
    fn registration(&self) -> &'static Registration {
        &REGISTRATION
    }

    fn parameter(&self) -> &'static str {
        "lambda"
    }

    fn statistic_in_words(&self) -> &'static str {
        "nonconformities counted"
    }

    fn domain(&self) -> LineSet {
        LineSet::from_ends(
            End::closed(Exact::zero().into()),
            End::open(Value::Infinity),
        )
    }

    /// P(X = k+1)/P(X = k) = λt/(k+1). A rate without bound puts every count behind it.
    fn law(&self, at: &Value, amount: &Exact) -> Law {
        let Some(rate) = at.finite() else {
            return Law::Beyond;
        };
        let mean = rate * amount;
        if mean.is_zero() || mean.is_negative() {
            return Law::Point(0);
        }
        Law::Ratios(RatioLaw {
            low: 0,
            high: None,
            start: mean.floor().to_u64().unwrap_or(u64::MAX >> 24),
            ratio: Ratio {
                above: [Linear::one(), Linear::one()],
                below: [Linear::rising(1), Linear::one()],
                scale: mean,
            },
            first: None,
        })
    }

    /// dP(X ≤ c)/dλ = −t · P(X = c).
    fn slope(&self, count: u64, at: &Value, amount: &Exact) -> Option<Enclosure> {
        let term = ratio_sum::probability(&self.law(at, amount), &Region::between(count, count));
        Some(scaled(term, amount.to_f64()))
    }

    fn steepest(&self, count: u64, amount: &Exact) -> Value {
        quotient(count, amount)
    }

    fn most_likely(&self, count: u64, amount: &Exact) -> Value {
        quotient(count, amount)
    }

    fn expected_count(&self, at: &Value, amount: &Exact) -> f64 {
        at.to_f64() * amount.to_f64()
    }

    fn second_route(&self, at: &Value, amount: &Exact, event: &Region) -> SecondFigure {
        let mean = at
            .finite()
            .map_or(f64::INFINITY, |rate| (rate * amount).to_f64());
        second_route::poisson(mean, event)
    }

    /// Given their number, nonconformities lie independently and evenly over the whole amount.
    fn earlier(&self, count: u64, later: &Exact, earlier: &Exact) -> Option<Law> {
        Some(law::binomial(count, &earlier.checked_div(later)?))
    }

    /// x · ln(λ₁/λ₀) − t · (λ₁ − λ₀).
    fn log_likelihood_ratio(&self, one: &Value, other: &Value) -> Option<(f64, f64)> {
        let (rate, other_rate) = (one.to_f64(), other.to_f64());
        let of_count = libm::log(rate / other_rate);
        of_count
            .is_finite()
            .then_some((of_count, other_rate - rate))
    }

    /// t ln(t/λ) − t + λ.
    fn divergence(&self, mean: f64, at: &Value) -> Option<f64> {
        let rate = at.to_f64();
        Some(super::relative_entropy(mean, rate) - mean + rate)
    }

    fn total_positivity(&self) -> &'static str {
        "Poisson laws are a one-parameter exponential family in x (Karlin 1968, ch. 1)"
    }
}
