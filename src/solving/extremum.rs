//! The supremum or infimum of the rejection probability over a set: by a theorem where one says where it is, else by
//! branch and bound with enclosures.

use std::collections::BinaryHeap;

use crate::kernel::enclosure::Enclosure;
use crate::kernel::region::Region;
use crate::space::{Interval, LineSet, Value};

use super::judgement::over_tries;
use super::operating::Operating;
use super::region::{Form, form_of};

/// Supremum or infimum.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Goal {
    /// The largest value.
    Supremum,
    /// The smallest value.
    Infimum,
}

/// A proved extremum.
#[derive(Clone, Debug)]
pub struct Extremum {
    /// Its enclosure, all tries counted.
    pub value: Enclosure,
    /// The observed value where it is attained or approached.
    pub at: Value,
    /// Whether the point was taken as the lower end of a piece of the set: which image of it counts.
    pub at_lower_end: bool,
    /// Why it is there.
    pub how: &'static str,
}

/// The argument for tails.
const BY_MONOTONICITY: &str = "monotone likelihood ratio: the probability of a tail is monotone in the parameter (Lehmann 1955), so the extremum is at an end of the set";
/// The argument for two tails and inner ranges.
const BY_VARIATION: &str = "total positivity: the probability of two tails first falls and then rises along the parameter, that of an inner range first rises and then falls (variation diminishing, Karlin 1968), so the extremum is at an end of the set";
/// The argument where an inner range's probability, or that of its complement, is monotone over a piece of the set.
const BY_PEAK_OUTSIDE: &str = "total positivity: the probability of an inner range first rises and then falls along the parameter, that of two tails first falls and then rises (variation diminishing, Karlin 1968); the turn lies outside the set, as a point beyond its end shows, so the extremum is at that end";
/// The argument for everything else.
const BY_BRANCH_AND_BOUND: &str =
    "branch and bound with enclosures of the probability and of its slope over the whole set";

/// Width at which branch and bound stops, relative to the value.
const PRECISE: f64 = 1e-12;
/// Most boxes looked at before the enclosure reached so far is returned, wide but true.
const MOST_BOXES: usize = 40_000;

/// The extremum of the rejection probability of a region over a non-empty set of observed values (its closure).
pub fn extremum(operating: &Operating<'_>, region: &Region, set: &LineSet, goal: Goal) -> Extremum {
    let form = form_of(region, operating.outcomes());
    let mut best: Option<Extremum> = None;
    for piece in set.pieces() {
        let found = over_piece(operating, region, form, piece, goal);
        let better = best.as_ref().is_none_or(|best| match goal {
            Goal::Supremum => found.value.middle() > best.value.middle(),
            Goal::Infimum => found.value.middle() < best.value.middle(),
        });
        best = Some(match best {
            None => found,
            Some(best) => {
                let value = match goal {
                    Goal::Supremum => best.value.max(found.value),
                    Goal::Infimum => best.value.min(found.value),
                };
                let how = if best.how == BY_BRANCH_AND_BOUND {
                    best.how
                } else {
                    found.how
                };
                let place = if better { found } else { best };
                Extremum {
                    value,
                    how,
                    ..place
                }
            }
        });
    }
    let mut best = best.unwrap_or(Extremum {
        value: Enclosure::UNKNOWN,
        at: Value::Infinity,
        at_lower_end: true,
        how: BY_BRANCH_AND_BOUND,
    });
    best.value = over_tries(best.value, operating.problem.tries);
    best
}

fn over_piece(
    operating: &Operating<'_>,
    region: &Region,
    form: Form,
    piece: &Interval,
    goal: Goal,
) -> Extremum {
    let at_end = |lower: bool, how: &'static str| {
        let end = if lower { piece.low() } else { piece.high() };
        Extremum {
            value: operating.single(region, &end.at),
            at: end.at.clone(),
            at_lower_end: lower,
            how,
        }
    };
    let better_end = |how: &'static str| {
        let (low, high) = (at_end(true, how), at_end(false, how));
        let value = match goal {
            Goal::Supremum => low.value.max(high.value),
            Goal::Infimum => low.value.min(high.value),
        };
        let low_wins = match goal {
            Goal::Supremum => low.value.middle() >= high.value.middle(),
            Goal::Infimum => low.value.middle() <= high.value.middle(),
        };
        let place = if low_wins { low } else { high };
        Extremum { value, ..place }
    };
    match (form, goal) {
        (Form::Nothing | Form::Everything, _) => at_end(true, BY_MONOTONICITY),
        (Form::LowerTail, _) => {
            let falls = operating.is_rising();
            at_end(falls == (goal == Goal::Supremum), BY_MONOTONICITY)
        }
        (Form::UpperTail, _) => {
            let rises = operating.is_rising();
            at_end(rises != (goal == Goal::Supremum), BY_MONOTONICITY)
        }
        (Form::TwoTails, Goal::Supremum) | (Form::Inner, Goal::Infimum) => better_end(BY_VARIATION),
        _ if piece.is_point() => at_end(true, BY_VARIATION),
        (Form::Inner, _) | (Form::TwoTails, _) => {
            match end_towards_peak(operating, region, form, piece) {
                Some(lower) => at_end(lower, BY_PEAK_OUTSIDE),
                None => branch_and_bound(operating, region, piece, goal),
            }
        }
        (Form::Scattered, _) => branch_and_bound(operating, region, piece, goal),
    }
}

/// The end of the piece (lower or not) that is nearest to the peak of an inner range's probability, if a point beyond it
/// shows that the peak lies outside: the probability is then monotone on the piece. Two tails are the complement.
fn end_towards_peak(
    operating: &Operating<'_>,
    region: &Region,
    form: Form,
    piece: &Interval,
) -> Option<bool> {
    let (low, high) = operating.outcomes();
    let inner = if form == Form::Inner {
        region.within(low, high)
    } else {
        region.complement().within(low, high)
    };
    let range = inner.ranges().first()?;
    let middle = range.from + (range.to? - range.from) / 2;
    let witness = operating
        .problem
        .family
        .most_likely(middle, &operating.amount);
    let lower = if witness < piece.low().at {
        true
    } else if witness > piece.high().at {
        false
    } else {
        return None;
    };
    let end = if lower { piece.low() } else { piece.high() };
    let there = operating.single(&inner, &witness).lower();
    let here = operating.single(&inner, &end.at).upper();
    (there > here).then_some(lower)
}

/// A stretch of the parameter with an upper bound on the probability over it.
struct Stretch {
    bound: f64,
    low: Value,
    high: Value,
    at_low: Enclosure,
    at_high: Enclosure,
}

impl PartialEq for Stretch {
    fn eq(&self, other: &Self) -> bool {
        self.cmp(other).is_eq()
    }
}
impl Eq for Stretch {}
impl PartialOrd for Stretch {
    fn partial_cmp(&self, other: &Self) -> Option<std::cmp::Ordering> {
        Some(self.cmp(other))
    }
}
impl Ord for Stretch {
    fn cmp(&self, other: &Self) -> std::cmp::Ordering {
        self.bound
            .total_cmp(&other.bound)
            .then_with(|| other.low.cmp(&self.low))
    }
}

/// The infimum of a probability is one less the supremum of the complement's.
fn branch_and_bound(
    operating: &Operating<'_>,
    region: &Region,
    piece: &Interval,
    goal: Goal,
) -> Extremum {
    match goal {
        Goal::Supremum => supremum(operating, region, piece),
        Goal::Infimum => {
            let found = supremum(operating, &region.complement(), piece);
            Extremum {
                value: found.value.complement(),
                ..found
            }
        }
    }
}

fn supremum(operating: &Operating<'_>, region: &Region, piece: &Interval) -> Extremum {
    let (low, high) = (piece.low().at.clone(), piece.high().at.clone());
    let (at_low, at_high) = (
        operating.single(region, &low),
        operating.single(region, &high),
    );
    let mut lower = at_low.lower().max(at_high.lower());
    let mut place = if at_low.lower() >= at_high.lower() {
        (low.clone(), true)
    } else {
        (high.clone(), false)
    };
    let mut stretches = BinaryHeap::new();
    stretches.push(bounded(operating, region, low, high, at_low, at_high));
    let mut settled = lower;
    for _ in 0..MOST_BOXES {
        let Some(worst) = stretches.pop() else {
            break;
        };
        if worst.bound <= lower * (1.0 + PRECISE) {
            settled = settled.max(worst.bound);
            break;
        }
        let Some(middle) = split_point(operating, &worst.low, &worst.high) else {
            // Nothing lies between the ends: their own enclosures are all there is.
            settled = settled.max(worst.at_low.upper()).max(worst.at_high.upper());
            continue;
        };
        let at_middle = operating.single(region, &middle);
        if at_middle.lower() > lower {
            lower = at_middle.lower();
            place = (middle.clone(), true);
        }
        let left = bounded(
            operating,
            region,
            worst.low,
            middle.clone(),
            worst.at_low,
            at_middle,
        );
        let right = bounded(
            operating,
            region,
            middle,
            worst.high,
            at_middle,
            worst.at_high,
        );
        stretches.push(left);
        stretches.push(right);
    }
    let upper = stretches
        .peek()
        .map_or(settled, |worst| worst.bound.max(settled))
        .clamp(lower, 1.0);
    Extremum {
        value: Enclosure::new(lower, upper).unwrap_or(Enclosure::UNKNOWN),
        at: place.0,
        at_lower_end: place.1,
        how: BY_BRANCH_AND_BOUND,
    }
}

/// A point strictly between two others; on lattices a lattice point, towards infinity the double.
fn split_point(operating: &Operating<'_>, low: &Value, high: &Value) -> Option<Value> {
    if let Some(lattice) = operating.problem.family.lattice() {
        let (first, last) = (lattice.index(low)?, lattice.index(high)?);
        return (last - first > 1).then(|| lattice.value(first + (last - first) / 2));
    }
    match (low, high) {
        (Value::Finite(a), Value::Finite(b)) => {
            let middle = a.midpoint(b);
            // Boxes narrower than doubles can tell apart are not split further.
            let apart = (b.to_f64() - a.to_f64()) > 4.0 * f64::EPSILON * b.to_f64().abs();
            apart.then_some(Value::Finite(middle))
        }
        (Value::Finite(a), Value::Infinity) => {
            let one = crate::kernel::exact::Exact::one();
            Some(Value::Finite(&(a + a) + &one))
        }
        _ => None,
    }
}

fn bounded(
    operating: &Operating<'_>,
    region: &Region,
    low: Value,
    high: Value,
    at_low: Enclosure,
    at_high: Enclosure,
) -> Stretch {
    let adjacent = split_point(operating, &low, &high).is_none();
    let bound = if adjacent && operating.problem.family.lattice().is_some() {
        at_low.upper().max(at_high.upper())
    } else {
        let by_tails = bound_by_tails(operating, region, &low, &high);
        bound_by_slope(operating, region, (&low, at_low), (&high, at_high))
            .map_or(by_tails, |by_slope| by_slope.min(by_tails))
    };
    Stretch {
        bound,
        low,
        high,
        at_low,
        at_high,
    }
}

/// Every range's probability is a difference of two lower tails, each monotone: the largest first less the smallest
/// second bounds it over the stretch.
fn bound_by_tails(operating: &Operating<'_>, region: &Region, low: &Value, high: &Value) -> f64 {
    let (most_at, least_at) = if operating.is_rising() {
        (low, high)
    } else {
        (high, low)
    };
    let bound: f64 = region
        .ranges()
        .iter()
        .map(|range| {
            let upper = match range.to {
                Some(to) => operating
                    .single(&Region::at_most(Some(to)), most_at)
                    .upper(),
                None => 1.0,
            };
            let lower = match range.from.checked_sub(1) {
                Some(before) => operating
                    .single(&Region::at_most(Some(before)), least_at)
                    .lower(),
                None => 0.0,
            };
            (upper - lower).next_up()
        })
        .sum();
    (bound * (1.0 + 1e-14)).min(1.0)
}

/// With the slope between −Q and P over the stretch, the probability lies below both lines γ(a) + P·(θ−a) and
/// γ(b) + Q·(b−θ); they cross at the bound.
fn bound_by_slope(
    operating: &Operating<'_>,
    region: &Region,
    (low, at_low): (&Value, Enclosure),
    (high, at_high): (&Value, Enclosure),
) -> Option<f64> {
    let (least, most) = slope_over(operating, region, low, high)?;
    let (a, b) = (at_low.upper(), at_high.upper());
    if most <= 0.0 {
        return Some(a);
    }
    if least >= 0.0 {
        return Some(b);
    }
    let (p, q) = (most, -least);
    let width = (high.finite()? - low.finite()?).to_f64().next_up();
    let crossing = (a * q + b * p + width * p * q) / (p + q);
    Some((crossing * (1.0 + 1e-14)).max(a).max(b))
}

/// Smallest and largest slope of the region's probability over a bounded stretch.
fn slope_over(
    operating: &Operating<'_>,
    region: &Region,
    low: &Value,
    high: &Value,
) -> Option<(f64, f64)> {
    high.finite()?;
    let family = &operating.problem.family;
    let mut least = 0.0;
    let mut most = 0.0;
    let mut add = |count: u64, sign: f64| -> Option<()> {
        let at_low = family.slope(count, low, &operating.amount)?;
        let at_high = family.slope(count, high, &operating.amount)?;
        let steepest = family.steepest(count, &operating.amount);
        let bottom = at_low.lower().min(at_high.lower());
        let top = if *low < steepest && steepest < *high {
            family.slope(count, &steepest, &operating.amount)?.upper()
        } else {
            at_low.upper().max(at_high.upper())
        };
        if sign > 0.0 {
            least += bottom;
            most += top;
        } else {
            least -= top;
            most -= bottom;
        }
        Some(())
    };
    // A lower tail falls where the statistic grows with the parameter.
    let lower_tail = if operating.is_rising() { -1.0 } else { 1.0 };
    for range in region.ranges() {
        if let Some(to) = range.to {
            add(to, lower_tail)?;
        }
        if let Some(before) = range.from.checked_sub(1) {
            add(before, -lower_tail)?;
        }
    }
    let slack = 1e-12 * (f64::abs(least) + f64::abs(most));
    Some((least - slack, most + slack))
}
