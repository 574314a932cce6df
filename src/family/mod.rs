//! Families of discrete distributions. A family is one file and one line of the registry: it says its parameter, the law
//! of its statistic and how the law moves with the parameter. The solver knows no family by name.

mod binomial;
mod hypergeometric;
mod negative_binomial;
mod poisson;

use std::fmt::Debug;

use crate::kernel::enclosure::Enclosure;
use crate::kernel::exact::Exact;
use crate::kernel::law::Law;
use crate::kernel::region::Region;
use crate::kernel::second_route::SecondFigure;
use crate::space::{Lattice, LineSet, Value};

/// All families that can be solved.
pub const FAMILIES: &[Registration] = &[
    binomial::REGISTRATION,
    hypergeometric::REGISTRATION,
    poisson::REGISTRATION,
    negative_binomial::REGISTRATION,
];

/// Largest number of units or nonconforming units a plan may ask for.
pub const MOST_UNITS: u64 = 1_000_000_000;

/// One line of the registry.
pub struct Registration {
    /// Name in plans.
    pub name: &'static str,
    /// Names a plan may use for the parameter.
    pub parameters: &'static [&'static str],
    /// Whether the plan must state a lot size.
    pub finite_lot: bool,
    /// What the amount of inspection is, before a lot bounds it.
    pub amount_kind: AmountKind,
    /// Symbol of the statistic.
    pub statistic: &'static str,
    /// Builds the family for one plan.
    pub build: fn(&Settings) -> Box<dyn Family>,
}

/// What a plan fixes about its family besides the tested parameter.
#[derive(Clone, Debug)]
pub struct Settings {
    /// The parameter name that the plan uses.
    pub parameter: &'static str,
    /// Units in the lot, zero where the family has no lot.
    pub lot_size: u64,
}

/// How the statistic moves when the parameter rises.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Trend {
    /// It grows, in the sense of the likelihood ratio.
    Rising,
    /// It falls.
    Falling,
}

/// What the amount of inspection is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum AmountKind {
    /// A number of units drawn.
    Units,
    /// A number of nonconforming units at which inspection stops.
    Nonconforming,
    /// An amount of opportunity (area, length, time), which may be fractional.
    Opportunity,
}

/// A one-parameter family with monotone likelihood ratio in its statistic, and totally positive of every order in
/// statistic and parameter.
pub trait Family: Debug + Send + Sync {
    /// Its line of the registry.
    fn registration(&self) -> &'static Registration;
    /// Name of the parameter in this plan.
    fn parameter(&self) -> &'static str;
    /// What the statistic counts, for sentences.
    fn statistic_in_words(&self) -> &'static str;
    /// Values the parameter can take at all.
    fn domain(&self) -> LineSet;
    /// The lattice on which the parameter lies, if it does.
    fn lattice(&self) -> Option<Lattice> {
        None
    }
    /// The largest amount of inspection that is possible.
    fn most(&self) -> Exact {
        Exact::from(MOST_UNITS)
    }
    /// How the statistic moves with the parameter.
    fn trend(&self) -> Trend {
        Trend::Rising
    }
    /// The law of the statistic at a value of the domain (its closure included) for an amount of inspection.
    fn law(&self, at: &Value, amount: &Exact) -> Law;
    /// |dP(X ≤ count)/dθ| at a value, enclosed; `None` on lattices, which have no derivative.
    fn slope(&self, count: u64, at: &Value, amount: &Exact) -> Option<Enclosure>;
    /// Where that slope is largest over the domain; it rises before and falls after.
    fn steepest(&self, count: u64, amount: &Exact) -> Value;
    /// The value of the domain under which an outcome is most probable; its likelihood is unimodal around it.
    fn most_likely(&self, count: u64, amount: &Exact) -> Value;
    /// About where the statistic lies, as a start for searches.
    fn expected_count(&self, at: &Value, amount: &Exact) -> f64;
    /// The probability of an event by the second route.
    fn second_route(&self, at: &Value, amount: &Exact, event: &Region) -> SecondFigure;
    /// The law of the count after an earlier amount of inspection, given the count after a later one: by sufficiency it
    /// does not depend on the parameter. `None` where inspection has no stages.
    fn earlier(&self, count: u64, later: &Exact, earlier: &Exact) -> Option<Law>;
    /// The probability of an event about the count of a further amount of inspection, given what was seen before, by the
    /// second route.
    fn second_route_further(
        &self,
        at: &Value,
        _seen: (&Exact, u64),
        further: &Exact,
        event: &Region,
    ) -> SecondFigure {
        self.second_route(at, further, event)
    }
    /// The log likelihood ratio of one value against another as coefficients of the count and of the amount, for ratio
    /// tests. `None` where it is not of this form.
    fn log_likelihood_ratio(&self, one: &Value, other: &Value) -> Option<(f64, f64)>;
    /// Kullback–Leibler divergence, per unit of inspection, from a mean outcome of `mean` per unit to the law at a value:
    /// Chernoff's exponent of the tail beyond that mean. `None` where no such bound is derived.
    fn divergence(&self, mean: f64, at: &Value) -> Option<f64>;
    /// Why the family's probability kernel is totally positive, with source.
    fn total_positivity(&self) -> &'static str;
}

/// The registration of a name.
pub fn registration(name: &str) -> Option<&'static Registration> {
    FAMILIES.iter().find(|family| family.name == name)
}

/// Multiplies an enclosure by a positive number, rounded outwards.
fn scaled(enclosure: Enclosure, factor: f64) -> Enclosure {
    Enclosure::new(
        (enclosure.lower() * factor.next_down())
            .next_down()
            .max(0.0),
        (enclosure.upper() * factor.next_up()).next_up(),
    )
    .unwrap_or(enclosure)
}

/// A quotient of counts as a value, zero where the divisor is zero.
fn quotient(count: u64, of: &Exact) -> Value {
    Value::Finite(
        Exact::from(count)
            .checked_div(of)
            .unwrap_or_else(Exact::zero),
    )
}

/// t ln(t/p), zero at t = 0 and without bound at p = 0.
fn relative_entropy(t: f64, p: f64) -> f64 {
    if t <= 0.0 {
        0.0
    } else if p <= 0.0 {
        f64::INFINITY
    } else {
        t * libm::log(t / p)
    }
}

/// An amount as a count; plans with other amounts do not pass `problem::pose`.
fn count(amount: &Exact) -> u64 {
    amount.floor().to_u64().unwrap_or(0).min(MOST_UNITS)
}

/// A value as a probability, cut to [0, 1].
fn fraction(at: &Value) -> Exact {
    match at {
        Value::MinusInfinity => Exact::zero(),
        Value::Finite(value) => value.clone().clamp(Exact::zero(), Exact::one()),
        Value::Infinity => Exact::one(),
    }
}
