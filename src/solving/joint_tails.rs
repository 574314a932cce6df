//! Two tails judged together, for a null with alternatives on both sides.
//!
//! For totally positive families the probability of two tails is largest over an interval at one of its ends (variation
//! diminishing, Karlin 1968). So a region is judged at the two ends of the null only.

use std::cmp::Ordering;

use crate::kernel::exact::Exact;
use crate::kernel::exact_sum;
use crate::kernel::law::Law;
use crate::kernel::ratio_sum;
use crate::kernel::region::Region;
use crate::space::Value;

use super::judgement::Level;
use super::obstacle::Obstacle;
use super::operating::{Operating, last_true};

/// Doubles that differ by less than this part of them are compared exactly.
const CLOSE: f64 = 1e-9;

/// Two tails as positions: `lower` outcomes are rejected from below, and all from `upper` on.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
struct Tails {
    /// How many outcomes the lower tail holds.
    lower: u64,
    /// First outcome of the upper tail; one beyond the last outcome for none.
    upper: u64,
}

struct TwoTails<'a, 'b> {
    operating: &'a Operating<'b>,
    /// The law at the null end where the lower tail is most probable.
    low: Law,
    /// The law at the null end where the upper tail is most probable.
    high: Law,
    alpha: &'a Level,
    first: u64,
    beyond: u64,
    /// About where the statistic lies at the upper null end.
    centre: f64,
}

/// Among the two-tailed regions of size at most α that no larger one contains: the one whose tail sizes, each at its own
/// end of the null, differ least; then the smaller size; then the larger lower tail.
pub fn joint_tails(
    operating: &Operating<'_>,
    low: &Value,
    high: &Value,
    alpha: &Level,
) -> Result<Region, Obstacle> {
    let (first, last) = operating.outcomes();
    let search = TwoTails {
        operating,
        low: operating.law(low),
        high: operating.law(high),
        alpha,
        first,
        beyond: last.map_or(1 << 40, |last| last + 1),
        centre: operating
            .problem
            .family
            .expected_count(high, &operating.amount),
    };
    let longest = operating
        .largest_lower_tail(low, alpha)?
        .map_or(0, |count| count + 1 - first);
    // Along the maximal regions the lower tail grows and the upper shrinks, so their difference changes sign once.
    let balanced = last_true(longest / 2, 0, longest, |lower| {
        let tails = search.completed(lower)?;
        Ok::<bool, Obstacle>(search.difference(tails) <= 0.0)
    })?
    .unwrap_or(0);
    let here = search.completed(balanced)?;
    let widest = search.longest_lower(here.upper, longest)?;
    let mut candidates = vec![Tails {
        lower: widest,
        upper: here.upper,
    }];
    if widest == balanced && balanced < longest {
        let next = search.completed(balanced + 1)?;
        candidates.push(Tails {
            lower: search.longest_lower(next.upper, longest)?,
            upper: next.upper,
        });
    } else if widest > balanced {
        // The region before: one less than the shortest lower tail that goes with this upper tail.
        let shorter = last_true(balanced, 0, balanced, |lower| {
            search
                .completed(lower)
                .map(|tails| tails.upper < here.upper)
        })?;
        if let Some(lower) = shorter {
            candidates.push(search.completed(lower)?);
        }
    }
    let best = candidates.into_iter().reduce(|best, other| {
        if search.prefers(other, best) {
            other
        } else {
            best
        }
    });
    Ok(best.map_or_else(Region::empty, |tails| search.region(tails)))
}

impl TwoTails<'_, '_> {
    fn lower(&self, tails: Tails) -> Region {
        Region::at_most(
            (self.first + tails.lower)
                .checked_sub(1)
                .filter(|_| tails.lower > 0),
        )
    }

    fn upper(&self, tails: Tails) -> Region {
        Region::at_least((tails.upper < self.beyond).then_some(tails.upper))
    }

    fn region(&self, tails: Tails) -> Region {
        self.lower(tails).union(&self.upper(tails))
    }

    fn fits(&self, tails: Tails) -> Result<bool, Obstacle> {
        let region = self.region(tails);
        let judge = |law| self.operating.judge(law, &region, self.alpha);
        Ok(judge(&self.low)?.is_le() && judge(&self.high)?.is_le())
    }

    /// The lower tail with the largest upper tail that fits.
    fn completed(&self, lower: u64) -> Result<Tails, Obstacle> {
        let from = self.first + lower;
        let start = if self.centre.is_finite() {
            self.centre as u64
        } else {
            from
        };
        let too_large = last_true(start, from, self.beyond, |upper| {
            self.fits(Tails { lower, upper }).map(|fits| !fits)
        })?;
        let upper = too_large.map_or(from, |upper| upper + 1).min(self.beyond);
        Ok(Tails { lower, upper })
    }

    /// The largest lower tail that fits with an upper tail.
    fn longest_lower(&self, upper: u64, longest: u64) -> Result<u64, Obstacle> {
        let most = longest.min(upper - self.first);
        Ok(last_true(most, 0, most, |lower| self.fits(Tails { lower, upper }))?.unwrap_or(0))
    }

    fn difference(&self, tails: Tails) -> f64 {
        let lower = ratio_sum::probability(&self.low, &self.lower(tails)).middle();
        let upper = ratio_sum::probability(&self.high, &self.upper(tails)).middle();
        lower - upper
    }

    fn exact_imbalance(&self, tails: Tails) -> Option<Exact> {
        let difference = &exact_sum::probability(&self.low, &self.lower(tails))?
            - &exact_sum::probability(&self.high, &self.upper(tails))?;
        Some(if difference.is_negative() {
            -&difference
        } else {
            difference
        })
    }

    fn exact_size(&self, tails: Tails) -> Option<Exact> {
        let region = self.region(tails);
        Some(
            exact_sum::probability(&self.low, &region)?
                .max(exact_sum::probability(&self.high, &region)?),
        )
    }

    fn size(&self, tails: Tails) -> f64 {
        let region = self.region(tails);
        let at = |law| ratio_sum::probability(law, &region).middle();
        at(&self.low).max(at(&self.high))
    }

    /// Whether the first is better than the second.
    fn prefers(&self, one: Tails, other: Tails) -> bool {
        let imbalance = order(
            self.difference(one).abs(),
            self.difference(other).abs(),
            || {
                Some(
                    self.exact_imbalance(one)?
                        .cmp(&self.exact_imbalance(other)?),
                )
            },
        );
        let size = || {
            order(self.size(one), self.size(other), || {
                Some(self.exact_size(one)?.cmp(&self.exact_size(other)?))
            })
        };
        imbalance
            .then_with(size)
            .then(other.lower.cmp(&one.lower))
            .is_lt()
    }
}

/// Compares two figures, exactly where doubles are too close to tell.
fn order(a: f64, b: f64, exactly: impl FnOnce() -> Option<Ordering>) -> Ordering {
    if (a - b).abs() > CLOSE * a.max(b) {
        a.total_cmp(&b)
    } else {
        exactly().unwrap_or(Ordering::Equal)
    }
}
