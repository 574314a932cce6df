//! Is a probability at most a level? Decided by doubles, then pairs of doubles, then exact rational numbers.

use std::cmp::Ordering;

use num_traits::One;

use crate::kernel::enclosure::Enclosure;
use crate::kernel::exact::Exact;
use crate::kernel::exact_sum;
use crate::kernel::law::Law;
use crate::kernel::ratio_sum;
use crate::kernel::region::Region;

use super::obstacle::Obstacle;

/// A level as an exact number with the nearest doubles on both sides of it, itself where it is a double.
#[derive(Clone, Debug)]
pub struct Level {
    exact: Exact,
    below: f64,
    above: f64,
}

impl Level {
    /// The level of an exact number.
    pub fn new(exact: Exact) -> Self {
        let nearest = exact.to_f64();
        let side = Exact::from_f64(nearest).map_or(Ordering::Equal, |double| double.cmp(&exact));
        let (below, above) = match side {
            Ordering::Less => (nearest, nearest.next_up()),
            Ordering::Equal => (nearest, nearest),
            Ordering::Greater => (nearest.next_down(), nearest),
        };
        Self {
            exact,
            below,
            above,
        }
    }

    /// The exact number.
    pub fn exact(&self) -> &Exact {
        &self.exact
    }

    /// The smallest double that is not below it.
    pub fn above(&self) -> f64 {
        self.above
    }

    /// How an enclosed value compares with it, where the enclosure tells.
    pub fn against(&self, value: Enclosure) -> Option<Ordering> {
        let is_double = self.below == self.above;
        let less = value.upper() < self.below || (!is_double && value.upper() <= self.below);
        let greater = value.lower() > self.above || (!is_double && value.lower() >= self.above);
        match (less, greater) {
            (true, _) => Some(Ordering::Less),
            (_, true) => Some(Ordering::Greater),
            _ if is_double && value.lower() == value.upper() => {
                value.lower().partial_cmp(&self.below)
            }
            _ => None,
        }
    }
}

/// 1 − (1−γ)^tries as γ·Σ(1−γ)^j: all terms positive, so nothing cancels.
pub fn over_tries(single: Enclosure, tries: u32) -> Enclosure {
    if tries == 1 {
        return single;
    }
    let end = |gamma: f64, rest: f64, outwards: fn(f64) -> f64| {
        let mut power = 1.0;
        let mut sum = 0.0;
        for _ in 0..tries {
            sum = outwards(sum + power);
            power = outwards(power * rest);
        }
        outwards(gamma * sum)
    };
    // Σ(1−γ)^j falls in γ while the whole rises: the factor is taken at the same γ, rounded outwards.
    let lower = end(
        single.lower(),
        (1.0 - single.lower()).next_down().max(0.0),
        f64::next_down,
    );
    let upper = end(
        single.upper(),
        (1.0 - single.upper()).next_up().max(0.0),
        f64::next_up,
    );
    Enclosure::new(lower.max(0.0), upper.min(1.0)).unwrap_or(Enclosure::UNKNOWN)
}

/// Compares the probability that one of the tries falls into the event with a level.
pub fn compare(law: &Law, event: &Region, tries: u32, level: &Level) -> Result<Ordering, Obstacle> {
    let quick = over_tries(ratio_sum::probability(law, event), tries);
    if let Some(order) = level.against(quick) {
        return Ok(order);
    }
    let fine = over_tries(ratio_sum::probability_in_double_doubles(law, event), tries);
    if let Some(order) = level.against(fine) {
        return Ok(order);
    }
    let exact = exact_sum::probability(law, event).ok_or_else(|| Obstacle::NotProved {
        question: format!(
            "whether a probability within {:e} of {} is above or below it",
            fine.upper() - fine.lower(),
            level.exact
        ),
    })?;
    let rest = num_rational::BigRational::one() - exact.as_rational();
    let retained = num_traits::pow(rest, tries as usize);
    let overall = num_rational::BigRational::one() - retained;
    Ok(overall.cmp(level.exact.as_rational()))
}
