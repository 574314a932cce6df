//! The best critical region for the shape of the null.

use crate::kernel::region::Region;
use crate::language::plan::Tails;
use crate::problem::Shape;

use super::general;
use super::inner_range::inner_region;
use super::joint_tails::joint_tails;
use super::judgement::Level;
use super::obstacle::Obstacle;
use super::operating::Operating;

/// The form of a region within the possible outcomes.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Form {
    /// Holds no outcome.
    Nothing,
    /// Holds every outcome.
    Everything,
    /// All outcomes up to some count.
    LowerTail,
    /// All outcomes from some count on.
    UpperTail,
    /// A lower and an upper tail.
    TwoTails,
    /// One range without either end.
    Inner,
    /// Anything else.
    Scattered,
}

/// The form of a region.
pub fn form_of(region: &Region, (low, high): (u64, Option<u64>)) -> Form {
    let cut = region.within(low, high);
    match cut.ranges() {
        [] => Form::Nothing,
        [only] => match (only.from == low, only.to == high) {
            (true, true) => Form::Everything,
            (true, false) => Form::LowerTail,
            (false, true) => Form::UpperTail,
            (false, false) => Form::Inner,
        },
        [first, second] if first.from == low && second.to == high => Form::TwoTails,
        _ => Form::Scattered,
    }
}

/// The critical region of the problem at an amount; empty where no non-empty region has a size of at most the level.
pub fn derive(operating: &Operating<'_>) -> Result<Region, Obstacle> {
    let alpha = operating.alpha();
    let region = match &operating.problem.shape {
        // Karlin–Rubin 1956: with monotone likelihood ratio the largest tail towards the alternative.
        Shape::Below { end } => Region::at_most(operating.largest_lower_tail(end, &alpha)?),
        Shape::Above { end } => Region::at_least(operating.smallest_upper_tail(end, &alpha)?),
        Shape::Amid { low, high } if operating.problem.tails == Tails::Joint => {
            joint_tails(operating, low, high, &alpha)?
        }
        Shape::Amid { low, high } => equal_tails(operating, low, high)?,
        Shape::Around { low, high } => inner_region(operating, low, high, &alpha)?,
        Shape::General => general::region(operating, &alpha)?,
    };
    let (low, high) = operating.outcomes();
    Ok(region.within(low, high))
}

/// The largest lower and the largest upper tail, each of size at most α/2 at its own end of the null.
fn equal_tails(
    operating: &Operating<'_>,
    low: &crate::space::Value,
    high: &crate::space::Value,
) -> Result<Region, Obstacle> {
    let half = Level::new(
        operating
            .problem
            .alpha
            .midpoint(&crate::kernel::exact::Exact::zero()),
    );
    let lower = Region::at_most(operating.largest_lower_tail(low, &half)?);
    let upper = Region::at_least(operating.smallest_upper_tail(high, &half)?);
    Ok(lower.union(&upper))
}
