//! Units inspected until the r-th nonconforming one: N ~ r + NegativeBinomial(r, p).

use super::{AmountKind, Family, Registration, Settings, Trend, quotient, scaled};
use crate::kernel::enclosure::Enclosure;
use crate::kernel::exact::Exact;
use crate::kernel::law::{self, Law, Linear, Ratio, RatioLaw, WaitingLaw};
use crate::kernel::ratio_sum;
use crate::kernel::region::Region;
use crate::kernel::second_route::{self, SecondFigure};
use crate::space::{LineSet, Value};

pub(super) const REGISTRATION: Registration = Registration {
    name: "negative_binomial",
    parameters: &["p"],
    finite_lot: false,
    amount_kind: AmountKind::Nonconforming,
    statistic: "n",
    build: |_: &Settings| Box::new(NegativeBinomial),
};

#[derive(Debug)]
struct NegativeBinomial;

impl Family for NegativeBinomial {
    fn registration(&self) -> &'static Registration {
        &REGISTRATION
    }

    fn parameter(&self) -> &'static str {
        "p"
    }

    fn statistic_in_words(&self) -> &'static str {
        "units inspected when inspection stops"
    }

    fn domain(&self) -> LineSet {
        LineSet::between(Exact::zero().into(), Exact::one().into())
    }

    /// The worse the product, the sooner the r-th nonconforming unit.
    fn trend(&self) -> Trend {
        Trend::Falling
    }

    /// P(N = m+1)/P(N = m) = m·q/(m−r+1). With p = 0 inspection never ends.
    fn law(&self, at: &Value, amount: &Exact) -> Law {
        let target = super::count(amount).max(1);
        let p = super::fraction(at);
        if p.is_zero() {
            return Law::Beyond;
        }
        let q = &Exact::one() - &p;
        if q.is_zero() {
            return Law::Point(target);
        }
        let beyond_first = Exact::from(target - 1)
            .checked_div(&p)
            .unwrap_or_else(Exact::zero);
        let mode = beyond_first.floor().to_u64().unwrap_or(target) + 1;
        Law::Waiting(WaitingLaw {
            target,
            ratios: RatioLaw {
                low: target,
                high: None,
                start: mode.max(target),
                ratio: Ratio {
                    above: [Linear::rising(0), Linear::one()],
                    below: [Linear::rising(1 - target as i64), Linear::one()],
                    scale: q,
                },
                first: Some((p.clone(), target)),
            },
            fraction: p,
        })
    }

    /// P(N ≤ m) = P(Binomial(m, p) ≥ r), so its derivative is m · P(Binomial(m−1, p) = r−1).
    fn slope(&self, count: u64, at: &Value, amount: &Exact) -> Option<Enclosure> {
        let before = super::count(amount).saturating_sub(1);
        if count <= before {
            return Some(Enclosure::ZERO);
        }
        let law = law::binomial(count.checked_sub(1)?, &super::fraction(at));
        let term = ratio_sum::probability(&law, &Region::between(before, before));
        Some(scaled(term, count as f64))
    }

    fn steepest(&self, count: u64, amount: &Exact) -> Value {
        let before = super::count(amount).saturating_sub(1);
        quotient(before, &Exact::from(count.saturating_sub(1))).min(Exact::one().into())
    }

    fn most_likely(&self, count: u64, amount: &Exact) -> Value {
        match Exact::from(count) {
            units if units.is_zero() => Exact::one().into(),
            units => quotient(super::count(amount), &units).min(Exact::one().into()),
        }
    }

    fn expected_count(&self, at: &Value, amount: &Exact) -> f64 {
        amount.to_f64() / at.to_f64()
    }

    fn second_route(&self, at: &Value, amount: &Exact, event: &Region) -> SecondFigure {
        let p = super::fraction(at);
        let q = &Exact::one() - &p;
        second_route::negative_binomial(super::count(amount), p.to_f64(), q.to_f64(), event)
    }

    fn earlier(&self, _count: u64, _later: &Exact, _earlier: &Exact) -> Option<Law> {
        None
    }

    fn log_likelihood_ratio(&self, _one: &Value, _other: &Value) -> Option<(f64, f64)> {
        None
    }

    fn divergence(&self, _mean: f64, _at: &Value) -> Option<f64> {
        None
    }

    fn total_positivity(&self) -> &'static str {
        "negative binomial laws are a one-parameter exponential family in n (Karlin 1968, ch. 1)"
    }
}
