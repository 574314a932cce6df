//! The declared sets against the space and against each other: every contradiction between them, with its place.

use crate::family::Family;
use crate::kernel::exact::Exact;
use crate::language::diagnostic::{Diagnostic, Located};
use crate::language::plan::{Plan, Test};
use crate::language::set::SetExpression;
use crate::space::LineSet;

use super::Requirement;
use super::sets::{self, Vocabulary};

/// The sets of a plan that agree with each other.
pub(super) struct Sets {
    pub space: LineSet,
    pub null: LineSet,
    pub alternative: LineSet,
    pub requirements: Vec<Requirement>,
}

/// Space, null, alternative and requirements of a plan.
pub(super) fn sets_of(
    plan: &Plan,
    family: &dyn Family,
    problems: &mut Vec<Diagnostic>,
) -> Option<Sets> {
    let before = problems.len();
    let test = &plan.test;
    let space = space(test, family, problems);
    let null = solved(&test.null_subset, family, problems);
    let wheres: Vec<Option<LineSet>> = plan
        .requirements
        .iter()
        .map(|requirement| solved(&requirement.where_set, family, problems))
        .collect();
    let (space, null) = (space?, null?);
    let null = part_of_space(&null, &space, &test.null_subset, family, "null", problems)?;
    let alternative = on_lattice(family, &space.without(&null));
    if alternative.is_empty() {
        problems.push(
            Diagnostic::error(
                "empty-alternative",
                test.null_subset.span,
                "the null subset is the whole parameter space: nothing is left to show",
            )
            .with_help("shrink the null subset to what must be ruled out"),
        );
        return None;
    }
    let mut requirements = Vec::new();
    for (declared, set) in plan.requirements.iter().zip(wheres) {
        let Some(set) = set else { continue };
        let located = &declared.where_set;
        let Some(set) = part_of_space(&set, &space, located, family, "where", problems) else {
            continue;
        };
        if let Some(problem) = against_null(&set, &null, declared, &test.alpha.value, family) {
            problems.push(problem);
            continue;
        }
        requirements.push(Requirement {
            set,
            at_least: declared.at_least.value.clone(),
            because: declared.because.clone(),
            span: located.span,
        });
    }
    (problems.len() == before).then_some(Sets {
        space,
        null,
        alternative,
        requirements,
    })
}

fn solved(
    set: &Located<SetExpression>,
    family: &dyn Family,
    problems: &mut Vec<Diagnostic>,
) -> Option<LineSet> {
    let registration = family.registration();
    let vocabulary = Vocabulary {
        name: family.parameter(),
        others: registration.parameters,
        family: registration.name,
    };
    sets::solve(&set.value, &vocabulary)
        .map_err(|found| problems.extend(found))
        .ok()
}

fn on_lattice(family: &dyn Family, set: &LineSet) -> LineSet {
    match family.lattice() {
        Some(lattice) => lattice.meet(set),
        None => set.clone(),
    }
}

fn space(test: &Test, family: &dyn Family, problems: &mut Vec<Diagnostic>) -> Option<LineSet> {
    let declared = solved(&test.parameter_space, family, problems)?;
    let domain = family.domain();
    if sticks_out(&declared, &domain) {
        problems.push(
            Diagnostic::error(
                "space-outside-domain",
                test.parameter_space.span,
                format!(
                    "the parameter space leaves the values that `{}` can take, {}",
                    family.parameter(),
                    domain.in_words(family.parameter())
                ),
            )
            .with_help("cut the parameter space to them"),
        );
        return None;
    }
    let space = on_lattice(family, &declared.intersection(&domain));
    if space.is_empty() {
        problems.push(
            Diagnostic::error(
                "empty-space",
                test.parameter_space.span,
                "the parameter space holds no value at all",
            )
            .with_help("check its bounds, and that parts joined by `and` overlap"),
        );
        return None;
    }
    Some(space)
}

/// Whether a finite end of the set lies beyond the ends of the frame. Ends at infinity only mean "as far as it goes".
fn sticks_out(set: &LineSet, frame: &LineSet) -> bool {
    let (Some(low), Some(high)) = (frame.infimum(), frame.supremum()) else {
        return true;
    };
    set.pieces().iter().any(|piece| {
        [&piece.low().at, &piece.high().at]
            .into_iter()
            .any(|end| end.finite().is_some() && (end < low || end > high))
    })
}

/// The part of a declared set that lies in the space; a diagnostic if it is empty or reaches out.
fn part_of_space(
    set: &LineSet,
    space: &LineSet,
    located: &Located<SetExpression>,
    family: &dyn Family,
    what: &str,
    problems: &mut Vec<Diagnostic>,
) -> Option<LineSet> {
    let part = on_lattice(family, &set.intersection(space));
    let name = family.parameter();
    let (outside, empty, words) = if what == "null" {
        ("null-outside-space", "empty-null", "the null subset")
    } else {
        (
            "where-outside-space",
            "empty-where",
            "this requirement's set",
        )
    };
    // The lattice has moved the ends of the space inwards; the domain is what a declared end may not leave.
    let frame = if family.lattice().is_some() {
        family.domain()
    } else {
        space.clone()
    };
    if sticks_out(set, &frame) {
        problems.push(
            Diagnostic::error(
                outside,
                located.span,
                format!(
                    "{words}, {}, reaches outside the parameter space, {}",
                    set.in_words(name),
                    space.in_words(name)
                ),
            )
            .with_help("cut it to the parameter space, or widen the parameter space"),
        );
        return None;
    }
    if part.is_empty() {
        problems.push(
            Diagnostic::error(
                empty,
                located.span,
                format!(
                    "{words} holds no value of the parameter space, {}",
                    space.in_words(name)
                ),
            )
            .with_help("check the bounds and the direction of the comparison"),
        );
        return None;
    }
    Some(part)
}

/// What is wrong with a requirement that overlaps or touches the null.
fn against_null(
    set: &LineSet,
    null: &LineSet,
    declared: &crate::language::plan::Requirement,
    alpha: &Exact,
    family: &dyn Family,
) -> Option<Diagnostic> {
    let name = family.parameter();
    let shared = on_lattice(family, &set.intersection(null));
    let span = declared.where_set.span;
    if !shared.is_empty() {
        return Some(
            Diagnostic::error(
                "requirement-in-null",
                span,
                format!(
                    "power is required where the null holds: {}",
                    shared.in_words(name)
                ),
            )
            .with_help("require power only where the alternative holds"),
        );
    }
    let touching = set.closure().intersection(&null.closure());
    let touches = family.lattice().is_none() && !touching.is_empty();
    (touches && declared.at_least.value > *alpha).then(|| {
        Diagnostic::error(
            "requirement-touches-null",
            span,
            format!(
                "this set touches the null subset at {}, where the power is at most the size: no sample size can give {}",
                touching.in_words(name),
                declared.at_least.value
            ),
        )
        .with_help("leave a gap between the null subset and where power is required")
    })
}
