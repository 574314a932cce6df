//! Staged and sequential designs.
//!
//! Given the count after a stage, the counts after earlier stages have a law that does not depend on the parameter
//! (sufficiency). So each stage has weights w(x): the probability that inspection has not ended before it, given the
//! count x there. They are computed once, backwards stage by stage, and then
//! P(reject at stage i) = Σ w(x)·P(X = x) over its rejecting counts, at any parameter value.
//!
//! With rejection on one side and retention on the other at every stage, the rejection probability is monotone in the
//! parameter: paths of two parameter values can be coupled so that one is never below the other, and then it never
//! retains where the other rejects. So size and infima of the power are at ends of sets.

use std::collections::BTreeMap;

use crate::kernel::enclosure::Enclosure;
use crate::kernel::exact::Exact;
use crate::kernel::law::Law;
use crate::kernel::ratio_sum;
use crate::kernel::region::{Range, Region};
use crate::problem::{Problem, Shape, Stage};
use crate::space::Value;

use super::judgement::Level;
use super::obstacle::Obstacle;
use super::operating::{Operating, last_true};

/// Largest count that a staged design follows one by one.
const MOST_COUNTS: u64 = 100_000;

/// Why extrema of staged designs are at ends of sets.
pub const BY_COUPLING: &str = "monotone: paths of two parameter values can be coupled so that one count is never below the other, and limits that turn one way keep the order, so the extremum is at an end of the set";

/// One stage with the weights of its counts.
#[derive(Clone, Debug)]
struct Weighted {
    amount: Exact,
    reject: Region,
    retain: Region,
    /// For each count from zero: the probability that no earlier stage has ended inspection, given that count here.
    open: Vec<Enclosure>,
}

/// A staged rule, ready to be applied at any parameter value.
#[derive(Clone, Debug)]
pub struct StagedRule {
    stages: Vec<Weighted>,
}

impl StagedRule {
    /// The rule of a problem's stages; the last stage's limit is the largest tail that keeps the level where the plan
    /// leaves it out.
    pub fn of(problem: &Problem) -> Result<Self, Obstacle> {
        let operating = |amount: &Exact| Operating::new(problem, amount.clone());
        let (end, rejects_small) = match &problem.shape {
            Shape::Below { end } => (end, true),
            Shape::Above { end } => (end, false),
            _ => {
                return Err(Obstacle::NotProved {
                    question: "the size of a staged design for a null that is not one-sided".into(),
                });
            }
        };
        let tail = |count: Option<u64>| match rejects_small {
            true => Region::at_most(count),
            false => Region::at_least(count),
        };
        let complete = |count: Option<u64>| {
            let stages = problem.stages.iter().map(|stage| match &stage.reject {
                Some(_) => stage.clone(),
                None => Stage {
                    cumulative: stage.cumulative.clone(),
                    retain: tail(count).complement(),
                    reject: Some(tail(count)),
                },
            });
            Self::weighted(problem, stages.collect())
        };
        let open_ended = problem.stages.iter().any(|stage| stage.reject.is_none());
        if !open_ended {
            return complete(None);
        }
        let last = problem
            .stages
            .last()
            .map_or_else(Exact::zero, |stage| stage.cumulative.clone());
        let (low, high) = operating(&last).outcomes();
        let high = high.unwrap_or(MOST_COUNTS);
        let alpha = Level::new(problem.alpha.clone());
        let fits = |count: u64| -> Result<bool, Obstacle> {
            let size = complete(Some(count))?.rejection(problem, end);
            match alpha.against(size) {
                Some(order) => Ok(order.is_le()),
                None => Err(Obstacle::NotProved {
                    question: "whether the size of a staged design equals the level".into(),
                }),
            }
        };
        let start = operating(&last).problem.family.expected_count(end, &last) as u64;
        let count = if rejects_small {
            last_true(start, low, high, fits)?
        } else {
            match last_true(start, low, high, |count| fits(count).map(|fits| !fits))? {
                None => Some(low),
                Some(count) if count == high => None,
                Some(count) => Some(count + 1),
            }
        };
        complete(count)
    }

    fn weighted(problem: &Problem, stages: Vec<Stage>) -> Result<Self, Obstacle> {
        let mut weighted: Vec<Weighted> = Vec::with_capacity(stages.len());
        for stage in stages {
            let most = match Operating::new(problem, stage.cumulative.clone())
                .outcomes()
                .1
            {
                Some(most) => most,
                None => largest_open_count(&stage),
            };
            if most > MOST_COUNTS {
                return Err(Obstacle::NotProved {
                    question: format!("a staged design with counts up to {most}"),
                });
            }
            let reject = stage.reject.unwrap_or_default();
            let open = match weighted.last() {
                None => vec![Enclosure::ONE; most as usize + 1],
                Some(before) => (0..=most)
                    .map(|count| still_open(problem, before, count, &stage.cumulative))
                    .collect(),
            };
            weighted.push(Weighted {
                amount: stage.cumulative,
                reject,
                retain: stage.retain,
                open,
            });
        }
        Ok(Self { stages: weighted })
    }

    /// The stages as cumulative amount, rejecting and retaining counts.
    pub fn stages(&self) -> impl Iterator<Item = (&Exact, &Region, &Region)> {
        self.stages
            .iter()
            .map(|stage| (&stage.amount, &stage.reject, &stage.retain))
    }

    /// Probability of rejection at an observed value.
    pub fn rejection(&self, problem: &Problem, observed: &Value) -> Enclosure {
        self.sum(problem, observed, |stage| &stage.reject)
    }

    /// Probability of retention at an observed value.
    pub fn retention(&self, problem: &Problem, observed: &Value) -> Enclosure {
        self.sum(problem, observed, |stage| &stage.retain)
    }

    fn sum(
        &self,
        problem: &Problem,
        observed: &Value,
        ends: impl Fn(&Weighted) -> &Region,
    ) -> Enclosure {
        (0..self.stages.len())
            .map(|index| self.ended(problem, index, ends(&self.stages[index]), observed))
            .fold(Enclosure::ZERO, Enclosure::plus)
            .as_probability()
    }

    /// Probability that inspection comes to a stage and its count falls into a region there. Where counts have no end,
    /// an endless region is what is left of the chance to come there at all.
    fn ended(
        &self,
        problem: &Problem,
        index: usize,
        region: &Region,
        observed: &Value,
    ) -> Enclosure {
        let stage = &self.stages[index];
        let law = problem.family.law(observed, &stage.amount);
        let last = stage.open.len() as u64 - 1;
        let endless = region.is_unbounded() && law.support().1.is_none_or(|high| high > last);
        match index.checked_sub(1) {
            None if endless => ratio_sum::probability(&law, region),
            Some(before) if endless => {
                let earlier = &self.stages[before];
                let going_on = earlier.reject.union(&earlier.retain).complement();
                let come = self.ended(problem, before, &going_on, observed);
                let elsewhere = expectation(stage, &law, &region.complement());
                Enclosure::new(
                    (come.lower() - elsewhere.upper()).next_down().max(0.0),
                    (come.upper() - elsewhere.lower()).next_up().max(0.0),
                )
                .unwrap_or(Enclosure::UNKNOWN)
            }
            _ => expectation(stage, &law, region),
        }
    }

    /// Probability that the lot is released after each stage, which rejecting or retaining the null does.
    pub fn released_after(
        &self,
        problem: &Problem,
        observed: &Value,
        by_rejection: bool,
    ) -> Vec<(f64, Enclosure)> {
        let released = |index: usize, stage: &Weighted| {
            let region = if by_rejection {
                &stage.reject
            } else {
                &stage.retain
            };
            self.ended(problem, index, region, observed)
        };
        self.stages
            .iter()
            .enumerate()
            .map(|(index, stage)| (stage.amount.to_f64(), released(index, stage)))
            .collect()
    }

    /// Expected amount of inspection at an observed value.
    pub fn expected_amount(&self, problem: &Problem, observed: &Value) -> Enclosure {
        let mut sum = Enclosure::ZERO;
        for (index, stage) in self.stages.iter().enumerate() {
            let ends = stage.reject.union(&stage.retain);
            let ended = self.ended(problem, index, &ends, observed);
            let amount = stage.amount.to_f64();
            let part = Enclosure::new(
                (ended.lower() * amount.next_down()).next_down().max(0.0),
                (ended.upper() * amount.next_up()).next_up(),
            );
            sum = sum.plus(part.unwrap_or(Enclosure::UNKNOWN));
        }
        sum
    }

    /// Probability of rejection by the second route.
    pub fn second_rejection(&self, problem: &Problem, observed: &Value) -> (f64, &'static str) {
        self.forward(problem, observed, |stage| &stage.reject)
    }

    /// Probability of retention by the second route.
    pub fn second_retention(&self, problem: &Problem, observed: &Value) -> (f64, &'static str) {
        self.forward(problem, observed, |stage| &stage.retain)
    }

    /// Forward, stage by stage, from the probabilities of further counts: shares neither the weights nor the sums of the
    /// first route.
    fn forward(
        &self,
        problem: &Problem,
        observed: &Value,
        ends: impl Fn(&Weighted) -> &Region,
    ) -> (f64, &'static str) {
        let mut states = BTreeMap::from([(0u64, 1.0f64)]);
        let mut ended = 0.0;
        let mut before = Exact::zero();
        let mut route = "";
        for stage in &self.stages {
            let further = &stage.amount - &before;
            let mut next = BTreeMap::new();
            for (&count, &probability) in &states {
                let chance = |event: &Region| {
                    let seen = (&before, count);
                    let family = &problem.family;
                    family.second_route_further(observed, seen, &further, event)
                };
                let figure = chance(&shifted(ends(stage), count));
                route = figure.route;
                ended += probability * figure.value;
                let going_on = stage.reject.union(&stage.retain).complement();
                // Counts without end are bounded at every stage that inspection may go on from.
                let most = (stage.open.len() as u64 - 1).saturating_sub(count);
                for range in shifted(&going_on, count).ranges() {
                    for more in range.from..=range.to.unwrap_or(most).min(most) {
                        let value = probability * chance(&Region::between(more, more)).value;
                        if value > 0.0 {
                            *next.entry(count + more).or_insert(0.0) += value;
                        }
                    }
                }
            }
            states = next;
            before = stage.amount.clone();
        }
        (ended, route)
    }
}

/// What must still be found for the total to fall into a region.
fn shifted(region: &Region, found: u64) -> Region {
    Region::union_of(region.ranges().iter().filter_map(|range| {
        Some(Range {
            from: range.from.saturating_sub(found),
            to: match range.to {
                Some(to) => Some(to.checked_sub(found)?),
                None => None,
            },
        })
    }))
}

/// Counts beyond this end inspection at the stage for sure, on an endless support.
fn largest_open_count(stage: &Stage) -> u64 {
    let limits = [stage.reject.as_ref(), Some(&stage.retain)];
    limits
        .into_iter()
        .flatten()
        .flat_map(|region| region.ranges())
        .map(|range| range.to.unwrap_or(range.from).max(range.from))
        .max()
        .unwrap_or(0)
        + 1
}

/// The probability that neither the stage before nor any earlier one has ended inspection, given a later count.
fn still_open(problem: &Problem, before: &Weighted, count: u64, amount: &Exact) -> Enclosure {
    let Some(law) = problem.family.earlier(count, amount, &before.amount) else {
        return Enclosure::UNKNOWN;
    };
    let ended = before.reject.union(&before.retain);
    let mut sum = Enclosure::ZERO;
    for earlier in 0..=count.min(before.open.len() as u64 - 1) {
        if ended.contains(earlier) {
            continue;
        }
        let weight = before.open[earlier as usize];
        if weight.upper() == 0.0 {
            continue;
        }
        let chance = ratio_sum::probability(&law, &Region::between(earlier, earlier));
        sum = sum.plus(product(weight, chance));
    }
    sum.as_probability()
}

/// Σ w(x)·P(X = x) over the counts of a region that have weights.
fn expectation(stage: &Weighted, law: &Law, region: &Region) -> Enclosure {
    let last = stage.open.len() as u64 - 1;
    let mut sum = Enclosure::ZERO;
    for range in region.ranges() {
        let (low, high) = law.support();
        let to = range.to.unwrap_or(last).min(last).min(high.unwrap_or(last));
        for count in range.from.max(low)..=to {
            let weight = stage.open[count as usize];
            if weight.upper() > 0.0 {
                let chance = ratio_sum::probability(law, &Region::between(count, count));
                sum = sum.plus(product(weight, chance));
            }
        }
    }
    sum.as_probability()
}

fn product(a: Enclosure, b: Enclosure) -> Enclosure {
    if a == Enclosure::ONE {
        return b;
    }
    Enclosure::new(
        (a.lower() * b.lower()).next_down().max(0.0),
        (a.upper() * b.upper()).next_up(),
    )
    .unwrap_or(Enclosure::UNKNOWN)
}
