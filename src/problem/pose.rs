//! From plan to problem: every contradiction that can be seen before solving is found here, with its place.

use crate::family::{
    AmountKind, FAMILIES, Family, MOST_UNITS, Registration, Settings, registration,
};
use crate::kernel::exact::Exact;
use crate::kernel::region::{Range, Region};
use crate::language::diagnostic::{Diagnostic, Located, Span};
use crate::language::plan::{Plan, SampleSize, Tails, Test};
use crate::language::set::{SetExpression, Side};
use crate::space::{LineSet, Value};

use super::sets::{self, Vocabulary};
use super::{AmountRequest, Observation, Problem, Requirement, Shape};

/// Smallest amount of opportunity, and finest step, that makes sense: keeps every search finite.
const FINEST: (i64, i64) = (1, 1_000_000);

/// Poses the problem of a plan, or says everything that is wrong with it.
pub fn pose(plan: &Plan) -> Result<Problem, Vec<Diagnostic>> {
    let mut problems = Vec::new();
    let test = &plan.test;
    let Some(registration) = registration(&test.family.value) else {
        return Err(vec![unknown_family(&test.family)]);
    };
    let Some(family) = family(test, registration, &mut problems) else {
        return Err(problems);
    };
    let amount = amount(test, family.as_ref(), &mut problems);
    let sets = sets_of(plan, family.as_ref(), &mut problems);
    let observation = observation(test, family.as_ref(), &mut problems);
    let region = given_region(test, registration, &mut problems);
    not_yet(test, &mut problems);
    let tries = tries(test, &mut problems);
    tails(test, &mut problems);
    let (Some((amount, amount_span)), Some(sets), true) = (amount, sets, problems.is_empty())
    else {
        return Err(problems);
    };
    let shape = Shape::of(&sets.null, &sets.alternative, family.trend());
    Ok(Problem {
        shape: observed(&shape, &observation, family.as_ref()),
        tails: test
            .tails
            .as_ref()
            .map_or_else(|| default_tails(&shape), |tails| tails.value),
        space: sets.space,
        null: sets.null,
        alternative: sets.alternative,
        requirements: sets.requirements,
        observation,
        alpha: test.alpha.value.clone(),
        amount,
        region_span: test
            .critical_region
            .as_ref()
            .map_or(test.null_subset.span, |region| region.span),
        given_region: region,
        tries,
        points: plan.power_at.clone(),
        accept_when: plan.decision.accept_when.value,
        rectified_lot: test
            .rectification_lot_size
            .as_ref()
            .and_then(|size| size.value.to_u64()),
        amount_span,
        family: family.into(),
    })
}

fn unknown_family(name: &Located<String>) -> Diagnostic {
    let known: Vec<&str> = FAMILIES.iter().map(|family| family.name).collect();
    Diagnostic::error(
        "unknown-family",
        name.span,
        format!("`{}` is not a family that can be solved", name.value),
    )
    .with_help(format!("families: {}", known.join(", ")))
}

/// Builds the family, with the parameter name that the plan's sets use.
fn family(
    test: &Test,
    registration: &'static Registration,
    problems: &mut Vec<Diagnostic>,
) -> Option<Box<dyn Family>> {
    let parameter = registration
        .parameters
        .iter()
        .find(|name| mentions(&test.parameter_space.value, name))
        .or_else(|| {
            registration
                .parameters
                .iter()
                .find(|name| mentions(&test.null_subset.value, name))
        })
        .or(registration.parameters.first())?;
    let lot_size = match (&test.lot_size, registration.finite_lot) {
        (Some(size), true) => whole(size, "lot_size", problems)?,
        (None, true) => {
            problems.push(
                Diagnostic::error(
                    "missing-lot-size",
                    test.family.span,
                    format!("a `{}` plan needs the size of the lot", registration.name),
                )
                .with_help("add `lot_size:` with the number of units in the lot"),
            );
            return None;
        }
        (Some(size), false) => {
            problems.push(
                Diagnostic::error(
                    "key-not-for-family",
                    size.span,
                    format!("`lot_size` does not belong to a `{}` plan", registration.name),
                )
                .with_help("leave it out, or use `family: hypergeometric` for a sample from one finite lot"),
            );
            return None;
        }
        (None, false) => 0,
    };
    Some((registration.build)(&Settings {
        parameter,
        lot_size,
    }))
}

/// Whether a set expression speaks of a name.
fn mentions(expression: &SetExpression, name: &str) -> bool {
    let in_side = |side: &Side| matches!(side, Side::Linear { terms, .. } if terms.iter().any(|term| term.1 == name));
    match expression {
        SetExpression::And(parts) | SetExpression::Or(parts) => {
            parts.iter().any(|part| mentions(part, name))
        }
        SetExpression::Chain { first, rest } => {
            in_side(&first.value) || rest.iter().any(|(_, side)| in_side(&side.value))
        }
    }
}

fn whole(number: &Located<Exact>, key: &str, problems: &mut Vec<Diagnostic>) -> Option<u64> {
    let value = number
        .value
        .to_u64()
        .filter(|&value| (1..=MOST_UNITS).contains(&value));
    if value.is_none() {
        problems.push(
            Diagnostic::error(
                "not-a-count",
                number.span,
                format!(
                    "`{key}` is {}, which is not a count that can be inspected",
                    number.value
                ),
            )
            .with_help(format!("give a whole number from 1 to {MOST_UNITS}")),
        );
    }
    value
}

fn amount(
    test: &Test,
    family: &dyn Family,
    problems: &mut Vec<Diagnostic>,
) -> Option<(AmountRequest, Span)> {
    let registration = family.registration();
    let kind = registration.amount_kind;
    let (wanted, key, unwanted, other) = match kind {
        AmountKind::Nonconforming => (
            &test.stop_at_nonconforming,
            "stop_at: {nonconforming: …}",
            &test.sample_size,
            "sample_size",
        ),
        _ => (
            &test.sample_size,
            "sample_size",
            &test.stop_at_nonconforming,
            "stop_at",
        ),
    };
    if let Some(unwanted) = unwanted {
        problems.push(
            Diagnostic::error(
                "key-not-for-family",
                unwanted.span,
                format!(
                    "`{other}` does not belong to a `{}` plan",
                    registration.name
                ),
            )
            .with_help(format!("use `{key}` instead")),
        );
    }
    let Some(size) = wanted else {
        // A staged plan states the size of each stage instead.
        if test.stages.is_empty() {
            problems.push(
                Diagnostic::error(
                    "missing-sample-size",
                    test.span,
                    format!("`{key}` is missing"),
                )
                .with_help("give a number, or `smallest` to have the first one that will do found"),
            );
        }
        return None;
    };
    let request = match &size.value {
        SampleSize::Given(value) => given_amount(value, size.span, family, problems)?,
        SampleSize::Smallest => AmountRequest::Smallest {
            step: step(test, kind, problems)?,
        },
    };
    Some((request, size.span))
}

fn given_amount(
    value: &Exact,
    span: Span,
    family: &dyn Family,
    problems: &mut Vec<Diagnostic>,
) -> Option<AmountRequest> {
    let most = family.most();
    if family.registration().amount_kind == AmountKind::Opportunity {
        let least = Exact::fraction(FINEST.0, FINEST.1)?;
        if *value < least || *value > most {
            problems.push(Diagnostic::error(
                "not-an-amount",
                span,
                format!("{value} is not an amount that can be inspected: it must lie from {least} to {most}"),
            ));
            return None;
        }
        return Some(AmountRequest::Given(value.clone()));
    }
    let located = Located::new(value.clone(), span);
    whole(&located, "sample_size", problems)?;
    if *value > most {
        problems.push(
            Diagnostic::error(
                "sample-larger-than-lot",
                span,
                format!("a sample of {value} cannot be drawn from a lot of {most}"),
            )
            .with_help(format!("use at most {most} units")),
        );
        return None;
    }
    Some(AmountRequest::Given(value.clone()))
}

fn step(test: &Test, kind: AmountKind, problems: &mut Vec<Diagnostic>) -> Option<Exact> {
    let Some(step) = &test.step else {
        return Some(Exact::one());
    };
    if kind != AmountKind::Opportunity {
        problems.push(
            Diagnostic::error(
                "key-not-for-family",
                step.span,
                format!("`step` does not belong to a `{}` plan", test.family.value),
            )
            .with_help("leave it out: units are counted one by one"),
        );
        return None;
    }
    let finest = Exact::fraction(FINEST.0, FINEST.1)?;
    if step.value < finest || step.value > Exact::from(MOST_UNITS) {
        problems.push(Diagnostic::error(
            "not-an-amount",
            step.span,
            format!(
                "a step of {} is not an amount that can be inspected",
                step.value
            ),
        ));
        return None;
    }
    Some(step.value.clone())
}

struct Sets {
    space: LineSet,
    null: LineSet,
    alternative: LineSet,
    requirements: Vec<Requirement>,
}

fn sets_of(plan: &Plan, family: &dyn Family, problems: &mut Vec<Diagnostic>) -> Option<Sets> {
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
        problems.push(Diagnostic::error(
            "empty-space",
            test.parameter_space.span,
            "the parameter space holds no value at all",
        ));
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

fn observation(test: &Test, family: &dyn Family, problems: &mut Vec<Diagnostic>) -> Observation {
    let Some(inspection) = &test.inspection else {
        return Observation::Perfect;
    };
    let rates = &inspection.value;
    let worst = &rates.misses.1 + &rates.false_alarms.1;
    if worst >= Exact::one() {
        problems.push(
            Diagnostic::error(
                "inspection-tells-nothing",
                inspection.span,
                "misses and false alarms together reach 100 %: such an inspection tells nothing about a unit",
            )
            .with_help("error rates must add up to less than 100 %"),
        );
    }
    match (family.registration().amount_kind, family.lattice()) {
        (_, Some(_)) => {
            problems.push(
                Diagnostic::error(
                    "not-yet-derived",
                    inspection.span,
                    "imperfect inspection of a sample from a finite lot is not derived yet",
                )
                .with_help("the nearest plan that works is `family: binomial` with the same inspection errors"),
            );
            Observation::Perfect
        }
        (AmountKind::Opportunity, None) => {
            if !rates.false_alarms.1.is_zero() {
                problems.push(
                    Diagnostic::error(
                        "not-yet-derived",
                        inspection.span,
                        "false alarms have no rate per unit of opportunity here",
                    )
                    .with_help(
                        "state `misses` alone, or judge whole units with `family: binomial`",
                    ),
                );
            }
            Observation::OfNonconformities {
                misses: rates.misses.clone(),
            }
        }
        (_, None) => Observation::OfUnits {
            misses: rates.misses.clone(),
            false_alarms: rates.false_alarms.clone(),
        },
    }
}

/// The shape with its ends as inspection sees them: of each end the image nearest to the alternative.
fn observed(shape: &Shape, observation: &Observation, family: &dyn Family) -> Shape {
    let rising = family.trend() == crate::family::Trend::Rising;
    let least = |value: &Value| observation.images(value).0;
    let most = |value: &Value| observation.images(value).1;
    // "Low" and "high" run along the statistic; the observed parameter runs with or against it.
    let low_statistic = |value: &Value| if rising { least(value) } else { most(value) };
    let high_statistic = |value: &Value| if rising { most(value) } else { least(value) };
    match shape {
        Shape::Below { end } => Shape::Below {
            end: low_statistic(end),
        },
        Shape::Above { end } => Shape::Above {
            end: high_statistic(end),
        },
        Shape::Amid { low, high } => Shape::Amid {
            low: low_statistic(low),
            high: high_statistic(high),
        },
        Shape::Around { low, high } => Shape::Around {
            low: high_statistic(low),
            high: low_statistic(high),
        },
        Shape::General => Shape::General,
    }
}

fn default_tails(shape: &Shape) -> Tails {
    match shape {
        Shape::Amid { low, high } if low != high => Tails::Joint,
        _ => Tails::Equal,
    }
}

fn given_region(
    test: &Test,
    registration: &Registration,
    problems: &mut Vec<Diagnostic>,
) -> Option<Region> {
    let declared = test.critical_region.as_ref()?;
    let vocabulary = Vocabulary {
        name: registration.statistic,
        others: registration.parameters,
        family: registration.name,
    };
    let set = sets::solve(&declared.value, &vocabulary)
        .map_err(|found| problems.extend(found))
        .ok()?;
    let region = counts_in(&set);
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

/// What the language can say and the solver cannot derive yet.
fn not_yet(test: &Test, problems: &mut Vec<Diagnostic>) {
    let staged = test.stages.first().map(|stage| stage.size.span);
    let sequential = test.sequential.as_ref().map(|sequential| sequential.span);
    for (span, what) in [(staged, "`stages`"), (sequential, "`sequential`")] {
        if let Some(span) = span {
            problems.push(
                Diagnostic::error(
                    "not-yet-derived",
                    span,
                    format!("{what} can be written but is not derived yet"),
                )
                .with_help("the nearest plan that works has one `sample_size` and no stages"),
            );
        }
    }
}

fn tries(test: &Test, problems: &mut Vec<Diagnostic>) -> u32 {
    const MOST_RETESTS: u64 = 100;
    let Some(times) = &test.retest_times else {
        return 1;
    };
    match times.value.to_u64() {
        Some(count) if count <= MOST_RETESTS => count as u32 + 1,
        _ => {
            problems.push(
                Diagnostic::error(
                    "not-a-count",
                    times.span,
                    format!("a null cannot be tried again {} times", times.value),
                )
                .with_help(format!("give a whole number from 0 to {MOST_RETESTS}")),
            );
            1
        }
    }
}

fn tails(test: &Test, problems: &mut Vec<Diagnostic>) {
    if let Some(tails) = &test.tails
        && tails.value == Tails::Unbiased
    {
        problems.push(
            Diagnostic::error(
                "tails-need-a-continuous-family",
                tails.span,
                "an unbiased two-tailed region needs a continuous statistic or randomisation; counts have neither",
            )
            .with_help("use `tails: equal` or `tails: joint`"),
        );
    }
}
