//! A critical region that the plan gives, as counts.

use crate::family::Registration;
use crate::kernel::exact::Exact;
use crate::kernel::region::{Range, Region};
use crate::language::diagnostic::{Diagnostic, Located};
use crate::language::plan::Test;
use crate::language::set::SetExpression;
use crate::space::LineSet;

use super::sets::{self, Vocabulary};

/// The region that the plan asks to audit, if it gives one.
pub(super) fn given_region(
    test: &Test,
    registration: &Registration,
    problems: &mut Vec<Diagnostic>,
) -> Option<Region> {
    let declared = test.critical_region.as_ref()?;
    let region = counts_of(declared, registration, problems)?;
    if region.is_empty() {
        problems.push(
            Diagnostic::error(
                "empty-critical-region",
                declared.span,
                "this critical region holds no count: the null could never be rejected",
            )
            .with_help(format!(
                "state counts, for example `{} <= 1`",
                registration.statistic
            )),
        );
        return None;
    }
    Some(region)
}

/// The counts that an expression in the statistic holds.
pub(super) fn counts_of(
    declared: &Located<SetExpression>,
    registration: &Registration,
    problems: &mut Vec<Diagnostic>,
) -> Option<Region> {
    let vocabulary = Vocabulary {
        name: registration.statistic,
        others: registration.parameters,
        family: registration.name,
    };
    sets::solve(&declared.value, &vocabulary)
        .map_err(|found| problems.extend(found))
        .ok()
        .map(|set| counts_in(&set))
}

/// The counts in a set of numbers.
fn counts_in(set: &LineSet) -> Region {
    let least = |value: &Exact, closed: bool| {
        let up = value.ceil();
        let skip = u64::from(!closed && up == *value);
        if up.is_negative() {
            Some(0)
        } else {
            up.to_u64().and_then(|count| count.checked_add(skip))
        }
    };
    let most = |value: &Exact, closed: bool| {
        let down = value.floor();
        let skip = u64::from(!closed && down == *value);
        if down.is_negative() {
            None
        } else {
            down.to_u64().unwrap_or(u64::MAX).checked_sub(skip)
        }
    };
    Region::union_of(set.pieces().iter().filter_map(|piece| {
        let from = match piece.low().at.finite() {
            Some(value) => least(value, piece.low().closed)?,
            None => 0,
        };
        let to = match piece.high().at.finite() {
            Some(value) => Some(most(value, piece.high().closed)?),
            None => None,
        };
        Some(Range { from, to })
    }))
}
