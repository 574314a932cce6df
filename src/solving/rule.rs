//! A rule of either kind: one sample with a region, or stages.

use crate::kernel::enclosure::Enclosure;
use crate::kernel::exact::Exact;
use crate::kernel::region::Region;
use crate::language::plan::AcceptWhen;
use crate::space::{LineSet, Value};

use super::extremum::{Extremum, Goal, extremum};
use super::judgement::Level;
use super::obstacle::Obstacle;
use super::operating::Operating;
use super::region::{Form, form_of};
use super::staged::{BY_COUPLING, StagedRule};

/// A decision rule at one amount of inspection.
#[derive(Clone, Debug)]
pub struct Rule<'a> {
    /// The problem at the largest amount of inspection.
    pub operating: Operating<'a>,
    kind: Kind,
}

#[derive(Clone, Debug)]
enum Kind {
    Single(Region),
    Staged(StagedRule),
}

impl<'a> Rule<'a> {
    /// One sample with a critical region.
    pub fn single(operating: Operating<'a>, region: Region) -> Self {
        Self {
            operating,
            kind: Kind::Single(region),
        }
    }

    /// The stages of the problem.
    pub fn staged(operating: Operating<'a>) -> Result<Self, Obstacle> {
        let rule = StagedRule::of(operating.problem)?;
        Ok(Self {
            operating,
            kind: Kind::Staged(rule),
        })
    }

    /// The stages, where there are any.
    pub fn stages(&self) -> Option<&StagedRule> {
        match &self.kind {
            Kind::Single(_) => None,
            Kind::Staged(rule) => Some(rule),
        }
    }

    /// The critical region, at the last stage where there are several.
    pub fn region(&self) -> Region {
        match &self.kind {
            Kind::Single(region) => region.clone(),
            Kind::Staged(rule) => rule
                .stages()
                .last()
                .map_or_else(Region::empty, |(_, reject, _)| reject.clone()),
        }
    }

    /// The form of the rule within the possible outcomes: of stages, the side on which they reject.
    pub fn form(&self) -> Form {
        match &self.kind {
            Kind::Single(region) => form_of(region, self.operating.outcomes()),
            Kind::Staged(_) => match &self.operating.problem.shape {
                crate::problem::Shape::Below { .. } => Form::LowerTail,
                _ => Form::UpperTail,
            },
        }
    }

    /// Probability of rejection at an observed value, all tries counted.
    pub fn rejection(&self, observed: &Value) -> Enclosure {
        match &self.kind {
            Kind::Single(region) => self.operating.rejection(region, observed),
            Kind::Staged(rule) => rule.rejection(self.operating.problem, observed),
        }
    }

    /// Probability of retention at an observed value.
    pub fn retention(&self, observed: &Value) -> Enclosure {
        match &self.kind {
            Kind::Single(region) => self.operating.retention(region, observed),
            Kind::Staged(rule) => rule.retention(self.operating.problem, observed),
        }
    }

    /// Probability that the lot is released after each amount of inspection, at an observed value.
    pub fn released_after(&self, observed: &Value) -> Vec<(f64, Enclosure)> {
        let problem = self.operating.problem;
        let by_rejection = problem.accept_when == AcceptWhen::NullRejected;
        match &self.kind {
            Kind::Staged(rule) => rule.released_after(problem, observed, by_rejection),
            Kind::Single(_) => {
                let released = if by_rejection {
                    self.rejection(observed)
                } else {
                    self.retention(observed)
                };
                vec![(self.operating.amount.to_f64(), released)]
            }
        }
    }

    /// Expected amount of inspection at an observed value, for stages.
    pub fn expected_amount(&self, observed: &Value) -> Option<Enclosure> {
        self.stages()
            .map(|rule| rule.expected_amount(self.operating.problem, observed))
    }

    /// The extremum of the rejection probability over a set of observed values.
    pub fn extremum(&self, set: &LineSet, goal: Goal) -> Extremum {
        match &self.kind {
            Kind::Single(region) => extremum(&self.operating, region, set, goal),
            Kind::Staged(_) => {
                let falls = (self.form() == Form::LowerTail) == self.operating.is_rising();
                let lower = falls == (goal == Goal::Supremum);
                let end = if lower { set.infimum() } else { set.supremum() };
                let at = end.cloned().unwrap_or(Value::Infinity);
                Extremum {
                    value: self.rejection(&at),
                    at,
                    at_lower_end: lower,
                    how: BY_COUPLING,
                }
            }
        }
    }

    /// The supremum over the null as observed, and whether it is at most the level.
    pub fn size(&self) -> Result<(Extremum, bool), Obstacle> {
        let problem = self.operating.problem;
        let null = problem.observation.image(&problem.null);
        let size = self.extremum(&null, Goal::Supremum);
        let within = self.is_at_most(&size, &self.operating.alpha())?;
        Ok((size, within))
    }

    /// The infimum over a set of true values, and whether it is at least what is required.
    pub fn attains(&self, set: &LineSet, at_least: &Exact) -> Result<(Extremum, bool), Obstacle> {
        let observed = self.operating.problem.observation.image(set);
        let infimum = self.extremum(&observed, Goal::Infimum);
        let level = Level::new(at_least.clone());
        let met = match level.against(infimum.value) {
            Some(order) => order.is_ge(),
            None => match &self.kind {
                Kind::Single(region) => self.operating.is_at_least(region, &infimum.at, &level)?,
                Kind::Staged(_) => return Err(too_close(at_least)),
            },
        };
        Ok((infimum, met))
    }

    fn is_at_most(&self, found: &Extremum, level: &Level) -> Result<bool, Obstacle> {
        match (level.against(found.value), &self.kind) {
            (Some(order), _) => Ok(order.is_le()),
            (None, Kind::Single(region)) => self.operating.is_at_most(region, &found.at, level),
            (None, Kind::Staged(_)) => Err(too_close(level.exact())),
        }
    }

    /// Probability of rejection in one try by the second route, and the route's name.
    pub fn second_rejection(&self, observed: &Value) -> (f64, &'static str) {
        let problem = self.operating.problem;
        match &self.kind {
            Kind::Single(region) => {
                let figure = problem
                    .family
                    .second_route(observed, &self.operating.amount, region);
                (figure.value, figure.route)
            }
            Kind::Staged(rule) => rule.second_rejection(problem, observed),
        }
    }

    /// Probability of retention in one try by the second route.
    pub fn second_retention(&self, observed: &Value) -> (f64, &'static str) {
        let problem = self.operating.problem;
        match &self.kind {
            Kind::Single(region) => {
                let figure = problem.family.second_route(
                    observed,
                    &self.operating.amount,
                    &region.complement(),
                );
                (figure.value, figure.route)
            }
            Kind::Staged(rule) => rule.second_retention(problem, observed),
        }
    }
}

fn too_close(level: &Exact) -> Obstacle {
    Obstacle::NotProved {
        question: format!("on which side of {level} a probability of the staged design lies"),
    }
}
