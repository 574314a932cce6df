//! The envelope: the highest rejection probability that any test of the level could have at a point, randomised tests
//! included.
//!
//! Only the null points next to the alternative point matter. With one neighbour the best test is the randomised tail of
//! Neyman and Pearson (1933). With a neighbour on either side it is a randomised inner range that uses the level up at
//! both (generalised Neyman–Pearson lemma; total positivity makes the range). Every figure returned is an upper bound
//! by Lagrange duality: for λ ≥ 0, no test of level α at a and b has power at v above
//! α(λa + λb) + Σ (f_v − λa·f_a − λb·f_b)⁺.

use crate::kernel::region::Region;
use crate::space::{LineSet, Value};

use super::judgement::Level;
use super::obstacle::Obstacle;
use super::operating::{Operating, last_true};

/// Added to a bound from duality for the rounding of its sums and multipliers.
const SLACK: f64 = 1e-11;
/// How far a share may lie outside [0, 1] by rounding alone.
const SHARE: f64 = 1e-9;
/// Most outcomes an end of a range is moved by before the search is given up.
const MOST_MOVES: usize = 10_000;

/// The envelope at a true parameter value, rounded up; `None` where the plan tries more than once, which no single test
/// of the same units does.
pub fn envelope(operating: &Operating<'_>, at: &Value) -> Result<Option<f64>, Obstacle> {
    let problem = operating.problem;
    if problem.tries > 1 {
        return Ok(None);
    }
    let null = problem.observation.image(&problem.null).closure();
    let (least, most) = problem.observation.images(at);
    // Nature may choose any image of the point; no test has more power than at the worst of them.
    let mut bound = over_images(operating, &null, &least)?;
    if most != least {
        bound = bound.min(over_images(operating, &null, &most)?);
        let between = LineSet::between(least, most);
        if !between.intersection(&null).is_empty() {
            bound = bound.min(operating.alpha().above());
        }
    }
    Ok(Some(bound.min(1.0)))
}

fn over_images(
    operating: &Operating<'_>,
    null: &LineSet,
    observed: &Value,
) -> Result<f64, Obstacle> {
    let alpha = operating.alpha();
    if null.contains(observed) {
        return Ok(alpha.above());
    }
    let below = null
        .pieces()
        .iter()
        .map(|piece| &piece.high().at)
        .filter(|end| *end < observed)
        .max();
    let above = null
        .pieces()
        .iter()
        .map(|piece| &piece.low().at)
        .filter(|end| *end > observed)
        .min();
    match (below, above) {
        (Some(a), Some(b)) => {
            let one = against_one(operating, a, observed, &alpha)?;
            let other = against_one(operating, b, observed, &alpha)?;
            let both = against_two(operating, a, b, observed, &alpha)?;
            Ok(one.min(other).min(both))
        }
        (Some(only), None) | (None, Some(only)) => against_one(operating, only, observed, &alpha),
        (None, None) => Ok(1.0),
    }
}

/// The randomised tail of level α at `null` towards `observed`.
fn against_one(
    operating: &Operating<'_>,
    null: &Value,
    observed: &Value,
    alpha: &Level,
) -> Result<f64, Obstacle> {
    let upwards = (null < observed) == operating.is_rising();
    let (low, high) = operating.outcomes();
    let (tail, edge) = if upwards {
        match operating.smallest_upper_tail(null, alpha)? {
            Some(count) => (Region::at_least(Some(count)), count.checked_sub(1)),
            None => (Region::empty(), high),
        }
    } else {
        match operating.largest_lower_tail(null, alpha) {
            Ok(Some(count)) => (Region::at_most(Some(count)), count.checked_add(1)),
            Ok(None) => (Region::empty(), Some(low)),
            Err(Obstacle::NoLargestRegion) => return Ok(1.0),
            Err(other) => return Err(other),
        }
    };
    let sure = operating.single(&tail, observed).upper();
    let Some(edge) = edge else {
        return Ok(sure);
    };
    let edge = Region::between(edge, edge);
    let spare = (alpha.above() - operating.single(&tail, null).lower()).next_up();
    let at_null = operating.single(&edge, null).lower();
    let share = if at_null > 0.0 {
        (spare / at_null).next_up().clamp(0.0, 1.0)
    } else {
        1.0
    };
    let more = (share * operating.single(&edge, observed).upper()).next_up();
    Ok((sure + more).next_up().min(1.0))
}

/// The probabilities of one outcome at the alternative point and at both null points.
#[derive(Clone, Copy)]
struct Terms {
    v: f64,
    a: f64,
    b: f64,
}

/// A point of the alternative with a null neighbour on either side.
struct Between<'a, 'b> {
    operating: &'a Operating<'b>,
    a: &'a Value,
    b: &'a Value,
    observed: &'a Value,
    level: f64,
}

/// Bound with a null neighbour on either side.
fn against_two(
    operating: &Operating<'_>,
    a: &Value,
    b: &Value,
    observed: &Value,
    alpha: &Level,
) -> Result<f64, Obstacle> {
    let start = balanced_range(operating, a, b, observed, alpha)?;
    let between = Between {
        operating,
        a,
        b,
        observed,
        level: alpha.above(),
    };
    let (from, to) = between.settled(start);
    Ok(between.bound(from, to))
}

impl Between<'_, '_> {
    fn chance(&self, from: u64, to: u64) -> Terms {
        let range = Region::between(from, to);
        let at = |value: &Value| self.operating.single(&range, value).middle();
        Terms {
            v: at(self.observed),
            a: at(self.a),
            b: at(self.b),
        }
    }

    fn term(&self, count: u64) -> Terms {
        self.chance(count, count)
    }

    /// The shares of the first and the last outcome with which the range uses the level up at both neighbours.
    fn shares(&self, from: u64, to: u64) -> Option<(f64, f64)> {
        let (first, last) = (self.term(from), self.term(to));
        // Empty, and its probabilities zero, where both are neighbours.
        let inner = self.chance(from + 1, to.saturating_sub(1));
        let determinant = first.a * last.b - first.b * last.a;
        if determinant.abs() < f64::MIN_POSITIVE {
            return None;
        }
        let (spare_a, spare_b) = (self.level - inner.a, self.level - inner.b);
        Some((
            (spare_a * last.b - spare_b * last.a) / determinant,
            (first.a * spare_b - first.b * spare_a) / determinant,
        ))
    }

    /// Moves the ends until both shares are shares: a share above one asks for one more outcome on its side, a negative
    /// one for one less. Where it stops otherwise, the bound is still a bound, only not the least one.
    fn settled(&self, start: (u64, u64)) -> (u64, u64) {
        let (low, high) = self.operating.outcomes();
        let high = high.unwrap_or(u64::MAX);
        let (mut from, mut to) = start;
        if from >= to {
            // One outcome has one share: two are needed to meet two levels.
            to = (from + 1).min(high);
            from = from.min(to.saturating_sub(1));
        }
        for _ in 0..MOST_MOVES {
            let Some((left, right)) = self.shares(from, to) else {
                break;
            };
            let before = (from, to);
            if left > 1.0 + SHARE && from > low {
                from -= 1;
            } else if left < -SHARE {
                from += 1;
            }
            if right > 1.0 + SHARE && to < high {
                to += 1;
            } else if right < -SHARE {
                to -= 1;
            }
            if from >= to {
                return before;
            }
            if (from, to) == before {
                break;
            }
        }
        (from, to)
    }

    /// The bound by duality, with the multipliers that make the outcomes at both ends of a range indifferent.
    fn bound(&self, from: u64, to: u64) -> f64 {
        let (first, last) = (self.term(from), self.term(to));
        let determinant = first.a * last.b - first.b * last.a;
        if determinant.abs() < f64::MIN_POSITIVE {
            return 1.0;
        }
        let lambda_a = ((first.v * last.b - first.b * last.v) / determinant).max(0.0);
        let lambda_b = ((first.a * last.v - first.v * last.a) / determinant).max(0.0);
        let gain = |count: u64| {
            let term = self.term(count);
            term.v - lambda_a * term.a - lambda_b * term.b
        };
        let Some((from, to)) = self.gaining(gain, (from, to)) else {
            return 1.0;
        };
        let range = Region::between(from, to);
        let sum = self.operating.single(&range, self.observed).upper()
            - lambda_a * self.operating.single(&range, self.a).lower()
            - lambda_b * self.operating.single(&range, self.b).lower();
        let spent = self.level * (lambda_a + lambda_b);
        let slack = SLACK * (1.0 + spent + lambda_a + lambda_b);
        (spent + sum.max(0.0) + slack).min(1.0)
    }

    /// The outcomes with a positive gain. Total positivity: they form one range; the ends of a nearby one are moved until
    /// it is that.
    fn gaining(&self, gain: impl Fn(u64) -> f64, start: (u64, u64)) -> Option<(u64, u64)> {
        let (low, high) = self.operating.outcomes();
        let high = high.unwrap_or(u64::MAX);
        let (mut from, mut to) = start;
        for _ in 0..MOST_MOVES {
            if from > low && gain(from - 1) > 0.0 {
                from -= 1;
            } else if to < high && gain(to + 1) > 0.0 {
                to += 1;
            } else if from < to && gain(from) < 0.0 {
                from += 1;
            } else if from < to && gain(to) < 0.0 {
                to -= 1;
            } else {
                return Some((from, to));
            }
        }
        None
    }
}

/// The range whose randomised version uses α up at both neighbours, or nearly so: starts move until the ends balance.
fn balanced_range(
    operating: &Operating<'_>,
    a: &Value,
    b: &Value,
    observed: &Value,
    alpha: &Level,
) -> Result<(u64, u64), Obstacle> {
    let (low, _) = operating.outcomes();
    let high = operating.search_end([a, b]);
    // Along the statistic: the neighbour below makes it small, the one above large.
    let (small, large) = if operating.is_rising() {
        (a, b)
    } else {
        (b, a)
    };
    let centre = operating
        .problem
        .family
        .expected_count(observed, &operating.amount);
    let centre = if centre.is_finite() {
        (centre as u64).clamp(low, high)
    } else {
        low
    };
    let farthest = |from: u64| -> Result<u64, Obstacle> {
        let to = last_true(from.max(centre), from, high, |to| {
            operating.is_at_most(&Region::between(from, to), small, alpha)
        })?;
        Ok(to.map_or(from, |to| (to + 1).min(high)))
    };
    // The farther the range starts, the farther it ends at level α under the lower neighbour, and the more it holds
    // under the upper one.
    let from = last_true(centre, low, high, |from| {
        let to = farthest(from)?;
        operating.is_at_most(&Region::between(from, to), large, alpha)
    })?
    .unwrap_or(low);
    Ok((from, farthest(from)?))
}
