//! From plan to problem: every contradiction that can be seen before solving is found here, with its place.

use crate::family::{AmountKind, FAMILIES, Family, Registration, Settings, Trend, registration};
use crate::kernel::exact::Exact;
use crate::language::diagnostic::{Diagnostic, Located, Span};
use crate::language::plan::{Plan, SampleSize, Tails, Test};
use crate::language::set::{SetExpression, Side};
use crate::space::Value;

use super::critical_region::given_region;
use super::declared::sets_of;
use super::stages::stages;
use super::{AmountRequest, Observation, Problem, Shape};

/// Poses the problem of a plan, or says everything that is wrong with it.
pub fn pose(plan: &Plan) -> Result<Problem, Vec<Diagnostic>> {
    let mut problems = Vec::new();
    let test = &plan.test;
    let Some(registration) = registration(&test.family.value) else {
        return Err(vec![unknown_family(&test.family)]);
    };
    let Some(family) = family(test, registration) else {
        return Err(vec![unknown_family(&test.family)]);
    };
    let amount = amount(test, family.as_ref(), &mut problems);
    let sets = sets_of(plan, family.as_ref(), &mut problems);
    let observation = observation(test, family.as_ref(), &mut problems);
    let region = given_region(test, registration, &mut problems);
    tails(test, &mut problems);
    rectification(test, family.as_ref(), &observation, &mut problems);
    let Some(sets) = sets else {
        return Err(problems);
    };
    let shape = Shape::of(&sets.null, &sets.alternative, family.trend());
    let seen = observed(&shape, &observation, family.as_ref());
    let stages = stages(test, &seen, &observation, family.as_ref(), &mut problems);
    let amount = match stages.last() {
        Some(last) => Some((
            AmountRequest::Given(last.cumulative.clone()),
            last_stage_span(test),
        )),
        None => amount,
    };
    let (Some((amount, amount_span)), true) = (amount, problems.is_empty()) else {
        return Err(problems);
    };
    let lattice = family.lattice();
    let points: Vec<Exact> = plan
        .power_at
        .iter()
        .filter(|point| {
            let at = Value::Finite((*point).clone());
            sets.space.closure().contains(&at)
                && lattice
                    .as_ref()
                    .is_none_or(|lattice| lattice.index(&at).is_some())
        })
        .cloned()
        .collect();
    Ok(Problem {
        shape: seen,
        stages,
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
        tries: tries(test),
        points_left_out: plan.power_at.len() - points.len(),
        points,
        accept_when: plan.decision.accept_when.value,
        rectified_lot: test
            .rectification_lot_size
            .as_ref()
            .and_then(|size| size.value.to_u64()),
        amount_span,
        family: family.into(),
    })
}

fn last_stage_span(test: &Test) -> Span {
    let sequential = test.sequential.as_ref().map(|sequential| sequential.span);
    let stage = test.stages.last().map(|stage| stage.size.span);
    sequential.or(stage).unwrap_or(test.span)
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

/// Builds the family, with the parameter name that the plan's sets use. The language has seen to the lot size.
fn family(test: &Test, registration: &'static Registration) -> Option<Box<dyn Family>> {
    let named_in = |set: &SetExpression| {
        registration
            .parameters
            .iter()
            .find(|name| mentions(set, name))
    };
    let parameter = named_in(&test.parameter_space.value)
        .or_else(|| named_in(&test.null_subset.value))
        .or(registration.parameters.first())?;
    let lot_size = test.lot_size.as_ref().and_then(|size| size.value.to_u64());
    Some((registration.build)(&Settings {
        parameter,
        lot_size: lot_size.unwrap_or(0),
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

/// The amount of inspection and its place. The language has seen to its kind and its range.
fn amount(
    test: &Test,
    family: &dyn Family,
    problems: &mut Vec<Diagnostic>,
) -> Option<(AmountRequest, Span)> {
    let declared = test
        .stop_at_nonconforming
        .as_ref()
        .or(test.sample_size.as_ref())?;
    let request = match &declared.value {
        SampleSize::Given(value) => {
            let most = family.most();
            if *value > most {
                problems.push(
                    Diagnostic::error(
                        "sample-larger-than-lot",
                        declared.span,
                        format!("a sample of {value} cannot be drawn from a lot of {most}"),
                    )
                    .with_help(format!("use at most {most} units")),
                );
                return None;
            }
            AmountRequest::Given(value.clone())
        }
        SampleSize::Smallest => AmountRequest::Smallest {
            step: test
                .step
                .as_ref()
                .map_or_else(Exact::one, |step| step.value.clone()),
        },
    };
    Some((request, declared.span))
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
    let rising = family.trend() == Trend::Rising;
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

/// One try and the retests allowed; the language has seen to their number.
fn tries(test: &Test) -> u32 {
    let retests = test
        .retest_times
        .as_ref()
        .and_then(|times| times.value.to_u64());
    1 + retests.unwrap_or(0).min(100) as u32
}

fn default_tails(shape: &Shape) -> Tails {
    match shape {
        Shape::Amid { low, high } if low != high => Tails::Joint,
        _ => Tails::Equal,
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

/// Sorting needs a lot that holds the sample, units judged without error, and a fraction nonconforming.
fn rectification(
    test: &Test,
    family: &dyn Family,
    observation: &Observation,
    problems: &mut Vec<Diagnostic>,
) {
    let Some(lot) = &test.rectification_lot_size else {
        return;
    };
    if test.retest_times.is_some() {
        problems.push(
            Diagnostic::error(
                "not-yet-derived",
                lot.span,
                "sorting of lots that may be tried again is not derived yet",
            )
            .with_help("leave out `retest` or `rectification`; a further try is a further stage"),
        );
    }
    let counts_units = family.registration().amount_kind == AmountKind::Units;
    if !counts_units || family.lattice().is_some() || *observation != Observation::Perfect {
        problems.push(
            Diagnostic::error(
                "not-yet-derived",
                lot.span,
                "sorting of lots is derived for `binomial` plans without inspection errors only",
            )
            .with_help("leave `rectification` out, or use `family: binomial`"),
        );
    }
    let sample = test.sample_size.as_ref().map(|size| &size.value);
    if let Some(SampleSize::Given(sample)) = sample
        && *sample > lot.value
    {
        problems.push(
            Diagnostic::error(
                "sample-larger-than-lot",
                lot.span,
                format!(
                    "a sample of {sample} cannot be drawn from a lot of {}",
                    lot.value
                ),
            )
            .with_help("correct the sample size or the lot size"),
        );
    }
}
