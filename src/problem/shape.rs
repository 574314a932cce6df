//! The shape of the null within the parameter space: what decides which region is derived.

use crate::family::Trend;
use crate::space::{LineSet, Value};

/// Where the alternative lies, seen along the statistic.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Shape {
    /// The alternative makes the statistic smaller than every point of the null does.
    Below {
        /// The end of the null that is nearest to the alternative.
        end: Value,
    },
    /// The alternative makes the statistic larger.
    Above {
        /// The end of the null that is nearest to the alternative.
        end: Value,
    },
    /// The null is a point or interval with alternatives on both sides.
    Amid {
        /// The end of the null at which the statistic is smallest.
        low: Value,
        /// The end at which it is largest.
        high: Value,
    },
    /// The null lies on both sides of the alternative: equivalence.
    Around {
        /// The null point nearest to the alternative among those that make the statistic smaller.
        low: Value,
        /// The nearest among those that make it larger.
        high: Value,
    },
    /// Any other finite union.
    General,
}

#[derive(Clone, Copy, PartialEq, Eq)]
enum Label {
    Null,
    Alternative,
}

impl Shape {
    /// The shape of disjoint non-empty sets that make up the parameter space.
    pub fn of(null: &LineSet, alternative: &LineSet, trend: Trend) -> Self {
        let runs = runs(null, alternative);
        let labels: Vec<Label> = runs.iter().map(|run| run.0).collect();
        let end = |index: usize, upper: bool| {
            if upper {
                runs[index].2.clone()
            } else {
                runs[index].1.clone()
            }
        };
        use Label::{Alternative, Null};
        let rising = trend == Trend::Rising;
        match labels.as_slice() {
            [Null, Alternative] if rising => Self::Above { end: end(0, true) },
            [Null, Alternative] => Self::Below { end: end(0, true) },
            [Alternative, Null] if rising => Self::Below { end: end(1, false) },
            [Alternative, Null] => Self::Above { end: end(1, false) },
            [Alternative, Null, Alternative] => {
                let (low, high) = ordered(end(1, false), end(1, true), rising);
                Self::Amid { low, high }
            }
            [Null, Alternative, Null] => {
                let (low, high) = ordered(end(0, true), end(2, false), rising);
                Self::Around { low, high }
            }
            _ => Self::General,
        }
    }

    /// The shape in words.
    pub fn in_words(&self) -> &'static str {
        match self {
            Self::Below { .. } | Self::Above { .. } => "one-sided",
            Self::Amid { low, high } if low == high => "a point between alternatives",
            Self::Amid { .. } => "an interval between alternatives",
            Self::Around { .. } => "outside an interval",
            Self::General => "a union of intervals and points",
        }
    }
}

fn ordered(a: Value, b: Value, rising: bool) -> (Value, Value) {
    if rising { (a, b) } else { (b, a) }
}

/// Runs of null and alternative along the line with their ends; neighbouring pieces of one kind make one run.
fn runs(null: &LineSet, alternative: &LineSet) -> Vec<(Label, Value, Value)> {
    let mut pieces: Vec<_> = null
        .pieces()
        .iter()
        .map(|piece| (piece, Label::Null))
        .chain(
            alternative
                .pieces()
                .iter()
                .map(|piece| (piece, Label::Alternative)),
        )
        .collect();
    pieces.sort_by(|(a, _), (b, _)| {
        (&a.low().at, !a.low().closed).cmp(&(&b.low().at, !b.low().closed))
    });
    let mut runs: Vec<(Label, Value, Value)> = Vec::new();
    for (piece, label) in pieces {
        match runs.last_mut() {
            Some(run) if run.0 == label => run.2 = piece.high().at.clone(),
            _ => runs.push((label, piece.low().at.clone(), piece.high().at.clone())),
        }
    }
    runs
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::kernel::exact::Exact;
    use crate::space::End;

    fn value(text: &str) -> Value {
        Value::Finite(text.parse::<Exact>().unwrap())
    }

    fn shape(null: LineSet, trend: Trend) -> Shape {
        let space = LineSet::between(value("0"), value("1"));
        let alternative = space.without(&null);
        Shape::of(&null, &alternative, trend)
    }

    #[test]
    fn sides_follow_the_trend() {
        let null = LineSet::between(value("0.05"), value("1"));
        let end = value("0.05");
        assert_eq!(
            shape(null.clone(), Trend::Rising),
            Shape::Below { end: end.clone() }
        );
        assert_eq!(shape(null, Trend::Falling), Shape::Above { end });
    }

    #[test]
    fn a_point_at_an_end_of_the_space_is_one_sided() {
        let null = LineSet::point(value("0"));
        assert_eq!(shape(null, Trend::Rising), Shape::Above { end: value("0") });
        let inner = LineSet::point(value("0.3"));
        assert_eq!(
            shape(inner, Trend::Rising),
            Shape::Amid {
                low: value("0.3"),
                high: value("0.3")
            }
        );
    }

    #[test]
    fn equivalence_and_unions() {
        let outside = LineSet::between(value("0"), value("0.2"))
            .union(&LineSet::between(value("0.4"), value("1")));
        assert_eq!(
            shape(outside, Trend::Rising),
            Shape::Around {
                low: value("0.2"),
                high: value("0.4")
            }
        );
        let two = LineSet::point(value("0.2")).union(&LineSet::point(value("0.4")));
        assert_eq!(shape(two, Trend::Rising), Shape::General);
        let gap = LineSet::from_ends(End::open(value("0.2")), End::open(value("0.4")));
        assert_eq!(
            shape(gap, Trend::Falling),
            Shape::Amid {
                low: value("0.4"),
                high: value("0.2")
            }
        );
    }
}
