//! The second route of the double entry: the same probabilities by other formulae and other code.
//!
//! Tails within the range where its accuracy was measured come from statrs' incomplete beta and gamma functions; all else
//! is a sum of single terms in Loader's saddle-point form. Neither shares a line with the ratio sums of the first route.

mod saddle_point;
mod sum;

use statrs::function::beta::checked_beta_reg;
use statrs::function::gamma::{checked_gamma_lr, checked_gamma_ur};

use super::region::{Range, Region};

/// A probability by the second route.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct SecondFigure {
    /// The probability.
    pub value: f64,
    /// How it was computed.
    pub route: &'static str,
}

/// Relative difference between the routes beyond which nothing is filed. The largest seen in tests is far below it.
pub const TOLERANCE: f64 = 1e-9;

/// Largest shape parameter at which statrs is used; see `docs/numerics.md` for the accuracy measured there.
const STATRS_SHAPES: f64 = 1_000.0;
/// Smallest probability taken from statrs.
const STATRS_SMALLEST: f64 = 1e-100;

const BETA: &str = "incomplete beta function (statrs)";
const GAMMA: &str = "incomplete gamma function (statrs)";
const SADDLE_POINT: &str = "sum of saddle-point terms (Loader 2000)";

fn figure(value: f64, route: &'static str) -> SecondFigure {
    SecondFigure { value, route }
}

/// The only range of an event, if it is a lower or an upper tail of `low..=high`.
enum Tail {
    Lower(u64),
    Upper(u64),
}

fn tail(event: &Region, low: u64, high: Option<u64>) -> Option<Tail> {
    match event.within(low, high).ranges() {
        [Range { from, to: Some(to) }] if *from == low && Some(*to) != high => {
            Some(Tail::Lower(*to))
        }
        [Range { from, to }] if *to == high && *from != low => Some(Tail::Upper(*from)),
        _ => None,
    }
}

/// An event about X ~ Binomial(units, p), with q = 1 − p.
pub fn binomial(units: u64, p: f64, q: f64, event: &Region) -> SecondFigure {
    let whole = units as f64;
    let inside = p > 0.0 && q > 0.0 && whole < STATRS_SHAPES;
    if inside && let Some(tail) = tail(event, 0, Some(units)) {
        // P(X ≤ c) = I_q(n − c, c + 1) and P(X ≥ c) = I_p(c, n − c + 1).
        let value = match tail {
            Tail::Lower(c) => checked_beta_reg(whole - c as f64, c as f64 + 1.0, q),
            Tail::Upper(c) => checked_beta_reg(c as f64, whole - c as f64 + 1.0, p),
        };
        if let Ok(value) = value
            && value > STATRS_SMALLEST
        {
            return figure(value, BETA);
        }
    }
    let mode = (whole * p) as u64;
    let value = sum::over(event, (0, units), mode.min(units), |x| {
        saddle_point::binomial(x, units, p, q)
    });
    figure(value, SADDLE_POINT)
}

/// An event about X ~ Poisson(mean); an infinite mean puts all counts behind it.
pub fn poisson(mean: f64, event: &Region) -> SecondFigure {
    if mean.is_infinite() {
        return figure(f64::from(u8::from(event.is_unbounded())), SADDLE_POINT);
    }
    if mean > 0.0 && mean < STATRS_SHAPES {
        // P(X ≤ c) = Q(c + 1, m) and P(X ≥ c) = P(c, m).
        let value = match tail(event, 0, None) {
            Some(Tail::Lower(c)) if (c as f64) < STATRS_SHAPES => {
                checked_gamma_ur(c as f64 + 1.0, mean).ok()
            }
            Some(Tail::Upper(c)) if (c as f64) < STATRS_SHAPES => {
                checked_gamma_lr(c as f64, mean).ok()
            }
            _ => None,
        };
        if let Some(value) = value
            && value > STATRS_SMALLEST
        {
            return figure(value, GAMMA);
        }
    }
    // Nothing is left beyond this count: more than forty standard deviations, or hundreds of counts for small means.
    let last = event
        .ranges()
        .last()
        .map_or(0, |range| range.to.unwrap_or(range.from));
    let high = (mean + 60.0 * mean.sqrt() + 1_000.0) as u64;
    let value = sum::over(
        event,
        (0, high.max(last.saturating_add(1_000))),
        mean as u64,
        |x| saddle_point::poisson(x, mean),
    );
    figure(value, SADDLE_POINT)
}

/// An event about the nonconforming units in a sample drawn without replacement.
pub fn hypergeometric(lot: u64, nonconforming: u64, sample: u64, event: &Region) -> SecondFigure {
    let low = (nonconforming + sample).saturating_sub(lot);
    let high = nonconforming.min(sample);
    let mode = if lot == 0 {
        0.0
    } else {
        nonconforming as f64 * (sample as f64 / lot as f64)
    };
    let value = if low == high {
        f64::from(u8::from(event.contains(low)))
    } else {
        sum::over(event, (low, high), (mode as u64).clamp(low, high), |x| {
            saddle_point::hypergeometric(x, lot, nonconforming, sample)
        })
    };
    figure(value, SADDLE_POINT)
}

/// An event about the units inspected until the `target`-th nonconforming one.
pub fn negative_binomial(target: u64, p: f64, q: f64, event: &Region) -> SecondFigure {
    if p <= 0.0 {
        return figure(f64::from(u8::from(event.is_unbounded())), SADDLE_POINT);
    }
    let mut value = 0.0;
    let mut route = SADDLE_POINT;
    for range in event.within(target, None).ranges() {
        // N ≤ m means that m units hold at least `target`.
        let held = |units: u64, event: Region| binomial(units, p, q, &event);
        let part = match (range.from == target, range.to) {
            (true, None) => figure(1.0, SADDLE_POINT),
            (true, Some(to)) => held(to, Region::at_least(Some(target))),
            (false, None) => held(range.from - 1, Region::at_most(target.checked_sub(1))),
            (false, Some(to)) => {
                let mode = ((target as f64 - 1.0) / p) as u64;
                let value = sum::over(
                    &Region::between(range.from, to),
                    (target, to),
                    mode.max(target),
                    // P(N = m) = (r/m)·P(Binomial(m, p) = r).
                    |m| saddle_point::binomial(target, m, p, q) * (target as f64 / m as f64),
                );
                figure(value, SADDLE_POINT)
            }
        };
        value += part.value;
        route = part.route;
    }
    figure(value, route)
}
