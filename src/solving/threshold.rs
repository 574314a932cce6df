//! One-sided problems seen by the threshold of their tail.
//!
//! For a fixed threshold size and power are monotone in the amount of inspection, because the statistic grows with it. So
//! the amounts that share a threshold make a segment, of which a head or a tail will do, and a search over all amounts
//! becomes a search over thresholds.

use crate::family::AmountKind;
use crate::kernel::region::Region;
use crate::space::Value;

use super::judgement::Level;
use super::obstacle::Obstacle;
use super::operating::last_true;
use super::sample_size::Amounts;
use super::tail_bound::surely_enough;

/// The multiples of the step that share a threshold of the derived tail, and those of them that will do.
pub(super) struct Segment {
    pub(super) from: u64,
    pub(super) to: u64,
    pub(super) will_do: Option<(u64, u64)>,
}

/// A one-sided problem seen by the threshold of its tail.
pub(super) struct Thresholds<'a, 'b> {
    amounts: &'a Amounts<'b>,
    end: Value,
    lower: bool,
    alpha: Level,
    /// Where each requirement's infimum is, as observed, and what is required there.
    wanted: Vec<(Value, Level)>,
}

impl<'a, 'b> Thresholds<'a, 'b> {
    pub(super) fn new(amounts: &'a Amounts<'b>, end: &Value, lower: bool) -> Self {
        let problem = amounts.problem;
        let rising = amounts.at(1).is_rising();
        let wanted = problem
            .requirements
            .iter()
            .filter_map(|requirement| {
                let observed = problem.observation.image(&requirement.set);
                // The power of a tail is smallest at the end of the set that is nearest to the null.
                let nearest = if rising == lower {
                    observed.supremum()
                } else {
                    observed.infimum()
                };
                Some((nearest?.clone(), Level::new(requirement.at_least.clone())))
            })
            .collect();
        Self {
            amounts,
            end: end.clone(),
            lower,
            alpha: Level::new(problem.alpha.clone()),
            wanted,
        }
    }

    /// An index from which on everything will do, by the tail bound.
    pub(super) fn bound(&self, amounts: &Amounts<'_>) -> Option<u64> {
        let mut farthest = 1.0f64;
        for (point, at_least) in &self.wanted {
            let amount =
                surely_enough(amounts.problem, &self.end, point, at_least.exact().to_f64())?;
            farthest = farthest.max(amount / amounts.step.to_f64());
        }
        if self.wanted.is_empty() {
            return None;
        }
        (farthest < 1e15).then_some(farthest as u64 + 1)
    }

    fn region(&self, threshold: u64) -> Region {
        if self.lower {
            Region::at_most(Some(threshold))
        } else {
            Region::at_least(Some(threshold))
        }
    }

    fn fits(&self, threshold: u64, index: u64) -> Result<bool, Obstacle> {
        self.amounts
            .at(index)
            .is_at_most(&self.region(threshold), &self.end, &self.alpha)
    }

    fn has_power(&self, threshold: u64, index: u64) -> Result<bool, Obstacle> {
        let operating = self.amounts.at(index);
        for (point, at_least) in &self.wanted {
            if !operating.is_at_least(&self.region(threshold), point, at_least)? {
                return Ok(false);
            }
        }
        Ok(true)
    }

    pub(super) fn first_threshold(&self) -> u64 {
        u64::from(!self.lower)
    }

    pub(super) fn first_segment(&self) -> Result<Segment, Obstacle> {
        let threshold = self.first_threshold();
        let from = if self.lower {
            self.first_fitting(threshold, 1)?
        } else {
            1
        };
        self.segment(threshold, from)
    }

    pub(super) fn next_segment(
        &self,
        threshold: u64,
        previous: &Segment,
    ) -> Result<Segment, Obstacle> {
        self.segment(threshold, previous.to + 1)
    }

    /// Lower tails: the first index at which the threshold fits. One beyond the last index if none does.
    fn first_fitting(&self, threshold: u64, start: u64) -> Result<u64, Obstacle> {
        let most = self.amounts.most;
        let too_early = last_true(start, 1, most, |index| {
            self.fits(threshold, index).map(|fits| !fits)
        })?;
        Ok(too_early.map_or(1, |index| index + 1))
    }

    /// The segment of a threshold that begins at an index.
    fn segment(&self, threshold: u64, from: u64) -> Result<Segment, Obstacle> {
        let most = self.amounts.most;
        if from > most {
            return Ok(Segment {
                from,
                to: most,
                will_do: None,
            });
        }
        if self.lower {
            let to = self.first_fitting(threshold + 1, from)? - 1;
            if to < from {
                return Ok(Segment {
                    from,
                    to: from - 1,
                    will_do: None,
                });
            }
            // Power falls as the amount grows: a head of the segment will do.
            let last = last_true(from, from, to, |index| self.has_power(threshold, index))?;
            return Ok(Segment {
                from,
                to,
                will_do: last.map(|last| (from, last)),
            });
        }
        let last = last_true(from, from, most, |index| self.fits(threshold, index))?;
        let Some(to) = last else {
            return Ok(Segment {
                from,
                to: from - 1,
                will_do: None,
            });
        };
        // A threshold beyond every outcome rejects nothing.
        let possible = match self.amounts.problem.family.registration().amount_kind {
            AmountKind::Units => from.max(threshold),
            _ => from,
        };
        if possible > to {
            return Ok(Segment {
                from,
                to,
                will_do: None,
            });
        }
        // Power grows with the amount: a tail of the segment will do.
        let weak = last_true(possible, possible, to, |index| {
            self.has_power(threshold, index).map(|enough| !enough)
        })?;
        let first = weak.map_or(possible, |index| index + 1);
        Ok(Segment {
            from,
            to,
            will_do: (first <= to).then_some((first, to)),
        })
    }
}
