//! Rectifying inspection: lots that are not released are inspected whole and their nonconforming units replaced.
//!
//! With Pa(p) the probability of release, AOQ = p·Pa·(N − n)/N and ATI = n + (1 − Pa)·(N − n) (Dodge and Romig;
//! NIST/SEMATECH e-Handbook 6.2.3.2). The average outgoing quality limit is the supremum of AOQ over the whole
//! parameter space; Pa falls in p, so AOQ ≤ b·Pa(a)·(N − n)/N on [a, b], and branch and bound closes on it.

use std::collections::BinaryHeap;

use crate::kernel::enclosure::Enclosure;
use crate::kernel::exact::Exact;
use crate::language::plan::AcceptWhen;
use crate::space::Value;

use super::region::Form;
use super::rule::Rule;
use super::solution::PowerPoint;

/// Relative width at which the limit is good enough: it is printed to a few digits.
const PRECISE: f64 = 1e-6;
/// Most stretches looked at.
const MOST_STRETCHES: usize = 100_000;

/// Outgoing quality and inspection of sorted lots.
#[derive(Clone, Debug)]
pub struct Rectified {
    /// Units in the lot.
    pub lot_size: u64,
    /// Supremum of the average outgoing quality.
    pub aoql: Enclosure,
    /// Where it is approached.
    pub aoql_at: Value,
    /// The points of the power table.
    pub rows: Vec<RectifiedPoint>,
}

/// Outgoing quality and inspection at one incoming quality.
#[derive(Clone, Debug)]
pub struct RectifiedPoint {
    /// Incoming quality.
    pub at: Value,
    /// Average outgoing quality.
    pub outgoing: Enclosure,
    /// Average total inspection, units a lot.
    pub inspected: Enclosure,
}

struct Sorting<'a, 'b> {
    rule: &'a Rule<'b>,
    lot: f64,
    sample: f64,
}

/// What sorting of lots of a size does; `None` where release does not fall along the parameter.
pub fn rectified(rule: &Rule<'_>, lot_size: u64, points: &[PowerPoint]) -> Option<Rectified> {
    let problem = rule.operating.problem;
    let released_when_rejected = problem.accept_when == AcceptWhen::NullRejected;
    let falls = match rule.form() {
        Form::LowerTail => released_when_rejected,
        Form::UpperTail => !released_when_rejected,
        _ => false,
    };
    if !falls {
        return None;
    }
    let sorting = Sorting {
        rule,
        lot: lot_size as f64,
        sample: rule.operating.amount.to_f64(),
    };
    let (aoql, aoql_at) = sorting.limit()?;
    Some(Rectified {
        lot_size,
        aoql,
        aoql_at,
        rows: points
            .iter()
            .map(|point| RectifiedPoint {
                at: point.at.clone(),
                outgoing: sorting.outgoing(&point.at),
                inspected: sorting.inspected(&point.at),
            })
            .collect(),
    })
}

impl Sorting<'_, '_> {
    fn released(&self, at: &Value) -> Enclosure {
        if self.rule.operating.problem.accept_when == AcceptWhen::NullRejected {
            self.rule.rejection(at)
        } else {
            self.rule.retention(at)
        }
    }

    /// p·Pa·(N − n)/N, rounded outwards.
    fn outgoing(&self, at: &Value) -> Enclosure {
        self.mixed(at, self.released(at))
    }

    fn mixed(&self, quality: &Value, released: Enclosure) -> Enclosure {
        let left = (self.lot - self.sample) / self.lot;
        let p = quality.to_f64();
        let down = (p.next_down() * released.lower()).next_down() * left.next_down();
        let up = (p.next_up() * released.upper()).next_up() * left.next_up();
        Enclosure::new(down.next_down().max(0.0), up.next_up()).unwrap_or(Enclosure::UNKNOWN)
    }

    /// n + (1 − Pa)·(N − n), rounded outwards.
    fn inspected(&self, at: &Value) -> Enclosure {
        let sorted = self.released(at).complement();
        let rest = self.lot - self.sample;
        Enclosure::new(
            (self.sample + (sorted.lower() * rest).next_down()).next_down(),
            (self.sample + (sorted.upper() * rest).next_up()).next_up(),
        )
        .unwrap_or(Enclosure::UNKNOWN)
    }

    /// The supremum of the average outgoing quality and where it is approached.
    fn limit(&self) -> Option<(Enclosure, Value)> {
        let space = &self.rule.operating.problem.space;
        let (low, high) = (space.infimum()?.finite()?, space.supremum()?.finite()?);
        let mut best = (0.0, low.clone());
        let mut stretches = BinaryHeap::new();
        let push = |low: Exact, high: Exact, best: &mut (f64, Exact)| {
            let at_high = self.outgoing(&Value::Finite(high.clone()));
            if at_high.lower() > best.0 {
                *best = (at_high.lower(), high.clone());
            }
            let released = self.released(&Value::Finite(low.clone()));
            let bound = self.mixed(&Value::Finite(high.clone()), released).upper();
            (bound, low, high)
        };
        let first = push(low.clone(), high.clone(), &mut best);
        stretches.push(Stretch(first));
        for _ in 0..MOST_STRETCHES {
            let Some(Stretch((bound, low, high))) = stretches.pop() else {
                break;
            };
            if bound <= best.0 * (1.0 + PRECISE) {
                stretches.push(Stretch((bound, low, high)));
                break;
            }
            let middle = low.midpoint(&high);
            stretches.push(Stretch(push(low, middle.clone(), &mut best)));
            stretches.push(Stretch(push(middle, high, &mut best)));
        }
        let upper = stretches.peek().map_or(best.0, |Stretch(worst)| worst.0);
        let limit = Enclosure::new(best.0, upper.max(best.0))?;
        Some((limit, Value::Finite(best.1)))
    }
}

/// A stretch of quality with an upper bound on the outgoing quality over it.
struct Stretch((f64, Exact, Exact));

impl PartialEq for Stretch {
    fn eq(&self, other: &Self) -> bool {
        self.cmp(other).is_eq()
    }
}
impl Eq for Stretch {}
impl PartialOrd for Stretch {
    fn partial_cmp(&self, other: &Self) -> Option<std::cmp::Ordering> {
        Some(self.cmp(other))
    }
}
impl Ord for Stretch {
    fn cmp(&self, other: &Self) -> std::cmp::Ordering {
        self.0
            .0
            .total_cmp(&other.0.0)
            .then_with(|| other.0.1.cmp(&self.0.1))
    }
}
