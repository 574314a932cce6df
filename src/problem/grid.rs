//! Where the power is tabulated when the plan does not say.

use crate::kernel::exact::Exact;
use crate::space::{Lattice, LineSet, Value};

/// How many points a table has at most, about: steps are rounded up, so that it may be half as many.
const POINTS: i64 = 32;

/// Evenly spaced round values around everything that matters (ends of the null, ends of requirements), those ends
/// themselves, all within the space.
pub fn default_points(space: &LineSet, ends: &[Exact], lattice: Option<&Lattice>) -> Vec<Value> {
    let Some((low, high)) = stretch(space, ends) else {
        return Vec::new();
    };
    let step = round_step(&(&high - &low), lattice);
    let mut points: Vec<Exact> = ends.to_vec();
    let mut at = &low
        .checked_div(&step)
        .map_or_else(Exact::zero, |steps| steps.ceil())
        * &step;
    while at <= high {
        points.push(at.clone());
        at = &at + &step;
    }
    points.sort();
    points.dedup();
    let mut values: Vec<Value> = points
        .into_iter()
        .map(Value::Finite)
        .filter(|value| space.closure().contains(value))
        .collect();
    if let Some(lattice) = lattice {
        values.retain(|value| lattice.index(value).is_some());
    }
    values
}

/// From as far below the lowest end as the ends are apart (or as the end is from zero) to as far above, cut to the space.
fn stretch(space: &LineSet, ends: &[Exact]) -> Option<(Exact, Exact)> {
    let lowest = ends.iter().min()?.clone();
    let highest = ends.iter().max()?.clone();
    let mut spread = &highest - &lowest;
    if spread.is_zero() {
        spread = highest.clone();
    }
    if spread.is_zero() {
        spread = Exact::one();
    }
    let cut = |wanted: Exact, end: Option<&Value>, lower: bool| match end.and_then(Value::finite) {
        Some(end) if lower => wanted.max(end.clone()),
        Some(end) => wanted.min(end.clone()),
        None => wanted,
    };
    Some((
        cut(&lowest - &spread, space.infimum(), true),
        cut(&highest + &spread, space.supremum(), false),
    ))
}

/// The width divided by about `POINTS`, rounded up to 1, 2 or 5 times a power of ten; on a lattice a whole number of its
/// steps.
fn round_step(width: &Exact, lattice: Option<&Lattice>) -> Exact {
    let wanted = width
        .checked_div(&Exact::whole(POINTS))
        .unwrap_or_else(Exact::one);
    if let Some(lattice) = lattice {
        let steps = (&wanted * &Exact::from(lattice.scale))
            .ceil()
            .max(Exact::one());
        return steps
            .checked_div(&Exact::from(lattice.scale))
            .unwrap_or_else(Exact::one);
    }
    let mut step = Exact::one();
    let ten = Exact::whole(10);
    if wanted.is_zero() || wanted.is_negative() {
        return step;
    }
    while step < wanted {
        step = &step * &ten;
    }
    let finer = |step: &Exact, divisor: i64| step.checked_div(&Exact::whole(divisor));
    while let Some(smaller) = finer(&step, 10).filter(|smaller| *smaller >= wanted) {
        step = smaller;
    }
    [5, 2]
        .iter()
        .filter_map(|&divisor| finer(&step, divisor))
        .find(|smaller| *smaller >= wanted)
        .unwrap_or(step)
}
