//! The quality that is accepted with a given probability, where acceptance is monotone.

use crate::kernel::exact::Exact;
use crate::space::Value;

use super::operating::{Operating, last_true};
use super::region::Form;
use super::rule::Rule;

/// Relative width at which the search for a quality stops.
const PRECISE: f64 = 1e-13;

/// The parameter value at which lots are released with a probability; on a lattice the largest value with at least that
/// probability. `None` where acceptance is not monotone or never crosses the probability.
pub fn accepted_with(
    rule: &Rule<'_>,
    released_when_rejected: bool,
    probability: f64,
) -> Option<f64> {
    let operating = &rule.operating;
    let problem = operating.problem;
    let form = rule.form();
    if !matches!(form, Form::LowerTail | Form::UpperTail) || !problem.observation.is_sharp() {
        return None;
    }
    let rejection_falls = (form == Form::LowerTail) == operating.is_rising();
    let acceptance_falls = rejection_falls == released_when_rejected;
    let acceptance = |at: &Value| {
        let observed = problem.observation.images(at).0;
        let released = if released_when_rejected {
            rule.rejection(&observed)
        } else {
            rule.retention(&observed)
        };
        released.middle()
    };
    if let Some(lattice) = problem.family.lattice() {
        let (first, last) = (
            lattice.index(problem.space.infimum()?)?,
            lattice.index(problem.space.supremum()?)?,
        );
        if !acceptance_falls {
            return None;
        }
        let index = last_true(first, first, last, |index| {
            Ok::<bool, ()>(acceptance(&lattice.value(index)) >= probability)
        })
        .ok()??;
        return Some(lattice.value(index).to_f64());
    }
    bisect(operating, acceptance_falls, probability, &acceptance)
}

fn bisect(
    operating: &Operating<'_>,
    falls: bool,
    probability: f64,
    acceptance: &dyn Fn(&Value) -> f64,
) -> Option<f64> {
    let space = &operating.problem.space;
    let mut low = space.infimum()?.to_f64();
    let mut high = space.supremum()?.to_f64();
    let value = |at: f64| Exact::from_f64(at).map_or(Value::Infinity, Value::Finite);
    let is_before = |at: f64| (acceptance(&value(at)) >= probability) == falls;
    if high.is_infinite() {
        high = (low + 1.0) * 2.0;
        let mut doublings = 0;
        while is_before(high) {
            high *= 2.0;
            doublings += 1;
            if doublings > 200 {
                return None;
            }
        }
    }
    if !is_before(low) || is_before(high) {
        return None;
    }
    for _ in 0..200 {
        let middle = low + (high - low) / 2.0;
        if high - low <= PRECISE * high || middle <= low || middle >= high {
            break;
        }
        if is_before(middle) {
            low = middle;
        } else {
            high = middle;
        }
    }
    Some(low)
}
