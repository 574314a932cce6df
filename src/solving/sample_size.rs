//! The smallest amount of inspection that meets the level and every requirement, the amount from which on every larger
//! one does too, and why one less fails.

use crate::family::AmountKind;
use crate::kernel::exact::Exact;
use crate::kernel::region::Region;
use crate::problem::{Problem, Shape};
use crate::space::{LineSet, Value};

use super::Progress;
use super::envelope::envelope;
use super::obstacle::Obstacle;
use super::operating::{Operating, last_true};
use super::region::{Form, derive, form_of};
use super::rule::Rule;
use super::threshold::Thresholds;

/// What the search found.
#[derive(Clone, Debug, PartialEq)]
pub struct Search {
    /// The first amount that will do.
    pub smallest: Exact,
    /// From here on every larger amount will do.
    pub every_from: Option<Exact>,
    /// `every_from` was checked up to here only.
    pub proved_to: Option<Exact>,
    /// How `every_from` was shown.
    pub how: &'static str,
    /// Why one less fails.
    pub one_less: String,
}

const BY_CHERNOFF: &str = "every amount up to a bound of Chernoff's was checked; beyond it the bound, computed with libm's logarithm and enlarged by a thousandth, proves it";
const BY_WHOLE_LOT: &str = "every sample size up to the whole lot was checked";
const BY_MONOTONICITY: &str = "the size of the region falls as the amount grows";
const BY_SMALLEST_TAIL: &str =
    "the smallest tail becomes less probable as the amount grows, so a region remains";
const BY_TRIAL: &str = "every amount up to the stated one was checked";

/// Most thresholds judged.
const MOST_SEGMENTS: u32 = 200_000;
/// Most amounts tried one by one.
const MOST_TRIALS: u64 = 100_000;
/// Most amounts tried beyond the first that will do.
const TRIALS_BEYOND: u64 = 2_000;

/// Finds the smallest multiple of the step that meets the level and every requirement.
pub fn smallest(
    problem: &Problem,
    step: &Exact,
    progress: &dyn Progress,
) -> Result<Search, Obstacle> {
    let amounts = Amounts {
        problem,
        step,
        most: problem
            .family
            .most()
            .checked_div(step)
            .and_then(|most| most.floor().to_u64())
            .unwrap_or(1),
        progress,
    };
    let counted = problem.family.registration().amount_kind != AmountKind::Nonconforming;
    match (&problem.given_region, &problem.shape) {
        (Some(region), _) => amounts.for_region(region),
        (None, Shape::Below { end }) if counted => amounts.by_threshold(end, true),
        (None, Shape::Above { end }) if counted => amounts.by_threshold(end, false),
        _ => amounts.by_trial(),
    }
}

/// The multiples of the step.
pub(super) struct Amounts<'a> {
    pub(super) problem: &'a Problem,
    pub(super) step: &'a Exact,
    /// Largest multiple of the step.
    pub(super) most: u64,
    progress: &'a dyn Progress,
}

impl<'a> Amounts<'a> {
    fn amount(&self, index: u64) -> Exact {
        &Exact::from(index) * self.step
    }

    pub(super) fn at(&self, index: u64) -> Operating<'a> {
        Operating::new(self.problem, self.amount(index))
    }

    fn tell(&self, what: &str, done: u64, of: Option<u64>) -> Result<(), Obstacle> {
        if self.progress.step(what, done, of) {
            Ok(())
        } else {
            Err(Obstacle::Stopped)
        }
    }

    /// Why an amount will not do; `None` if it will.
    fn failure(&self, index: u64) -> Result<Option<String>, Obstacle> {
        let operating = self.at(index);
        let amount = self.amount(index);
        let region = match &self.problem.given_region {
            Some(region) => {
                let (size, within) = Rule::single(operating, region.clone()).size()?;
                return Ok((!within).then(|| {
                    format!(
                        "at {amount} the size of the given region is {:.6}, above {}",
                        size.value.lower(),
                        self.problem.alpha
                    )
                }));
            }
            None => derive(&operating)?,
        };
        if region.is_empty() {
            return Ok(Some(format!(
                "at {amount} no region that rejects anything has a size of at most {}",
                self.problem.alpha
            )));
        }
        let rule = Rule::single(operating, region);
        for requirement in &self.problem.requirements {
            let (infimum, met) = rule.attains(&requirement.set, &requirement.at_least)?;
            if !met {
                let family = &self.problem.family;
                return Ok(Some(format!(
                    "at {amount} the region {} has power {:.6} where {}, and {} is required",
                    rule.region()
                        .in_words(family.registration().statistic, rule.operating.outcomes()),
                    infimum.value.lower(),
                    requirement.set.in_words(family.parameter()),
                    requirement.at_least
                )));
            }
        }
        Ok(None)
    }

    fn one_less(&self, smallest: u64) -> Result<String, Obstacle> {
        if smallest <= 1 {
            return Ok("nothing less can be inspected".to_owned());
        }
        Ok(self
            .failure(smallest - 1)?
            .unwrap_or_else(|| "one less would do".to_owned()))
    }

    fn found(
        &self,
        smallest: u64,
        every_from: u64,
        proved_to: Option<u64>,
        how: &'static str,
    ) -> Result<Search, Obstacle> {
        Ok(Search {
            smallest: self.amount(smallest),
            every_from: Some(self.amount(every_from)),
            proved_to: proved_to.map(|index| self.amount(index)),
            how,
            one_less: self.one_less(smallest)?,
        })
    }

    fn exhausted(&self, limit: u64) -> Obstacle {
        Obstacle::SearchExhausted {
            limit: self.amount(limit),
            failing: self
                .failure(limit)
                .ok()
                .flatten()
                .unwrap_or_else(|| "smaller amounts".to_owned()),
        }
    }

    /// The first amount at which a given region's size is at most the level.
    fn for_region(&self, region: &Region) -> Result<Search, Obstacle> {
        let form = form_of(region, (0, None));
        let least = self.least_for(region);
        if form == Form::LowerTail {
            let too_large = last_true(least, least, self.most, |index| {
                let rule = Rule::single(self.at(index), region.clone());
                rule.size().map(|(_, within)| !within)
            })?;
            let first = too_large.map_or(least, |index| index + 1);
            if first > self.most {
                return Err(self.exhausted(self.most));
            }
            return self.found(first, first, None, BY_MONOTONICITY);
        }
        let last = self.most.min(least + MOST_TRIALS);
        for index in least..=last {
            self.tell("sample sizes tried", index, None)?;
            if self.failure(index)?.is_none() {
                return Ok(Search {
                    smallest: self.amount(index),
                    every_from: None,
                    proved_to: None,
                    how: BY_TRIAL,
                    one_less: self.one_less(index)?,
                });
            }
        }
        Err(self.exhausted(last))
    }

    /// The first amount under which the region holds a possible outcome and leaves one out.
    fn least_for(&self, region: &Region) -> u64 {
        let least = region.ranges().first().map_or(1, |range| range.from.max(1));
        match self.problem.family.registration().amount_kind {
            AmountKind::Units => least.min(self.most),
            _ => 1,
        }
    }

    /// One-sided nulls: for a fixed threshold size and power are monotone in the amount, so whole segments of amounts are
    /// judged at once.
    fn by_threshold(&self, end: &Value, lower: bool) -> Result<Search, Obstacle> {
        if self.problem.requirements.is_empty() {
            return self.first_region();
        }
        let thresholds = Thresholds::new(self, end, lower);
        let bound = thresholds.bound(self);
        let limit = bound.map_or(self.most, |bound| bound.min(self.most));
        let mut first = None;
        let mut every_from = 1;
        let mut segment = thresholds.first_segment()?;
        let mut threshold = thresholds.first_threshold();
        let mut judged = 0;
        while segment.from <= limit {
            judged += 1;
            if judged > MOST_SEGMENTS {
                return Err(self.exhausted(segment.from));
            }
            self.tell("sample sizes judged", segment.from, Some(limit))?;
            match segment.will_do {
                Some((from, to)) => {
                    first = first.or(Some(from));
                    if from > segment.from {
                        every_from = from;
                    }
                    if to < segment.to {
                        every_from = segment.to + 1;
                    }
                }
                None if segment.from <= segment.to => every_from = segment.to + 1,
                None => {}
            }
            if segment.to >= self.most {
                break;
            }
            threshold += 1;
            segment = thresholds.next_segment(threshold, &segment)?;
        }
        let first = first.ok_or_else(|| self.exhausted(limit))?;
        // Amounts that were passed over before the first threshold existed will not do.
        let every_from = every_from.max(first);
        if every_from > self.most {
            return Ok(Search {
                every_from: None,
                ..self.found(first, first, None, BY_TRIAL)?
            });
        }
        let how = match bound {
            Some(_) => BY_CHERNOFF,
            None => BY_WHOLE_LOT,
        };
        self.found(first, every_from, None, how)
    }

    /// One-sided nulls without requirements: the smallest tail there is becomes less probable as the amount grows, so the
    /// first amount with a region is found by bisection.
    fn first_region(&self) -> Result<Search, Obstacle> {
        let too_early = last_true(1, 1, self.most, |index| {
            derive(&self.at(index)).map(|region| region.is_empty())
        })?;
        let first = too_early.map_or(1, |index| index + 1);
        if first > self.most {
            return Err(self.exhausted(self.most));
        }
        self.found(first, first, None, BY_SMALLEST_TAIL)
    }

    /// All other nulls: from the first amount at which the envelope leaves hope, one by one.
    fn by_trial(&self) -> Result<Search, Obstacle> {
        let hopeless = last_true(1, 1, self.most, |index| self.is_hopeless(index))?;
        let start = hopeless.map_or(1, |index| index + 1);
        if start > self.most {
            return Err(self.exhausted(self.most));
        }
        let last = self.most.min(start.saturating_add(MOST_TRIALS));
        let mut first = None;
        for index in start..=last {
            self.tell("sample sizes tried", index, None)?;
            if self.failure(index)?.is_none() {
                first = Some(index);
                break;
            }
        }
        let first = first.ok_or_else(|| self.exhausted(last))?;
        let proved_to = self
            .most
            .min(first.saturating_add((first / 2).clamp(50, TRIALS_BEYOND)));
        let mut every_from = first;
        for index in first + 1..=proved_to {
            self.tell("larger sample sizes tried", index, Some(proved_to))?;
            if self.failure(index)?.is_some() {
                every_from = index + 1;
            }
        }
        let mut search = self.found(first, every_from.min(proved_to), Some(proved_to), BY_TRIAL)?;
        if every_from > proved_to {
            search.every_from = None;
        }
        Ok(search)
    }

    /// Whether not even the best randomised test has the required power: true up to some amount and never beyond,
    /// because more observations can always be ignored.
    fn is_hopeless(&self, index: u64) -> Result<bool, Obstacle> {
        let operating = self.at(index);
        for requirement in &self.problem.requirements {
            for end in ends(&requirement.set) {
                if let Some(best) = envelope(&operating, &end)?
                    && best < requirement.at_least.to_f64().next_down()
                {
                    return Ok(true);
                }
            }
        }
        Ok(false)
    }
}

fn ends(set: &LineSet) -> Vec<Value> {
    set.pieces()
        .iter()
        .flat_map(|piece| [piece.low().at.clone(), piece.high().at.clone()])
        .filter(|end| end.finite().is_some())
        .collect()
}
