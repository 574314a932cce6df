//! Finite unions of intervals and points, kept normalised: disjoint, ascending, nothing to merge.

use super::interval::{End, Interval};
use super::value::Value;

/// A finite union of intervals and points.
#[derive(Clone, Debug, PartialEq, Eq, Default)]
pub struct LineSet {
    pieces: Vec<Interval>,
}

impl LineSet {
    /// The set without points.
    pub fn empty() -> Self {
        Self::default()
    }

    /// All numbers.
    pub fn line() -> Self {
        Self::from_ends(End::open(Value::MinusInfinity), End::open(Value::Infinity))
    }

    /// The set that holds one value.
    pub fn point(at: Value) -> Self {
        Self::union_of(Interval::point(at))
    }

    /// The interval between two ends, or the empty set.
    pub fn from_ends(low: End, high: End) -> Self {
        Self::union_of(Interval::new(low, high))
    }

    /// The closed interval between two values.
    pub fn between(low: Value, high: Value) -> Self {
        Self::from_ends(End::closed(low), End::closed(high))
    }

    /// The union of intervals in any order.
    pub fn union_of(intervals: impl IntoIterator<Item = Interval>) -> Self {
        let mut sorted: Vec<Interval> = intervals.into_iter().collect();
        sorted.sort_by(|a, b| (&a.low().at, !a.low().closed).cmp(&(&b.low().at, !b.low().closed)));
        let mut pieces: Vec<Interval> = Vec::with_capacity(sorted.len());
        for interval in sorted {
            match pieces.last_mut() {
                Some(last) if last.joins(&interval) => *last = last.joined(&interval),
                _ => pieces.push(interval),
            }
        }
        Self { pieces }
    }

    /// The pieces, ascending, with a gap (perhaps of one point) between neighbours.
    pub fn pieces(&self) -> &[Interval] {
        &self.pieces
    }

    /// Whether it holds nothing.
    pub fn is_empty(&self) -> bool {
        self.pieces.is_empty()
    }

    /// The single value it holds, if it holds just one.
    pub fn as_point(&self) -> Option<&Value> {
        match self.pieces.as_slice() {
            [only] if only.is_point() => Some(&only.low().at),
            _ => None,
        }
    }

    /// Whether it holds the value.
    pub fn contains(&self, value: &Value) -> bool {
        self.pieces.iter().any(|piece| piece.contains(value))
    }

    /// Values in either set.
    pub fn union(&self, other: &Self) -> Self {
        Self::union_of(self.pieces.iter().chain(&other.pieces).cloned())
    }

    /// Values in both sets.
    pub fn intersection(&self, other: &Self) -> Self {
        Self::union_of(
            self.pieces
                .iter()
                .flat_map(|a| other.pieces.iter().filter_map(move |b| a.intersection(b))),
        )
    }

    /// All numbers that are not in it.
    pub fn complement(&self) -> Self {
        let mut gaps = Vec::with_capacity(self.pieces.len() + 1);
        let mut low = End::open(Value::MinusInfinity);
        for piece in &self.pieces {
            let high = End {
                at: piece.low().at.clone(),
                closed: !piece.low().closed,
            };
            gaps.extend(Interval::new(low, high));
            low = End {
                at: piece.high().at.clone(),
                closed: !piece.high().closed,
            };
        }
        gaps.extend(Interval::new(low, End::open(Value::Infinity)));
        Self::union_of(gaps)
    }

    /// Values in this set but not in the other.
    pub fn without(&self, other: &Self) -> Self {
        self.intersection(&other.complement())
    }

    /// Whether every value of it is in the other.
    pub fn is_within(&self, other: &Self) -> bool {
        self.without(other).is_empty()
    }

    /// The set with all its finite ends.
    pub fn closure(&self) -> Self {
        Self::union_of(self.pieces.iter().filter_map(|piece| {
            Interval::new(
                End::closed(piece.low().at.clone()),
                End::closed(piece.high().at.clone()),
            )
        }))
    }

    /// Lowest end.
    pub fn infimum(&self) -> Option<&Value> {
        self.pieces.first().map(|piece| &piece.low().at)
    }

    /// Highest end.
    pub fn supremum(&self) -> Option<&Value> {
        self.pieces.last().map(|piece| &piece.high().at)
    }

    /// The set as an expression of the plan language in the given parameter; `none` for the empty set.
    pub fn in_words(&self, parameter: &str) -> String {
        if self.pieces.is_empty() {
            return "none".to_owned();
        }
        let pieces: Vec<String> = self
            .pieces
            .iter()
            .map(|piece| piece_in_words(piece, parameter))
            .collect();
        pieces.join(" or ")
    }
}

fn piece_in_words(piece: &Interval, parameter: &str) -> String {
    let relation = |end: &End| if end.closed { "<=" } else { "<" };
    let (low, high) = (piece.low(), piece.high());
    match (low.at.finite(), high.at.finite()) {
        (Some(a), Some(b)) if a == b => format!("{parameter} = {a}"),
        (Some(a), Some(b)) => {
            format!("{a} {} {parameter} {} {b}", relation(low), relation(high))
        }
        (Some(a), None) => {
            let relation = if low.closed { ">=" } else { ">" };
            format!("{parameter} {relation} {a}")
        }
        (None, Some(b)) => format!("{parameter} {} {b}", relation(high)),
        (None, None) => format!("-inf < {parameter} < inf"),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::kernel::exact::Exact;
    use proptest::prelude::*;

    fn value(number: i64) -> Value {
        Value::Finite(Exact::whole(number))
    }

    fn interval() -> impl Strategy<Value = LineSet> {
        (0i64..12, 0i64..12, any::<bool>(), any::<bool>()).prop_map(|(a, b, left, right)| {
            LineSet::from_ends(
                End {
                    at: value(a),
                    closed: left,
                },
                End {
                    at: value(b),
                    closed: right,
                },
            )
        })
    }

    fn set() -> impl Strategy<Value = LineSet> {
        proptest::collection::vec(interval(), 0..5).prop_map(|parts| {
            parts
                .iter()
                .fold(LineSet::empty(), |all, part| all.union(part))
        })
    }

    /// Every whole and half number from −1 to 13: enough to tell any two sets of whole ends apart.
    fn probes() -> impl Iterator<Item = Value> {
        (-2..=26).filter_map(|half| Exact::fraction(half, 2).map(Value::Finite))
    }

    proptest! {
        #[test]
        fn operations_agree_with_membership(a in set(), b in set()) {
            for probe in probes() {
                let (in_a, in_b) = (a.contains(&probe), b.contains(&probe));
                prop_assert_eq!(a.union(&b).contains(&probe), in_a || in_b);
                prop_assert_eq!(a.intersection(&b).contains(&probe), in_a && in_b);
                prop_assert_eq!(a.without(&b).contains(&probe), in_a && !in_b);
                prop_assert_eq!(a.complement().contains(&probe), !in_a);
            }
            prop_assert_eq!(a.complement().complement(), a.clone());
            prop_assert!(a.is_within(&a.closure()));
            prop_assert_eq!(a.is_within(&b), probes().all(|p| !a.contains(&p) || b.contains(&p)));
        }
    }

    #[test]
    fn words_are_normal() {
        let set = LineSet::between(value(0), value(1))
            .union(&LineSet::point(value(3)))
            .union(&LineSet::from_ends(
                End::open(value(4)),
                End::open(Value::Infinity),
            ));
        assert_eq!(set.in_words("p"), "0 <= p <= 1 or p = 3 or p > 4");
        assert_eq!(LineSet::empty().in_words("p"), "none");
    }
}
