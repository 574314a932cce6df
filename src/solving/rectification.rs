//! Rectifying inspection: lots that are not released are inspected whole and their nonconforming units replaced.
//!
//! With Paᵢ(p) the probability of release after nᵢ units, the share of the lot that nobody looks at is
//! S(p) = Σ Paᵢ·(N − nᵢ)/N, and AOQ = p·S, ATI = N·(1 − S). For a single sample that is AOQ = p·Pa·(N − n)/N and
//! ATI = n + (1 − Pa)·(N − n) (Dodge and Romig; NIST/SEMATECH e-Handbook 6.2.3.2). The average outgoing quality limit
//! is the supremum of AOQ over the whole parameter space. S falls in p: where the count is coupled to stay below, a lot
//! is released at the same stage or before. So AOQ ≤ b·S(a) on [a, b], and branch and bound closes on it.

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
    /// The share of a lot that is released without being looked at.
    fn unseen(&self, at: &Value) -> Enclosure {
        let released = self.rule.released_after(at);
        released
            .into_iter()
            .map(|(amount, released)| times(released, (self.lot - amount).max(0.0) / self.lot))
            .fold(Enclosure::ZERO, Enclosure::plus)
            .as_probability()
    }

    /// p·S, rounded outwards.
    fn outgoing(&self, at: &Value) -> Enclosure {
        times(self.unseen(at), at.to_f64())
    }

    /// N·(1 − S), rounded outwards.
    fn inspected(&self, at: &Value) -> Enclosure {
        times(self.unseen(at).complement(), self.lot)
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
            let unseen = self.unseen(&Value::Finite(low.clone()));
            let bound = times(unseen, high.to_f64()).upper();
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

/// An enclosure times a number that is itself the nearest double to what is meant.
fn times(enclosure: Enclosure, factor: f64) -> Enclosure {
    let down = (enclosure.lower() * factor.next_down()).next_down();
    let up = (enclosure.upper() * factor.next_up()).next_up();
    Enclosure::new(down.max(0.0), up).unwrap_or(Enclosure::UNKNOWN)
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
