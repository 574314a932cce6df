//! From which amount on every larger one works: Chernoff's bound.
//!
//! For any t between the two points, P(X ≤ nt; θ₀) ≤ exp(−n·D(t‖θ₀)) and P(X > nt; θ₁) ≤ exp(−n·D(t‖θ₁)) (Chernoff 1952),
//! and the same with sides exchanged. Once both are below α and 1 − power, the tail up to ⌊nt⌋ fits the level and has
//! the power, and the derived tail, which holds it, has at least as much.

use crate::problem::Problem;
use crate::space::Value;

/// Covers the rounding of logarithms, quotients and the bisection by far.
const MARGIN: f64 = 1.001;

/// An amount from which on the one-sided test of `end` against `point` has at least the power at the problem's level;
/// `None` where no bound is derived.
pub fn surely_enough(problem: &Problem, end: &Value, point: &Value, at_least: f64) -> Option<f64> {
    let family = &problem.family;
    let for_level = -libm::log(problem.alpha.to_f64() / f64::from(problem.tries));
    let for_power = -libm::log(1.0 - at_least);
    let (near, far) = (point.to_f64(), end.to_f64());
    if !near.is_finite() || !far.is_finite() {
        return None;
    }
    let needed = |share: f64| -> Option<(f64, f64)> {
        let mean = near + share * (far - near);
        Some((
            for_level / family.divergence(mean, end)?,
            for_power / family.divergence(mean, point)?,
        ))
    };
    // Towards the null end the level needs more, towards the point the power does.
    let (mut low, mut high) = (0.0, 1.0);
    for _ in 0..60 {
        let middle = low + (high - low) / 2.0;
        let (level, power) = needed(middle)?;
        if power > level {
            low = middle;
        } else {
            high = middle;
        }
    }
    let (level, power) = needed(low + (high - low) / 2.0)?;
    let amount = level.max(power) * MARGIN + 1.0;
    amount.is_finite().then_some(amount)
}
