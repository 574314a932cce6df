//! The supremum or infimum of the rejection probability over a set: by a theorem where one says where it is, else by
//! branch and bound with enclosures.

use crate::kernel::enclosure::Enclosure;
use crate::kernel::region::Region;
use crate::space::{Interval, LineSet, Value};

use super::branch_and_bound::supremum;
use super::judgement::{Level, over_tries};
use super::operating::Operating;
use super::region::{Form, form_of};

/// Supremum or infimum.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Goal {
    /// The largest value.
    Supremum,
    /// The smallest value.
    Infimum,
}

/// A proved extremum.
#[derive(Clone, Debug)]
pub struct Extremum {
    /// Its enclosure, all tries counted.
    pub value: Enclosure,
    /// The observed value where it is attained or approached.
    pub at: Value,
    /// Whether the point was taken as the lower end of a piece of the set: which image of it counts.
    pub at_lower_end: bool,
    /// Why it is there.
    pub how: &'static str,
}

/// The argument for tails.
const BY_MONOTONICITY: &str = "monotone likelihood ratio: the probability of a tail is monotone in the parameter (Lehmann 1955), so the extremum is at an end of the set";
/// The argument for two tails and inner ranges.
const BY_VARIATION: &str = "total positivity: the probability of two tails first falls and then rises along the parameter, that of an inner range first rises and then falls (variation diminishing, Karlin 1968), so the extremum is at an end of the set";
/// The argument where an inner range's probability, or that of its complement, is monotone over a piece of the set.
const BY_PEAK_OUTSIDE: &str = "total positivity: the probability of an inner range first rises and then falls along the parameter, that of two tails first falls and then rises (variation diminishing, Karlin 1968); the turn lies outside the set, as a point beyond its end shows, so the extremum is at that end";
/// The argument for everything else.
const BY_BRANCH_AND_BOUND: &str =
    "branch and bound with enclosures of the probability and of its slope over the whole set";

/// The extremum of the rejection probability of a region over a non-empty set of observed values (its closure).
pub fn extremum(operating: &Operating<'_>, region: &Region, set: &LineSet, goal: Goal) -> Extremum {
    over_pieces(operating, region, set, goal, None)
}

/// The supremum over a set as far as it takes to compare it with a level: once that is settled, its enclosure may be
/// wide.
pub fn supremum_against(
    operating: &Operating<'_>,
    region: &Region,
    set: &LineSet,
    level: &Level,
) -> Extremum {
    // With several tries the level of one try is not the level of all.
    let level = (operating.problem.tries == 1).then_some(level);
    over_pieces(operating, region, set, Goal::Supremum, level)
}

fn over_pieces(
    operating: &Operating<'_>,
    region: &Region,
    set: &LineSet,
    goal: Goal,
    against: Option<&Level>,
) -> Extremum {
    let form = form_of(region, operating.outcomes());
    let mut best: Option<Extremum> = None;
    for piece in set.pieces() {
        let found = over_piece(operating, region, form, piece, (goal, against));
        let better = best.as_ref().is_none_or(|best| match goal {
            Goal::Supremum => found.value.middle() > best.value.middle(),
            Goal::Infimum => found.value.middle() < best.value.middle(),
        });
        best = Some(match best {
            None => found,
            Some(best) => {
                let value = match goal {
                    Goal::Supremum => best.value.max(found.value),
                    Goal::Infimum => best.value.min(found.value),
                };
                let how = if best.how == BY_BRANCH_AND_BOUND {
                    best.how
                } else {
                    found.how
                };
                let place = if better { found } else { best };
                Extremum {
                    value,
                    how,
                    ..place
                }
            }
        });
    }
    let mut best = best.unwrap_or(Extremum {
        value: Enclosure::UNKNOWN,
        at: Value::Infinity,
        at_lower_end: true,
        how: BY_BRANCH_AND_BOUND,
    });
    best.value = over_tries(best.value, operating.problem.tries);
    best
}

fn over_piece(
    operating: &Operating<'_>,
    region: &Region,
    form: Form,
    piece: &Interval,
    (goal, against): (Goal, Option<&Level>),
) -> Extremum {
    let at_end = |lower: bool, how: &'static str| {
        let end = if lower { piece.low() } else { piece.high() };
        Extremum {
            value: operating.single(region, &end.at),
            at: end.at.clone(),
            at_lower_end: lower,
            how,
        }
    };
    let better_end = |how: &'static str| {
        let (low, high) = (at_end(true, how), at_end(false, how));
        let value = match goal {
            Goal::Supremum => low.value.max(high.value),
            Goal::Infimum => low.value.min(high.value),
        };
        let low_wins = match goal {
            Goal::Supremum => low.value.middle() >= high.value.middle(),
            Goal::Infimum => low.value.middle() <= high.value.middle(),
        };
        let place = if low_wins { low } else { high };
        Extremum { value, ..place }
    };
    match (form, goal) {
        (Form::Nothing | Form::Everything, _) => at_end(true, BY_MONOTONICITY),
        (Form::LowerTail, _) => {
            let falls = operating.is_rising();
            at_end(falls == (goal == Goal::Supremum), BY_MONOTONICITY)
        }
        (Form::UpperTail, _) => {
            let rises = operating.is_rising();
            at_end(rises != (goal == Goal::Supremum), BY_MONOTONICITY)
        }
        (Form::TwoTails, Goal::Supremum) | (Form::Inner, Goal::Infimum) => better_end(BY_VARIATION),
        _ if piece.is_point() => at_end(true, BY_VARIATION),
        (Form::Inner, _) | (Form::TwoTails, _) => {
            match end_towards_peak(operating, region, form, piece) {
                Some(lower) => at_end(lower, BY_PEAK_OUTSIDE),
                None => by_branch_and_bound(operating, region, piece, (goal, against)),
            }
        }
        (Form::Scattered, _) => by_branch_and_bound(operating, region, piece, (goal, against)),
    }
}

/// The end of the piece (lower or not) that is nearest to the peak of an inner range's probability, if a point beyond it
/// shows that the peak lies outside: the probability is then monotone on the piece. Two tails are the complement.
fn end_towards_peak(
    operating: &Operating<'_>,
    region: &Region,
    form: Form,
    piece: &Interval,
) -> Option<bool> {
    let (low, high) = operating.outcomes();
    let inner = if form == Form::Inner {
        region.within(low, high)
    } else {
        region.complement().within(low, high)
    };
    let range = inner.ranges().first()?;
    let middle = range.from + (range.to? - range.from) / 2;
    let witness = operating
        .problem
        .family
        .most_likely(middle, &operating.amount);
    let lower = if witness < piece.low().at {
        true
    } else if witness > piece.high().at {
        false
    } else {
        return None;
    };
    let end = if lower { piece.low() } else { piece.high() };
    let there = operating.single(&inner, &witness).lower();
    let here = operating.single(&inner, &end.at).upper();
    (there > here).then_some(lower)
}

/// The infimum of a probability is one less the supremum of the complement's.
fn by_branch_and_bound(
    operating: &Operating<'_>,
    region: &Region,
    piece: &Interval,
    (goal, against): (Goal, Option<&Level>),
) -> Extremum {
    let (value, at, at_lower_end) = match goal {
        Goal::Supremum => supremum(operating, region, piece, against),
        Goal::Infimum => {
            let complement = region.complement();
            let (value, at, at_lower_end) = supremum(operating, &complement, piece, None);
            (value.complement(), at, at_lower_end)
        }
    };
    Extremum {
        value,
        at,
        at_lower_end,
        how: BY_BRANCH_AND_BOUND,
    }
}
