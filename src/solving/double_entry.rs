//! Double entry: every printed probability is computed again by an independent route.

use std::collections::BTreeSet;

use crate::kernel::enclosure::Enclosure;
use crate::kernel::second_route::TOLERANCE;
use crate::language::plan::AcceptWhen;
use crate::space::Value;

use super::rule::Rule;
use super::solution::Solution;

/// Probabilities below this are compared by size only: doubles end near it.
const SMALLEST: f64 = 1e-290;

/// What the second computation of every figure gave.
#[derive(Clone, Debug, Default)]
pub struct DoubleEntry {
    /// How many figures were computed twice.
    pub figures: u64,
    /// The largest relative difference between the routes.
    pub largest_difference: f64,
    /// The widest enclosure, relative to its upper end.
    pub widest: f64,
    /// Names of the second routes that were used.
    pub routes: BTreeSet<&'static str>,
    /// The first figure on which the routes disagree beyond the tolerance.
    pub disagreement: Option<String>,
}

impl DoubleEntry {
    /// Computes every figure of a solution again.
    pub fn of(rule: &Rule<'_>, solution: &Solution) -> Self {
        let mut entry = Self::default();
        let retained_matters = rule.operating.problem.accept_when == AcceptWhen::NullRetained;
        // An extremum's enclosure also holds what branch and bound left open: the figure at its place is compared.
        let extrema = std::iter::once(&solution.size).chain(
            solution
                .requirements
                .iter()
                .map(|outcome| &outcome.attained),
        );
        for placed in extrema {
            let there = rule.rejection(&placed.observed);
            entry.rejection(rule, &placed.observed, there);
        }
        for point in &solution.power {
            entry.rejection(rule, &point.observed, point.rejection);
            if retained_matters {
                entry.retention(rule, &point.observed, point.retention);
            }
        }
        entry
    }

    fn rejection(&mut self, rule: &Rule<'_>, observed: &Value, first: Enclosure) {
        let (single, route) = rule.second_rejection(observed);
        self.routes.insert(route);
        let mut rest = 1.0;
        let mut sum = 0.0;
        for _ in 0..rule.operating.problem.tries {
            sum += rest;
            rest *= 1.0 - single;
        }
        self.compare(first, single * sum, observed);
    }

    fn retention(&mut self, rule: &Rule<'_>, observed: &Value, first: Enclosure) {
        let (single, route) = rule.second_retention(observed);
        self.routes.insert(route);
        let tries = rule.operating.problem.tries;
        let second = (1..tries).fold(single, |product, _| product * single);
        self.compare(first, second, observed);
    }

    fn compare(&mut self, first: Enclosure, second: f64, at: &Value) {
        self.figures += 1;
        self.widest = self.widest.max(first.relative_width());
        let scale = first.middle().max(SMALLEST);
        let outside = (first.lower() - second)
            .max(second - first.upper())
            .max(0.0);
        let difference = if second.is_finite() {
            outside.max((second - first.middle()).abs()) / scale
        } else {
            f64::INFINITY
        };
        let difference = if first.upper() < SMALLEST && second < SMALLEST {
            0.0
        } else {
            difference
        };
        self.largest_difference = self.largest_difference.max(difference);
        if difference > TOLERANCE && self.disagreement.is_none() {
            self.disagreement = Some(format!(
                "at {at}: {:e} by the first route, {second:e} by the second",
                first.middle()
            ));
        }
    }
}
