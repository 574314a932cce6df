//! A problem at one amount of inspection: what any region does at any point.

use std::cmp::Ordering;

use crate::family::{AmountKind, Trend};
use crate::kernel::enclosure::Enclosure;
use crate::kernel::exact::Exact;
use crate::kernel::law::Law;
use crate::kernel::ratio_sum;
use crate::kernel::region::Region;
use crate::problem::Problem;
use crate::space::Value;

use super::judgement::{self, Level, over_tries};
use super::obstacle::Obstacle;

/// A problem at one amount of inspection.
#[derive(Clone, Debug)]
pub struct Operating<'a> {
    /// The problem.
    pub problem: &'a Problem,
    /// The amount of inspection.
    pub amount: Exact,
}

impl<'a> Operating<'a> {
    /// The problem at an amount.
    pub fn new(problem: &'a Problem, amount: Exact) -> Self {
        Self { problem, amount }
    }

    /// The law of the statistic at an observed value.
    pub fn law(&self, observed: &Value) -> Law {
        self.problem.family.law(observed, &self.amount)
    }

    /// Smallest and largest outcome under any parameter value; without the second, counts have no end.
    pub fn outcomes(&self) -> (u64, Option<u64>) {
        let amount = self.amount.floor().to_u64().unwrap_or(u64::MAX);
        match self.problem.family.registration().amount_kind {
            AmountKind::Units => (0, Some(amount)),
            AmountKind::Nonconforming => (amount, None),
            AmountKind::Opportunity => (0, None),
        }
    }

    /// A count beyond which no search for inner ranges need go: the last outcome, or far beyond where the statistic lies at
    /// both values. A range that reached it under an endless law would hold nearly all outcomes of some null point.
    pub fn search_end(&self, values: [&Value; 2]) -> u64 {
        let (first, last) = self.outcomes();
        let expected = values.map(|value| self.problem.family.expected_count(value, &self.amount));
        let farthest = 64.0 * (expected[0].max(expected[1]) + 64.0);
        last.unwrap_or(if farthest < UNBOUNDED as f64 {
            (farthest as u64).max(first + 1)
        } else {
            UNBOUNDED
        })
    }

    /// Probability that one try falls into the region, at an observed value.
    pub fn single(&self, region: &Region, observed: &Value) -> Enclosure {
        ratio_sum::probability(&self.law(observed), region)
    }

    /// Probability that the null is rejected, all tries counted, at an observed value.
    pub fn rejection(&self, region: &Region, observed: &Value) -> Enclosure {
        over_tries(self.single(region, observed), self.problem.tries)
    }

    /// Probability that no try rejects the null, at an observed value: small values keep their relative accuracy.
    pub fn retention(&self, region: &Region, observed: &Value) -> Enclosure {
        let single = self.single(&region.complement(), observed);
        let (mut lower, mut upper) = (single.lower(), single.upper());
        for _ in 1..self.problem.tries {
            lower = (lower * single.lower()).next_down();
            upper = (upper * single.upper()).next_up();
        }
        Enclosure::new(lower.max(0.0), upper.min(1.0)).unwrap_or(Enclosure::UNKNOWN)
    }

    /// Whether the rejection probability at an observed value is at most a level.
    pub fn is_at_most(
        &self,
        region: &Region,
        observed: &Value,
        level: &Level,
    ) -> Result<bool, Obstacle> {
        self.compare(region, observed, level)
            .map(|order| order != Ordering::Greater)
    }

    /// Whether it is at least a level.
    pub fn is_at_least(
        &self,
        region: &Region,
        observed: &Value,
        level: &Level,
    ) -> Result<bool, Obstacle> {
        self.compare(region, observed, level)
            .map(|order| order != Ordering::Less)
    }

    fn compare(
        &self,
        region: &Region,
        observed: &Value,
        level: &Level,
    ) -> Result<Ordering, Obstacle> {
        self.judge(&self.law(observed), region, level)
    }

    /// How the rejection probability under a law compares with a level: for searches that ask about one law many times.
    pub fn judge(&self, law: &Law, region: &Region, level: &Level) -> Result<Ordering, Obstacle> {
        judgement::compare(law, region, self.problem.tries, level)
    }

    /// The level of the problem.
    pub fn alpha(&self) -> Level {
        Level::new(self.problem.alpha.clone())
    }

    /// Whether the statistic grows with the parameter.
    pub fn is_rising(&self) -> bool {
        self.problem.family.trend() == Trend::Rising
    }

    /// The largest `c` for which P(statistic ≤ c) at the observed value is at most the level; `None` where even the
    /// smallest outcome is too probable.
    pub fn largest_lower_tail(
        &self,
        observed: &Value,
        level: &Level,
    ) -> Result<Option<u64>, Obstacle> {
        let (low, high) = self.outcomes();
        let last = high.unwrap_or(UNBOUNDED);
        let start = self.start(observed, low, last);
        let law = self.law(observed);
        let found = last_true(start, low, last, |count| {
            self.judge(&law, &Region::at_most(Some(count)), level)
                .map(Ordering::is_le)
        })?;
        if found == Some(last) {
            return Err(Obstacle::NoLargestRegion);
        }
        Ok(found)
    }

    /// The smallest `c` for which P(statistic ≥ c) at the observed value is at most the level; `None` where even the
    /// largest outcome is too probable.
    pub fn smallest_upper_tail(
        &self,
        observed: &Value,
        level: &Level,
    ) -> Result<Option<u64>, Obstacle> {
        let (low, high) = self.outcomes();
        let last = high.unwrap_or(UNBOUNDED);
        let start = self.start(observed, low, last);
        // P(statistic ≥ c) > level holds up to the count just below the one sought.
        let law = self.law(observed);
        let too_probable = last_true(start, low, last, |count| {
            self.judge(&law, &Region::at_least(Some(count)), level)
                .map(Ordering::is_gt)
        })?;
        Ok(match too_probable {
            None => Some(low),
            Some(count) if count == last => None,
            Some(count) => Some(count + 1),
        })
    }

    fn start(&self, observed: &Value, low: u64, last: u64) -> u64 {
        let expected = self.problem.family.expected_count(observed, &self.amount);
        if expected.is_finite() {
            (expected as u64).clamp(low, last)
        } else {
            low
        }
    }
}

/// Stands for "no end" in searches over counts.
const UNBOUNDED: u64 = 1 << 40;

/// The last count in `low..=last` for which a predicate holds that holds from `low` up to some count and not beyond;
/// `None` if it holds nowhere. Gallops from `start`, then bisects.
pub fn last_true<E>(
    start: u64,
    low: u64,
    last: u64,
    mut holds: impl FnMut(u64) -> Result<bool, E>,
) -> Result<Option<u64>, E> {
    let start = start.clamp(low, last);
    let mut step = 1u64;
    let (mut yes, mut no);
    if holds(start)? {
        yes = start;
        loop {
            if yes == last {
                return Ok(Some(last));
            }
            let next = yes.saturating_add(step).min(last);
            if holds(next)? {
                yes = next;
                step = step.saturating_mul(2);
            } else {
                no = next;
                break;
            }
        }
    } else {
        no = start;
        loop {
            if no == low {
                return Ok(None);
            }
            let next = no.saturating_sub(step).max(low);
            if holds(next)? {
                yes = next;
                break;
            }
            no = next;
            step = step.saturating_mul(2);
        }
    }
    while no - yes > 1 {
        let middle = yes + (no - yes) / 2;
        if holds(middle)? {
            yes = middle;
        } else {
            no = middle;
        }
    }
    Ok(Some(yes))
}
