//! The supremum of a probability over an interval, proved by branch and bound with enclosures.
//!
//! A stretch of the parameter is bounded in two ways: by the monotone tails whose differences make up the probability, and
//! by an enclosure of its slope. The second closes in with the square of the width, so that a supremum inside is found to
//! full precision in a few dozen steps. On lattices stretches end as single values.

use std::cmp::Ordering;
use std::collections::BinaryHeap;

use crate::kernel::enclosure::Enclosure;
use crate::kernel::region::Region;
use crate::space::{Interval, Value};

use super::judgement::Level;
use super::operating::Operating;

/// Width at which the search stops, relative to the value.
const PRECISE: f64 = 1e-12;
/// Most stretches looked at before the enclosure reached so far is returned, wide but true.
const MOST_STRETCHES: usize = 4_000;

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
    fn partial_cmp(&self, other: &Self) -> Option<Ordering> {
        Some(self.cmp(other))
    }
}
impl Ord for Stretch {
    fn cmp(&self, other: &Self) -> Ordering {
        self.bound
            .total_cmp(&other.bound)
            .then_with(|| other.low.cmp(&self.low))
    }
}

/// The supremum of a region's probability over an interval: its enclosure, where it is approached, and whether that is
/// the interval's lower end or inside (rather than its upper end). With a level to compare with, the search stops once
/// the comparison is settled, and the enclosure may be wide.
pub fn supremum(
    operating: &Operating<'_>,
    region: &Region,
    piece: &Interval,
    against: Option<&Level>,
) -> (Enclosure, Value, bool) {
    let (low, high) = (piece.low().at.clone(), piece.high().at.clone());
    let (at_low, at_high) = (
        operating.single(region, &low),
        operating.single(region, &high),
    );
    let mut lower = at_low.lower().max(at_high.lower());
    // No bound can be better than the enclosures of the points themselves.
    let mut attained = at_low.upper().max(at_high.upper());
    let mut place = if at_low.lower() >= at_high.lower() {
        (low.clone(), true)
    } else {
        (high.clone(), false)
    };
    let mut stretches = BinaryHeap::new();
    stretches.push(bounded(operating, region, low, high, at_low, at_high));
    let mut settled = attained;
    for _ in 0..MOST_STRETCHES {
        let Some(worst) = stretches.pop() else {
            break;
        };
        let settles = against.is_some_and(|level| {
            let is = |value: f64| level.against(Enclosure::exactly(value));
            is(worst.bound) == Some(Ordering::Less) || is(lower) == Some(Ordering::Greater)
        });
        if settles || worst.bound <= attained.max(lower * (1.0 + PRECISE)) {
            settled = settled.max(worst.bound);
            break;
        }
        let Some(middle) = split_point(operating, &worst.low, &worst.high) else {
            // Nothing lies between the ends: their own enclosures are all there is.
            settled = settled.max(worst.at_low.upper()).max(worst.at_high.upper());
            continue;
        };
        let at_middle = operating.single(region, &middle);
        attained = attained.max(at_middle.upper());
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
        .map_or(settled.max(attained), |worst| {
            worst.bound.max(settled).max(attained)
        })
        .clamp(lower, 1.0);
    let value = Enclosure::new(lower, upper).unwrap_or(Enclosure::UNKNOWN);
    (value, place.0, place.1)
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
